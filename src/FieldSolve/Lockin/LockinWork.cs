using System.Collections.Concurrent;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;

namespace FieldSolve.Lockin;

/// <summary>The solves of an AC run: wirings side by side, each with its own state, so the results do not depend on the number of threads.</summary>
internal sealed class LockinWork
{
    private const double HoldsTo = 0.01;

    private readonly SheetDevice device;
    private readonly LockinOptions options;
    private readonly MeshPair shared;
    private readonly ReadingPlan[] plans;
    private readonly LabLaw law;
    private readonly double[] currents;
    private readonly double?[] frequencies;
    private readonly CycleAnswer?[,,] answers;   // wiring, current, frequency
    private readonly CycleMeasure?[,] measures;
    private readonly CycleFrame[]?[] frames;
    private readonly NewtonOutcome[,] outcomes;
    private readonly double[,] residuals;
    private readonly ConcurrentDictionary<string, string> refusals = new(StringComparer.Ordinal);
    private int done;

    public LockinWork(SheetDevice device, LockinOptions options, MeshPair meshes, ReadingPlan[] plans, LabLaw law)
    {
        (this.device, this.options, shared, this.plans, this.law) = (device, options, meshes, plans, law);
        currents = [.. device.Drive!.Currents];
        frequencies = device.Drive.Frequencies.Count == 0 ? [null] : [.. device.Drive.Frequencies.Select(f => (double?)f)];
        answers = new CycleAnswer?[plans.Length, currents.Length, frequencies.Length];
        measures = new CycleMeasure?[plans.Length, currents.Length];
        frames = new CycleFrame[]?[plans.Length];
        outcomes = new NewtonOutcome[plans.Length, currents.Length];
        residuals = new double[plans.Length, currents.Length];
    }

    public IReadOnlyDictionary<string, string> Refusals => refusals;

    public IReadOnlyList<CycleFrame> Frames => [.. frames.Where(f => f is not null).SelectMany(f => f!)];

    public NewtonOutcome Total => outcomes.Cast<NewtonOutcome>().Aggregate(default(NewtonOutcome), (sum, o) => sum.Then(o));

    public double LargestResidual => residuals.Cast<double>().Max();

    private bool HasGate => device.GateCapacitance > 0;

    /// <summary>Solves everything; true when cancelled.</summary>
    public bool Run(IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        try
        {
            Dictionary<int, Charged> perDrain = HasGate ? Charge(cancel) : [];
            var peaks = new PeakFinder(shared.Fine.Equations);
            bool odd = !device.Law.IsLinear && OddLaw.Is(law);
            Parallel.ForEach(
                Partitioner.Create(Enumerable.Range(0, plans.Length), EnumerablePartitionerOptions.NoBuffering),
                new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount },
                w => Follow(w, perDrain.GetValueOrDefault(plans[w].Wiring.Drain), peaks, odd, progress, cancel));
        }
        catch (OperationCanceledException)
        {
            return true;
        }
        catch (AggregateException e) when (e.InnerExceptions.All(x => x is OperationCanceledException))
        {
            return true;
        }

        return false;
    }

    /// <summary>What is finished, judged; in the order of wirings, currents, frequencies.</summary>
    public IReadOnlyList<LockinPoint> Points()
    {
        var list = new List<LockinPoint>();
        for (int w = 0; w < plans.Length; w++)
        {
            for (int i = 0; i < currents.Length; i++)
            {
                for (int f = 0; f < frequencies.Length; f++)
                {
                    if (answers[w, i, f] is { } answer)
                    {
                        list.Add(LockinJudge.Of(
                            device, answer, LockinJudge.AlongScale(device, currents[i], Enumerable.Range(0, plans.Length).Select(v => answers[v, i, f]).OfType<CycleAnswer>())));
                    }
                }
            }
        }

        return list;
    }

    /// <summary>Where the gate's charge moves a reading by 1 % of itself, for readings that stand clear of their error.</summary>
    public IReadOnlyList<FrequencyLimit> Limits()
    {
        var list = new List<FrequencyLimit>();
        for (int w = 0; w < plans.Length && HasGate; w++)
        {
            for (int i = 0; i < currents.Length; i++)
            {
                if (measures[w, i] is not { } m || currents[i] == 0)
                {
                    continue;
                }

                for (int k = 0; k < plans[w].Count; k++)
                {
                    for (int h = 0; h <= PhaseNodes.HighestHarmonic; h++)
                    {
                        (double s, double c) = m.Shift[k][h];
                        double size = Math.Abs(m.Amplitude[k][h]), shift = Math.Sqrt((s * s) + (c * c));
                        double limit = HoldsTo * size / (2 * Math.PI * shift);
                        if (size > 10 * m.Error[k][h] && shift > 0 && double.IsFinite(limit))
                        {
                            list.Add(new(plans[w].Wiring.Name, currents[i], plans[w].Pairs[k].Name, h, limit));
                        }
                    }
                }
            }
        }

        return list;
    }

    // With charge on the sheet the current out of the drain is no longer the current into the source, so the drain itself must be the zero of
    // the potential: one pair of meshes for each drain, of the same triangles.
    private Dictionary<int, Charged> Charge(CancellationToken cancel)
    {
        var perDrain = new Dictionary<int, Charged>();
        foreach (int drain in plans.Select(p => p.Wiring.Drain).Distinct())
        {
            MeshPair meshes = drain == 0 ? shared : MeshPair.Build(device, shared.Coarse.Space.Mesh, law, cancel, drain);
            perDrain[drain] = new(
                meshes, new ChargedSheet(meshes.Coarse, device.GateCapacitance!.Value), new ChargedSheet(meshes.Fine, device.GateCapacitance.Value));
        }

        return perDrain;
    }

    private void Follow(int w, Charged? charged, PeakFinder peaks, bool odd, IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        ReadingPlan plan = plans[w];
        MeshPair meshes = charged?.Meshes ?? shared;
        CycleSolver AtRest() => new(
            () => new PhasePath(meshes, plan, ReferenceEquals(meshes, shared) ? peaks : new PeakFinder(meshes.Fine.Equations)), device.Law.IsLinear, odd,
            device.Drive!.Offset, device.Mesh);
        CycleSolver cycles = AtRest();
        int largest = Array.IndexOf(currents, currents.Max());
        double failedAt = double.PositiveInfinity;
        AdjointSet? adjoints = null;
        CycleStates? reference = null;

        // The largest cycle first: its adjoints serve the smaller ones. Should it fail, each has its own.
        foreach (int i in Enumerable.Range(0, currents.Length).OrderBy(i => i == largest ? -1 : currents[i]))
        {
            cancel.ThrowIfCancellationRequested();
            bool wantsFrames = options.Frames && i == largest;
            CycleStates? states = currents[i] > failedAt ? null : cycles.Solve(currents[i], wantsFrames, reference, cancel);
            if (states is null && i != largest && currents[i] <= failedAt)
            {
                // What was learnt from other cycles may mislead, close to the last current that the sheet carries.
                cycles = AtRest();
                states = cycles.Solve(currents[i], wantsFrames, null, cancel);
            }

            if (states is null)
            {
                failedAt = Math.Min(failedAt, currents[i]);
                if (cycles.Refusal is { } why)
                {
                    refusals.TryAdd(plan.Wiring.Name, why);
                }

                cycles = AtRest();

                for (int f = 0; f < frequencies.Length; f++)
                {
                    answers[w, i, f] = CycleAnswer.None(plan, currents[i], frequencies[f]);
                }
            }
            else
            {
                adjoints = i == largest || failedAt < double.PositiveInfinity || adjoints is null
                    ? new AdjointSet(meshes, plan, states, charged?.Fine.Charge, cancel)
                    : adjoints;
                reference ??= i == largest ? states : null;
                CycleMeasure measure = CycleMeasure.Of(meshes, plan, states, adjoints);
                (outcomes[w, i], residuals[w, i]) = (states.Outcome, states.LargestResidual);
                ChargedCycle? last = null;
                for (int f = 0; f < frequencies.Length; f++)
                {
                    last = charged is null ? null : ChargedCycle.Of(meshes, charged.Coarse, charged.Fine, plan, measure, frequencies[f]!.Value,
                        device.Mesh, cancel);
                    answers[w, i, f] = charged is not null && last is null
                        ? CycleAnswer.None(plan, currents[i], frequencies[f])
                        : Answer(plan, measure, frequencies[f], last);
                }

                if (wantsFrames)
                {
                    frames[w] = FramesOf(meshes, plan, states, last?.Fine);
                }

                // The states themselves are large and no longer needed.
                measures[w, i] = measure.WithoutStates();
            }

            progress?.Report(new("solving", Interlocked.Increment(ref done), plans.Length * currents.Length));
        }
    }

    private static CycleAnswer Answer(ReadingPlan plan, CycleMeasure measure, double? frequency, ChargedCycle? charged)
    {
        double[][] sine = new double[plan.Count][], cosine = new double[plan.Count][], error = new double[plan.Count][];
        for (int k = 0; k < plan.Count; k++)
        {
            (sine[k], cosine[k], error[k]) = (new double[measure.Amplitude[k].Length], new double[measure.Amplitude[k].Length], [.. measure.Error[k]]);
            for (int h = 0; h < sine[k].Length; h++)
            {
                (int s, int c) = PhaseNodes.Direction(h);
                (double shiftS, double shiftC) = charged is not null && h <= PhaseNodes.HighestHarmonic ? charged.Shift[k][h] : default;
                (sine[k][h], cosine[k][h]) = ((s * measure.Amplitude[k][h]) + shiftS, (c * measure.Amplitude[k][h]) + shiftC);
                if (charged is not null && h <= PhaseNodes.HighestHarmonic)
                {
                    error[k][h] += charged.Error[k][h];
                }
            }
        }

        CycleStates cycle = measure.Cycle;
        return new(
            plan, cycle.CurrentRms, frequency, sine, cosine, error, measure.Guard, cycle.Base.MaxBy(s => s.Exit?.Field ?? 0)?.Exit,
            (cycle.Base.Max(s => s.Peak.SheetCurrent), cycle.Base.Max(s => s.Peak.Power)), cycle.Outcome.Steps + (charged?.Sweeps ?? 0));
    }

    private CycleFrame[] FramesOf(MeshPair meshes, ReadingPlan plan, CycleStates cycle, double[][]? periodic)
    {
        PhaseNodes nodes = PhaseNodes.Doubled;
        double[][]? dynamic = periodic is null ? null : ChargedCycle.Resampled(periodic);
        var maps = new FieldMap?[nodes.Intervals + 1];
        var list = new CycleFrame[nodes.Phases];
        int index = Array.IndexOf(currents, cycle.CurrentRms);
        for (int m = 0; m < list.Length; m++)
        {
            int j = nodes.NodeAt(m);
            double current = cycle.Offset + (cycle.Amplitude * nodes.Sine[j]);
            FieldMap map = dynamic is null
                ? maps[j] ??= Map(cycle.States[j].Fine)
                : Map(dynamic[m]);
            list[m] = new(plan.Wiring.Name, cycle.CurrentRms, dynamic is null ? null : frequencies[^1], 360.0 * m / list.Length, map);
            FieldMap Map(double[] u) => FieldMapBuilder.Build(
                meshes.Fine.Space, law, u, plan.Wiring.Drain, plan.Wiring.Name, current, index);
        }

        return list;
    }

    private sealed record Charged(MeshPair Meshes, ChargedSheet Coarse, ChargedSheet Fine);
}
