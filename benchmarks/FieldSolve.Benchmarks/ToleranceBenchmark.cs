using BenchmarkDotNet.Attributes;
using FieldSolve.Device;
using FieldSolve.Runs;
using FieldSolve.Sensitivity;
using FieldSolve.Solving;

namespace FieldSolve.Benchmarks;

/// <summary>
/// What do sensitivities and samples cost beside one non-linear solve? disc-12, its first wiring, largest current with both signs, default error, its 33
/// causes: 12 positions, 12 widths, axis, a, b, six d's. The first three on one thread.
/// </summary>
[MemoryDiagnoser]
public class ToleranceBenchmark
{
    private const int Batch = 64;
    private ToleranceModel? model;
    private SampleSolver? solver;
    private SampleDraw? draw;

    [GlobalSetup]
    public void Prepare()
    {
        SheetDevice device = Sample.Device();
        model = ToleranceModel.Build(device with { Wirings = [device.Wirings[0]] }, _ => { }, new StageClock(), CancellationToken.None);
        solver = new SampleSolver(model);
        draw = new SampleDraw(model.Causes, 1);
        Console.WriteLine(string.Create(
            System.Globalization.CultureInfo.InvariantCulture,
            $"// {model.Causes.Count} causes; {model.Meshes.Fine.Space.Size} unknowns, samples on {model.Meshes.Coarse.Space.Size}; {Environment.ProcessorCount} processors"));
    }

    [Benchmark(Baseline = true, Description = "non-linear solve from rest, +I and -I")]
    public double[] Solve()
    {
        FieldLevel level = model!.Meshes.Fine;
        double[] u = new double[level.Equations.Length];
        Wiring w = model.States[0].Plan.Wiring;
        foreach (double current in new[] { model.Current, -model.Current })
        {
            new DrivePath(level, w.Source, w.Drain).Solve(current, u, null, CancellationToken.None);
        }

        return u;
    }

    [Benchmark(Description = "derivatives of all readings with respect to all causes")]
    public double[] Sensitivities()
    {
        MeshPair meshes = model!.Meshes;
        var motion = new NodeMotion(new MeshMover(meshes.Coarse.Space.Mesh), meshes.Fine.Space);
        MotionField?[] fields = CauseSlope.Fields(model.Device, model.Causes, motion);
        DesignState s = model.States[0];
        double[] all = [];
        for (int sign = 0; sign < 2; sign++)
        {
            StateSensitivity state = StateSensitivity.Of(meshes.Fine, fine[sign] ??= Fine(sign), s.Plan.Vectors(meshes.Fine), CancellationToken.None);
            double[,] gradient = CauseSlope.Gradient(state, model.Causes, fields);
            all = [.. all, .. gradient.Cast<double>()];
        }

        return all;
    }

    [Benchmark(OperationsPerInvoke = Batch, Description = "one sample, of 64 on all processors")]
    public int Samples()
    {
        int done = 0;
        Parallel.For(0, Batch, new ParallelOptions { MaxDegreeOfParallelism = Environment.ProcessorCount }, i =>
        {
            if (solver!.Solve(i, draw!.Of(i), CancellationToken.None).Status == SampleStatus.Ok)
            {
                Interlocked.Increment(ref done);
            }
        });
        return done;
    }

    private readonly double[]?[] fine = new double[]?[2];

    private double[] Fine(int sign)
    {
        FieldLevel level = model!.Meshes.Fine;
        double[] u = new double[level.Equations.Length];
        Wiring w = model.States[0].Plan.Wiring;
        new DrivePath(level, w.Source, w.Drain).Solve(sign == 0 ? model.Current : -model.Current, u, null, CancellationToken.None);
        return u;
    }
}
