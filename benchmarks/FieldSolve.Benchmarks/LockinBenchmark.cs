using BenchmarkDotNet.Attributes;
using FieldSolve.Device;
using FieldSolve.Lockin;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Benchmarks;

/// <summary>
/// What does an AC drive cost? disc-12 with five amplitudes, three wirings, default error; quasi-static, and over a gate at a frequency
/// that needs the periodic state. The drive of the same device stands beside it.
/// </summary>
[MemoryDiagnoser]
public class LockinBenchmark
{
    private const double LargestRms = 50e-6;
    private readonly SheetDevice drive = Sample.Device();
    private SheetDevice quiet = null!;
    private SheetDevice gated = null!;

    [GlobalSetup]
    public void Prepare()
    {
        quiet = drive with { Drive = new DriveSpec(LargestRms / 5, LargestRms, 5, false, [], 0) };

        // Two amplitudes at 3 GHz: the source's first harmonic then lags by about a degree.
        gated = drive with { GateCapacitance = 1.2e-4, Drive = new DriveSpec(LargestRms / 2, LargestRms, 2, false, [3e9], 0) };
        LockinResult result = QuasiStatic();
        foreach (StageTime stage in result.Stages)
        {
            Console.WriteLine(string.Create(System.Globalization.CultureInfo.InvariantCulture, $"// stage {stage.Name}: {stage.Seconds:F2} s"));
        }

        Console.WriteLine(string.Create(
            System.Globalization.CultureInfo.InvariantCulture, $"// {result.Figures.Unknowns} unknowns, {result.Points.Count} points, all ok: {result.AllOk}"));
    }

    [Benchmark(Baseline = true, Description = "drive, 11 currents, both signs")]
    public DriveResult Drive() => DriveRun.Execute(drive, new DriveOptions(), null, CancellationToken.None);

    [Benchmark(Description = "quasi-static, 5 amplitudes")]
    public LockinResult QuasiStatic() => LockinRun.Execute(quiet, new LockinOptions(), null, CancellationToken.None);

    [Benchmark(Description = "over a gate, 2 amplitudes, 1 frequency")]
    public LockinResult OverAGate() => LockinRun.Execute(gated, new LockinOptions(), null, CancellationToken.None);
}
