using System.Collections.Concurrent;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Readings;
using FieldSolve.Solving;

namespace FieldSolve.Runs;

/// <summary>The solves of a drive: wirings and signs run side by side, each with its own state, so the results do not depend on the number of threads.</summary>
internal sealed class DriveWork
{
    private readonly SheetDevice device;
    private readonly DriveOptions options;
    private readonly MeshPair meshes;
    private readonly ReadingPlan[] plans;
    private readonly IReadOnlyList<double> currents;
    private readonly bool bothSigns;
    private readonly bool linear;
    private readonly StateResult?[,,] states;  // wiring, current, sign
    private readonly FieldMap?[,] maps;
    private readonly PotentialFrame?[,] frames;
    private readonly ConcurrentDictionary<string, string> refusals = new(StringComparer.Ordinal);
    private int done;

    public DriveWork(SheetDevice device, DriveOptions options, MeshPair meshes, ReadingPlan[] plans)
    {
        this.device = device;
        this.options = options;
        this.meshes = meshes;
        this.plans = plans;
        currents = device.Drive!.Currents;
        bothSigns = device.Drive.BothSigns;
        linear = device.Law.IsLinear;
        states = new StateResult?[plans.Length, currents.Count, 2];
        maps = new FieldMap?[plans.Length, currents.Count];
        frames = new PotentialFrame?[plans.Length, currents.Count];
    }

    public IReadOnlyDictionary<string, string> Refusals => refusals;

    public IReadOnlyList<FieldMap> Maps => [.. maps.Cast<FieldMap?>().Where(m => m is not null).Select(m => m!)];

    public IReadOnlyList<PotentialFrame> Frames => [.. frames.Cast<PotentialFrame?>().Where(f => f is not null).Select(f => f!)];

    public NewtonOutcome Total
    {
        get
        {
            NewtonOutcome sum = default;
            foreach (StateResult? s in states)
            {
                sum = s is null ? sum : sum.Then(s.Outcome);
            }

            return sum;
        }
    }

    /// <summary>Work per wiring and current; of a linear law the sign that was solved.</summary>
    public IReadOnlyList<PointWork> Points
    {
        get
        {
            var points = new List<PointWork>();
            for (int w = 0; w < plans.Length; w++)
            {
                for (int at = 0; at < 2 * currents.Count; at++)
                {
                    if (states[w, at / 2, at % 2] is { } s)
                    {
                        double current = at % 2 == 0 ? currents[at / 2] : -currents[at / 2];
                        points.Add(new(plans[w].Wiring.Name, current, s.Outcome.Factorisations, s.Outcome.Solves));
                    }
                }
            }

            return points;
        }
    }

    public double LargestResidual => states.Cast<StateResult?>().Where(s => s?.Values is not null).Select(s => s!.Outcome.RelativeResidual)
        .DefaultIfEmpty().Max();

    /// <summary>Solves everything; true when cancelled.</summary>
    public bool Run(IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        int signs = bothSigns && !linear ? 2 : 1;
        var peaks = new PeakFinder(meshes.Fine.Equations);
        try
        {
            // One thread takes one task at a time; tasks are as long as a whole curve, so hand them out one by one.
            Parallel.ForEach(
                Partitioner.Create(Enumerable.Range(0, plans.Length * signs), EnumerablePartitionerOptions.NoBuffering),
                new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = SharedCores.Jobs(meshes.Fine.Space.Size) },
                job => Follow(job / signs, job % signs, signs, peaks, progress, cancel));
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

    /// <summary>The rows whose states are all there.</summary>
    public (List<CurveRow> Rows, List<CurveRow> Reversed) Rows(RowMaker maker)
    {
        var rows = new List<CurveRow>();
        var reversed = new List<CurveRow>();
        for (int w = 0; w < plans.Length; w++)
        {
            for (int k = 0; k < currents.Count; k++)
            {
                StateResult? plus = states[w, k, 0];
                StateResult? minus = bothSigns ? linear ? Negated(plus) : states[w, k, 1] : null;
                if (plus is null || (bothSigns && minus is null))
                {
                    continue;
                }

                double along = AlongScale(k), curve = options.OneCurve ? EvenScale(k) : 0;
                rows.Add(maker.Make(plans[w], currents[k], plus, minus, along, curve));
                if (minus is not null)
                {
                    reversed.Add(maker.Make(plans[w], -currents[k], minus, plus, along, curve));
                }
            }
        }

        return (rows, reversed);
    }

    private double EvenScale(int k) => RowMaker.EvenScale(Enumerable.Range(0, plans.Length).Select(w => (plans[w], states[w, k, 0], states[w, k, 1])));

    private double AlongScale(int k)
    {
        var readings = new List<(bool, double)>();
        for (int w = 0; w < plans.Length; w++)
        {
            if (states[w, k, 0]?.Values is { } values)
            {
                readings.AddRange(values.Select((v, p) => (plans[w].Pairs[p] == plans[w].Wiring.Along, v)));
            }
        }

        return VoltageScale.Of(device, currents[k], readings);
    }

    private void Follow(int w, int sign, int signs, PeakFinder peaks, IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        var task = new DriveTask(meshes, plans[w], peaks);
        double largest = MeshRefinement.Largest(currents);
        task.Know(sign == 0 ? largest : -largest);
        double failedAt = double.PositiveInfinity;
        for (int k = 0; k < currents.Count; k++)
        {
            double current = sign == 0 ? currents[k] : -currents[k];
            if (Math.Abs(current) > failedAt)
            {
                states[w, k, sign] = new(default, null, null, null, default);
                continue;
            }

            int at = k;
            Action<double[]>? keep = sign == 0 ? u => Keep(w, at, current, u) : null;
            StateResult result = task.Solve(current, keep, cancel);
            states[w, k, sign] = result;
            if (result.Values is null)
            {
                failedAt = Math.Abs(current);
                if (result.Outcome.Refusal is { } why)
                {
                    refusals.TryAdd(plans[w].Wiring.Name, why);
                }
            }

            progress?.Report(new("solving", Interlocked.Increment(ref done) / signs, plans.Length * currents.Count));
        }
    }

    private void Keep(int w, int k, double current, double[] u)
    {
        FieldSpace space = meshes.Fine.Space;
        Wiring wiring = plans[w].Wiring;
        if (WantsMap(k))
        {
            maps[w, k] = FieldMapBuilder.Build(space, meshes.Fine.Equations.Law, u, wiring.Drain, wiring.Name, current, k);
        }

        if (WantsFrame(k))
        {
            frames[w, k] = PotentialFrame.Of(space, u, wiring.Drain, wiring.Name, current, k);
        }
    }

    // Every current while that fits, else as many as fit, evenly spread and with the last one.
    private bool WantsFrame(int k)
    {
        int each = Math.Max(1, PotentialFrame.MostNodalValues / (plans.Length * meshes.Fine.Space.NodeCount)), stride = (currents.Count + each - 1) / each;
        return (options.ForPictures || options.Frames) && (currents.Count - 1 - k) % stride == 0;
    }

    private bool WantsMap(int k)
    {
        int last = currents.Count - 1;
        return options.Maps == MapChoice.All || (k == last && (options.Maps == MapChoice.Last || options.ForPictures))
            || (options.ForPictures && (k == (last + 2) / 3 || k == ((2 * last) + 2) / 3));
    }

    /// <summary>The state of a linear sheet at the opposite current.</summary>
    internal static StateResult? Negated(StateResult? state) => state is null ? null : state with
    {
        Outcome = default,
        Values = state.Values?.Select(v => -v).ToArray(),
        Difference = state.Difference?.Select(v => -v).ToArray(),
    };
}
