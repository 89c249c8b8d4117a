using BenchmarkDotNet.Attributes;
using FieldSolve.Device;
using FieldSolve.Solving;

namespace FieldSolve.Benchmarks;

/// <summary>What do a residual and a Jacobian of the quadratic law cost?</summary>
[MemoryDiagnoser]
public class AssemblyBenchmark
{
    private FieldLevel level = null!;
    private double[] u = [];
    private double[] residual = [];
    private double[] values = [];

    [Params(5_000, 50_000)]
    public int Triangles { get; set; }

    [GlobalSetup]
    public void Prepare()
    {
        SheetDevice device = Sample.Device();
        level = FieldLevel.Build(device, Sample.Mesh(device, Triangles), Sample.Law(device), CancellationToken.None);
        Console.WriteLine(string.Create(System.Globalization.CultureInfo.InvariantCulture, $"// {level.Space.Size} unknowns"));
        u = [.. level.UnitSolution(6, 0).Select(v => 1e-4 * v)];
        residual = new double[level.Equations.Length];
        values = new double[level.Space.Pattern.Count + 1];
    }

    [Benchmark(Description = "residual")]
    public double Residual()
    {
        level.Equations.Residual(u, 6, 0, 1e-4, residual);
        return residual[0];
    }

    [Benchmark(Description = "Jacobian")]
    public double Jacobian()
    {
        level.Equations.Jacobian(u, values);
        return values[0];
    }
}
