using BenchmarkDotNet.Attributes;
using FieldSolve.Device;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Benchmarks;

/// <summary>What do ordering, factor and solve of a Jacobian cost, at about 10,000 and 100,000 unknowns?</summary>
[MemoryDiagnoser]
public class FactorBenchmark
{
    private FieldLevel level = null!;
    private double[] values = [];
    private double[] b = [];
    private double[] x = [];
    private (double[] X, double[] Y) places;
    private SparseLu factor = null!;

    [Params(5_000, 50_000)]
    public int Triangles { get; set; }

    [GlobalSetup]
    public void Prepare()
    {
        SheetDevice device = Sample.Device();
        level = FieldLevel.Build(device, Sample.Mesh(device, Triangles), Sample.Law(device), CancellationToken.None);
        Console.WriteLine(string.Create(
            System.Globalization.CultureInfo.InvariantCulture,
            $"// {level.Space.Size} unknowns, {level.Space.Pattern.Count} non-zeros, {level.Analysis.FactorNonZeros} in the factors"));
        values = new double[level.Space.Pattern.Count + 1];
        level.Equations.Jacobian(new double[level.Equations.Length], values);
        b = new double[level.Space.Size];
        b[level.Space.ContactUnknown[6]] = 1;
        x = new double[b.Length];
        places = level.Space.Places();
        factor = new SparseLu(level.Analysis);
    }

    [Benchmark(Description = "ordering and analysis")]
    public SparseAnalysis Analyse() => SparseAnalysis.Analyse(level.Space.Pattern, places.X, places.Y, CancellationToken.None);

    [Benchmark(Description = "factor")]
    public void Factor() => factor.Factor(values.AsSpan(0, level.Space.Pattern.Count));

    [Benchmark(Description = "solve")]
    public double Solve()
    {
        level.AtZero.Solve(b, x);
        return x[0];
    }
}
