using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Measured;
using FieldSolve.Meshing;

namespace FieldSolve.Runs;

/// <summary>
/// A pair of meshes at some values of the parameters: what the coarse one lacks of every datum, and what may be wrong with that. Both are known at the largest
/// current of each circuit with both signs and in the limit of small drive; in between the lack of V/I is taken as a quadratic function of the current.
/// </summary>
internal sealed class FitReference
{
    private readonly IReadOnlyList<GoalMeasure> goals;
    private readonly FitProblem problem;
    private readonly IReadOnlyDictionary<MeasuredVoltage, (double Shift, double Error)>? memory;

    private FitReference(
        FitProblem problem, MeshPair meshes, IReadOnlyList<GoalMeasure> goals, IReadOnlyDictionary<MeasuredVoltage, (double Shift, double Error)>? memory)
    {
        this.problem = problem;
        this.goals = goals;
        this.memory = memory;
        Meshes = meshes;
        Missing = Of(problem);
        Bars = [.. problem.Data.Select((d, i) => Bar(d, problem.Reading[i]) + (memory?.GetValueOrDefault(d).Error ?? 0))];
    }

    public MeshPair Meshes { get; }

    /// <summary>Per datum: what is to be added to the coarse mesh's value, V.</summary>
    public double[] Missing { get; }

    /// <summary>Per datum: estimated numerical error of the sum, V; the interpolation between currents not counted.</summary>
    public double[] Bars { get; }

    /// <summary>Largest numerical error over the standard deviation of the datum.</summary>
    public double LargestShare => Bars.Select((b, i) => b / problem.Data[i].Sigma).DefaultIfEmpty(0).Max();

    /// <summary>Meshes until the numerical errors are small beside the data's standard deviations.</summary>
    public static FitReference Refine(FitProblem problem, double[] p, double share, Action<string> tell, StageClock clock, CancellationToken cancel)
    {
        SheetDevice there = problem.DeviceAt(p), device = Prepared(problem, there, share);
        MeshRefinement refinement = MeshRefinement.Run(
            device, new LabLaw(device.Law, device.Axis), problem.Plans, problem.LargestCurrent, !device.Law.IsLinear, tell, clock, cancel);
        return new(problem, refinement.Meshes, refinement.Goals, problem.Memory?.Of(there, refinement.Meshes.Coarse.Space.Mesh, problem.Measured, cancel));
    }

    /// <summary>The same triangles, moved, measured anew.</summary>
    public FitReference Again(double[] p, TriangleMesh moved, double share, CancellationToken cancel)
    {
        SheetDevice there = problem.DeviceAt(p), device = Prepared(problem, there, share);
        MeshPair meshes = MeshPair.Build(device, moved, new LabLaw(device.Law, device.Axis), cancel);
        var found = new IReadOnlyList<GoalMeasure>[problem.Plans.Length];
        Parallel.For(0, found.Length, new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount }, c => found[c] =
            LevelMeasure.Of(meshes, problem.Plans[c], problem.LargestCurrent, [problem.LargestCurrent], !device.Law.IsLinear, cancel));
        return new(problem, meshes, [.. found.SelectMany(g => g).Select(g => g.TriedAs(goals))], problem.Memory?.Of(there, moved, problem.Measured, cancel));
    }

    /// <summary>The same for another list of states.</summary>
    public FitReference For(FitProblem other) => new(other, Meshes, [.. goals.Select(g => g with { Plan = other.Plans[Array.IndexOf(problem.Plans, g.Plan)] })], memory);

    /// <summary>What is missing from the data of another problem on the same plans.</summary>
    public double[] Of(FitProblem other) => [.. other.Data.Select((d, i) => (memory?.GetValueOrDefault(d).Shift ?? 0) + other.Terms[i].Sum(t =>
        t.Weight * MissingOf(other.States[t.State].Circuit, other.Reading[i], other.States[t.State].Current)))];

    // Errors are asked for relative to the largest along voltage, so the data's own voltages say how small they must be.
    private static SheetDevice Prepared(FitProblem problem, SheetDevice device, double share)
    {
        double most = problem.LargestCurrent, along = 0, any = 0, even = 0;
        double least = double.PositiveInfinity, leastEven = double.PositiveInfinity;
        for (int i = 0; i < problem.Data.Count; i++)
        {
            MeasuredVoltage d = problem.Data[i];
            double peak = FitProblem.Peak(d);
            if (peak == 0)
            {
                continue;
            }

            if (IsEven(d))
            {
                even = Math.Max(even, Math.Abs(d.Value) * most * most / (peak * peak));
                leastEven = Math.Min(leastEven, d.Sigma * most * most / (peak * peak));
                continue;
            }

            double rms = d.Harmonic is null ? 1 : Math.Sqrt(2), there = Math.Abs(d.Value) * rms * most / peak;
            ReadingPlan plan = problem.Plans[d.Circuit];
            any = Math.Max(any, there);
            along = plan.Pairs[problem.Reading[i]] == plan.Wiring.Along ? Math.Max(along, there) : along;
            least = Math.Min(least, d.Sigma * rms * most / peak);
        }

        along = along > 0 ? along : any;
        double error = along > 0 && double.IsFinite(least) ? share * least / along : 1e-3;
        double evenError = even > 0 ? share * leastEven / even : 0.5;
        return device with
        {
            Drive = new DriveSpec(most, most, 1, true, [], 0),
            Mesh = device.Mesh with { Error = Math.Clamp(error, 1e-7, 1e-2), EvenError = Math.Clamp(evenError, 1e-5, 0.5) },
        };
    }

    private static bool IsEven(MeasuredVoltage d) => d.Harmonic is { } n && n % 2 == 0;

    private double MissingOf(int circuit, int reading, double current)
    {
        if (Find(circuit, reading, false) is not { } goal)
        {
            return 0;
        }

        double weak = goal.WeakDifference + goal.WeakError!.Correction, whole = (goal.Difference + goal.Error.Correction) / goal.Current;
        double even = Find(circuit, reading, true) is { } e ? (e.Difference + e.Error.Correction) / goal.Current : 0;
        double x = current / goal.Current;
        return current * (weak + (even * x) + ((whole - even - weak) * x * x));
    }

    private double Bar(MeasuredVoltage d, int reading)
    {
        double peak = FitProblem.Peak(d);
        if (peak == 0 || Find(d.Circuit, reading, false) is not { } goal)
        {
            return 0;
        }

        double x = Math.Abs(peak / goal.Current);
        if (IsEven(d))
        {
            return Find(d.Circuit, reading, true) is { } even ? x * x * even.Error.Bar : 0;
        }

        double bar = Math.Max(goal.WeakError!.Bar * peak, goal.Error.Bar * x);
        return d.Harmonic is null ? bar : d.Harmonic == 1 ? bar / Math.Sqrt(2) : bar * x * x / Math.Sqrt(2);
    }

    private GoalMeasure? Find(int circuit, int reading, bool even) =>
        goals.FirstOrDefault(g => g.Plan == problem.Plans[circuit] && g.Pair == reading && g.IsEven == even);
}
