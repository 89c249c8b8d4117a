using System.Globalization;
using System.Text;
using BenchmarkDotNet.Attributes;
using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Runs;

namespace FieldSolve.Benchmarks;

/// <summary>
/// What do eight numbers from 480 voltages over twelve wirings of disc-12 cost, and what do their derivatives cost beside the solves that differences would take?
/// </summary>
public class FitBenchmark
{
    private SheetDevice device = null!;
    private MeasuredVoltages data = null!;
    private FitProblem problem = null!;
    private FitModel model = null!;
    private double[] there = [];

    [GlobalSetup]
    public void Prepare()
    {
        device = DeviceFile.Read(Path.Combine(Path.GetDirectoryName(Sample.Path)!, "fit", "disc-12.toml")).Device!;
        double[] truth = [4.3e-3, 1.12e-3, 5e-5, 23.5 * Math.PI / 180, 1.3e-10, 4.4e-10, -0.4e-10, 1.6e-10];
        string[] keys = ["a", "b", "hall", "axis", "d11", "d12", "d16", "d26"];
        var rows = new StringBuilder("wiring,pair,current_A,value_V,sigma_V\n");
        foreach (string wiring in device.Wirings.Select(w => w.Name))
        {
            foreach (string pair in new[] { "along", "across" })
            {
                foreach (int k in Enumerable.Range(-10, 21).Where(k => k != 0))
                {
                    rows.Append(CultureInfo.InvariantCulture, $"{wiring},{pair},{k * 2e-5:R},0.05,1e-5\n");
                }
            }
        }

        // Values of the truth on a mesh of the start, with a fixed pattern of noise: what is timed does not depend on how they came about.
        MeasuredVoltages layout = VoltageTable.Parse(rows.ToString(), "layout.csv", device, null).Data!;
        problem = new FitProblem(device, device.Fit!.Parameters, layout, layout.Data);
        FitReference reference = FitReference.Refine(problem, problem.Start, 0.2, _ => { }, new StageClock(), default);
        model = new FitModel(problem, reference.Meshes.Coarse, reference.Missing);
        double[] values = model.Values([.. device.Fit.Parameters.Select(p => truth[Array.IndexOf(keys, p.Key)])], default)!;
        data = layout with { Data = [.. layout.Data.Select((d, i) => d with { Value = values[i] + (1e-5 * Math.Sin(37.0 * i)) })] };
        there = problem.Start;
        _ = model.Values(there, default);
        _ = model.Jacobian(there, default);
        Console.WriteLine(string.Create(CultureInfo.InvariantCulture, $"// {reference.Meshes.Coarse.Space.Size} unknowns, {problem.States.Count} states"));
    }

    [Benchmark(Description = "the fit")]
    public FitResult Fit() => FitRun.Execute(device, data, new FitOptions(), null, default);

    // One number changed by a thousandth: what a difference would cost for each of the eight.
    [Benchmark(Description = "all states for one changed number", Baseline = true)]
    public double[]? Values()
    {
        there = [there[0] > problem.Start[0] ? problem.Start[0] : 1.001 * problem.Start[0], .. there[1..]];
        return model.Values(there, default) ?? throw new InvalidOperationException("no solution");
    }

    [Benchmark(Description = "derivatives of all data by eight numbers")]
    public double[,] Jacobian() => model.Jacobian(there, default);
}
