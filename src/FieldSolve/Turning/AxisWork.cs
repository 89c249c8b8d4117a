using System.Collections.Concurrent;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;

namespace FieldSolve.Turning;

/// <summary>
/// The solves of a turned crystal axis. Each axis has its own factors at zero field; mesh, unknowns and ordering are shared. Axes run
/// side by side and drop their factors when they are done. A turn by 180 degrees makes K(E) into -K(-E), so the sheet answers a current as it answered the
/// reversed one before, with the opposite sign: of an even number of steps only the first half is solved.
/// </summary>
internal sealed class AxisWork
{
    private readonly SheetDevice device;
    private readonly MeshPair meshes;
    private readonly IReadOnlyList<TurnPlace> places;
    private readonly IReadOnlyCollection<int> mapped;
    private readonly ReadingPlan[] plans;
    private readonly IReadOnlyList<double> currents;
    private readonly StateResult?[,,] states;    // direction, current, sign
    private readonly IReadOnlyList<GoalMeasure>?[] goals;
    private readonly FieldMap?[] maps;
    private readonly HashSet<int> framed;
    private readonly PotentialFrame?[] frames;
    private readonly string?[] refusals;
    private readonly int solved;
    private int done;

    public AxisWork(SheetDevice device, IReadOnlyList<TurnPlace> places, AxisMesh measured, IReadOnlyCollection<int> mapped, IEnumerable<int> framed)
    {
        this.framed = [.. framed];
        (this.device, meshes, this.places, this.mapped) = (device, measured.Meshes, places, mapped);
        solved = measured.Plans.Count;
        plans = [.. measured.Plans, .. places.Skip(solved).Select(p => new ReadingPlan(p.Wiring))];
        currents = device.Drive!.Currents;
        states = new StateResult?[places.Count, currents.Count, 2];
        goals = new IReadOnlyList<GoalMeasure>?[places.Count];
        maps = new FieldMap?[places.Count];
        frames = new PotentialFrame?[places.Count];
        refusals = new string?[places.Count];
        for (int p = 0; p < solved; p++)
        {
            goals[p] = [.. measured.Goals.Where(g => g.Plan == plans[p])];
        }
    }

    /// <summary>How many of the directions are solved for; the others follow from them.</summary>
    public int SolvedPlaces => solved;

    /// <summary>Why the law refused, by wiring: that of the first direction.</summary>
    public IReadOnlyDictionary<string, string> Refusals => refusals.FirstOrDefault(r => r is not null) is { } why
        ? new Dictionary<string, string> { [places[0].Wiring.Name] = why }
        : new Dictionary<string, string>();

    public FieldMap? MapOf(int place) => maps[place];

    public PotentialFrame? FrameOf(int place) => frames[place];

    /// <summary>What was solved.</summary>
    public IEnumerable<StateResult> States => Enumerable.Range(0, solved).SelectMany(p => Enumerable.Range(0, currents.Count)
        .SelectMany(k => new[] { states[p, k, 0], states[p, k, 1] })).OfType<StateResult>();

    /// <summary>Solves everything; true when cancelled.</summary>
    public bool Run(IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        bool cancelled = Solve(progress, cancel);
        for (int p = solved; p < places.Count; p++)
        {
            Reverse(p - solved, p);
        }

        return cancelled;
    }

    private bool Solve(IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        try
        {
            Parallel.ForEach(
                Partitioner.Create(Enumerable.Range(0, solved), EnumerablePartitionerOptions.NoBuffering),
                new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount },
                place => Follow(place, progress, cancel));
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

    /// <summary>The rows whose states are all there, with the place of each; those at the reversed currents apart.</summary>
    public (List<(int Place, CurveRow Row)> Rows, List<CurveRow> Reversed) Rows()
    {
        var maker = new RowMaker(device, [.. goals.Where(g => g is not null).SelectMany(g => g!)]);
        var rows = new List<(int, CurveRow)>();
        var reversed = new List<CurveRow>();
        bool both = device.Drive!.BothSigns;
        double[] along = [.. currents.Select((_, k) => AlongScale(k))];
        double[] even = [.. currents.Select((_, k) => RowMaker.EvenScale(Enumerable.Range(0, places.Count).Select(p => (plans[p], states[p, k, 0], states[p, k, 1]))))];
        for (int p = 0; p < places.Count; p++)
        {
            for (int k = 0; k < currents.Count; k++)
            {
                StateResult? plus = states[p, k, 0];
                StateResult? minus = both ? device.Law.IsLinear ? DriveWork.Negated(plus) : states[p, k, 1] : null;
                if (plus is null || goals[p] is null || (both && minus is null))
                {
                    continue;
                }

                rows.Add((p, maker.Make(plans[p], currents[k], plus, minus, along[k], even[k])));
                if (minus is not null)
                {
                    reversed.Add(maker.Make(plans[p], -currents[k], minus, plus, along[k], even[k]));
                }
            }
        }

        return (rows, reversed);
    }

    private void Reverse(int from, int to)
    {
        static StateResult? Opposite(StateResult? state) => state is null ? null : state with
        {
            Values = state.Values?.Select(v => -v).ToArray(),
            Difference = state.Difference?.Select(v => -v).ToArray(),
            Zone = state.Zone is null ? null : state.Zone with { Share = [.. state.Zone.Share.Select(v => -v)] },
        };
        goals[to] = goals[from] is { } known ? [.. known.Select(g => g with { Plan = plans[to], Error = g.IsEven ? g.Error.Times(-1) : g.Error })] : null;
        for (int k = 0; k < currents.Count; k++)
        {
            states[to, k, 0] = device.Law.IsLinear ? states[from, k, 0] : Opposite(states[from, k, 1]);
            states[to, k, 1] = Opposite(states[from, k, 0]);
        }
    }

    private double AlongScale(int k) => VoltageScale.Of(device, currents[k], Enumerable.Range(0, places.Count).Where(p => states[p, k, 0]?.Values is not null)
        .SelectMany(p => states[p, k, 0]!.Values!.Select((v, i) => (plans[p].Pairs[i] == plans[p].Wiring.Along, v))));

    private void Follow(int place, IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        MeshPair own = meshes.WithLaw(new LabLaw(device.Law, device.Axis + places[place].Turn), cancel);
        bool both = device.Drive!.BothSigns;
        var peaks = new PeakFinder(own.Fine.Equations);
        for (int sign = 0; sign < (both && !device.Law.IsLinear ? 2 : 1); sign++)
        {
            var task = new DriveTask(own, plans[place], peaks);
            double failedAt = double.PositiveInfinity;
            for (int k = 0; k < currents.Count; k++)
            {
                double current = sign == 0 ? currents[k] : -currents[k];
                if (Math.Abs(current) > failedAt)
                {
                    states[place, k, sign] = new(default, null, null, null, default);
                    continue;
                }

                bool reversed = sign == 1;
                Action<double[]>? keep = k == currents.Count - 1 ? u => Keep(own.Fine, place, current, reversed, u) : null;
                StateResult result = task.Solve(current, keep, cancel);
                states[place, k, sign] = result;
                if (result.Values is null)
                {
                    failedAt = Math.Abs(current);
                    refusals[place] ??= result.Outcome.Refusal;
                }
            }
        }

        progress?.Report(new("solving", Interlocked.Add(ref done, currents.Count), solved * currents.Count));
    }

    // The state at the last current, and what follows from it for the axis turned by 180 degrees.
    private void Keep(FieldLevel level, int place, double current, bool reversed, double[] u)
    {
        Wiring wiring = plans[place].Wiring;
        int last = currents.Count - 1, opposite = place + solved;
        bool isLinear = device.Law.IsLinear, wantsOpposite = opposite < places.Count && framed.Contains(opposite) && reversed == !isLinear;
        PotentialFrame? frame = wantsOpposite || (!reversed && framed.Contains(place))
            ? PotentialFrame.Of(level.Space, u, wiring.Drain, wiring.Name, current, last)
            : null;
        if (wantsOpposite)
        {
            frames[opposite] = isLinear ? frame : frame!.Negated();
        }

        if (!reversed)
        {
            frames[place] = framed.Contains(place) ? frame : null;
            maps[place] = mapped.Contains(place)
                ? FieldMapBuilder.Build(level.Space, level.Equations.Law, u, wiring.Drain, wiring.Name, current, last)
                : null;
        }
    }
}
