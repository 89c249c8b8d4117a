using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Measured;
using FieldSolve.Readings;
using FieldSolve.Sensitivity;

namespace FieldSolve.Runs;

/// <summary>One current of one circuit that has to be solved.</summary>
internal sealed record FitState(int Circuit, double Current);

/// <summary>A measured voltage as a sum over states.</summary>
internal readonly record struct FitTerm(int State, double Weight);

/// <summary>What a fit has to solve and how its data come out of it.</summary>
internal sealed class FitProblem
{
    // A harmonic wants so many phases more over half a period than its order: the n-th is exact up to what the (2N - n)-th holds.
    private const int PhasesBeyond = 4;

    /// <summary>V/I is a smooth function of the current: a polynomial through this many of Chebyshev's points has it well below any noise at weak drive.</summary>
    public const int FewestNodes = 8;

    /// <summary>From here on every current is solved.</summary>
    public const int MostNodes = 32;

    private readonly SheetDevice device;
    private readonly int[] order;
    private readonly Dictionary<(int, double), int> known = [];
    private readonly List<FitState> states = [];
    private readonly (double Low, double High)?[] ranges;   // per circuit: currents between which V/I is interpolated; null where every current is solved

    /// <param name="device">The device.</param>
    /// <param name="parameters">Free numbers.</param>
    /// <param name="measured">The table.</param>
    /// <param name="data">Its rows to fit.</param>
    /// <param name="nodes">A circuit with more DC currents than these is solved at so many, and V/I interpolated between; a cycle has so many intervals between its peaks.</param>
    /// <param name="memory">What harmonics owe to a memory of the sheet; null where it has none.</param>
    public FitProblem(
        SheetDevice device, IReadOnlyList<FitParameter> parameters, MeasuredVoltages measured, IReadOnlyList<MeasuredVoltage> data, int nodes = FewestNodes,
        ICycleMemory? memory = null)
    {
        this.device = device;
        Nodes = nodes;
        Memory = memory;
        Parameters = parameters;
        Measured = measured;
        Data = data;

        // The sheet's own numbers first: contacts then move on the grown rim.
        order = [.. Enumerable.Range(0, parameters.Count).OrderBy(j => parameters[j].Kind.Scope == CauseScope.Sheet ? 0 : 1)];
        Plans = [.. measured.Circuits.Select(c => new ReadingPlan(c.Wiring, c.Pairs.Any(p => p.Name == ReadingPlan.Source), true))];
        Proportional = device.Law.Kind == OhmicLaw.Registration.Name;
        double offset = device.Drive?.Offset ?? 0;
        LargestCurrent = data.Select(d => d.Harmonic is null ? Math.Abs(d.Current) : (Math.Sqrt(2) * d.Current) + Math.Abs(offset)).Max();
        Reading = [.. data.Select(d => ReadingOf(measured.Circuits[d.Circuit], Plans[d.Circuit], d.Pair))];
        ranges = [.. Enumerable.Range(0, Plans.Length).Select(RangeOf)];
        Terms = LargestCurrent > 0 ? [.. data.Select(d => TermsOf(d, offset))] : [];
        SlopeTerms = LargestCurrent > 0 ? [.. data.Select((d, i) => SlopeTermsOf(d, Terms[i]))] : [];
    }

    /// <summary>Points of the interpolation in the current.</summary>
    public int Nodes { get; }

    /// <summary>What harmonics owe to a memory of the sheet; null where it has none.</summary>
    public ICycleMemory? Memory { get; }

    public IReadOnlyList<FitParameter> Parameters { get; }

    public MeasuredVoltages Measured { get; }

    public IReadOnlyList<MeasuredVoltage> Data { get; }

    public ReadingPlan[] Plans { get; }

    public IReadOnlyList<FitState> States => states;

    /// <summary>Per datum: index into its plan's pairs.</summary>
    public int[] Reading { get; }

    /// <summary>Per datum: states and weights; none for what is zero for all devices.</summary>
    public FitTerm[][] Terms { get; }

    /// <summary>
    /// Per datum: the same for derivatives, which need three or four digits, not ten: where currents are interpolated, half of the points carry them.
    /// </summary>
    public FitTerm[][] SlopeTerms { get; }

    /// <summary>A.</summary>
    public double LargestCurrent { get; }

    /// <summary>Every voltage is proportional to the current whatever the parameters: one state per circuit will do.</summary>
    public bool Proportional { get; }

    public double[] Start => [.. Parameters.Select(p => p.Start)];

    /// <summary>Peak current of a datum, A.</summary>
    public static double Peak(MeasuredVoltage d) => d.Harmonic is null ? Math.Abs(d.Current) : Math.Sqrt(2) * d.Current;

    /// <summary>The device at some values of the parameters.</summary>
    /// <exception cref="LayoutException">Contacts overlap, or the like.</exception>
    /// <exception cref="LawException">A parameter of the law is out of range.</exception>
    public SheetDevice DeviceAt(double[] p)
    {
        var draft = new DeviceDraft(device);
        foreach (int j in order)
        {
            if (p[j] != Parameters[j].Designed)
            {
                Parameters[j].Kind.Apply(draft, Parameters[j].Target, p[j] - Parameters[j].Designed);
            }
        }

        return draft.Build();
    }

    /// <summary>The same with fewer data.</summary>
    public FitProblem With(IReadOnlyList<MeasuredVoltage> data) => new(device, Parameters, Measured, data, Nodes, Memory);

    /// <summary>The same with more points.</summary>
    public FitProblem With(int nodes) => new(device, Parameters, Measured, Data, nodes, Memory);

    /// <summary>The domain when one number changes; null when there is none.</summary>
    public Domain? DomainAt(double[] p, int j, double by)
    {
        double[] q = [.. p];
        q[j] += by;
        try
        {
            return DeviceAt(q).Domain;
        }
        catch (Exception e) when (e is LayoutException or LawException)
        {
            return null;
        }
    }

    /// <summary>Refuses numbers at which the sheet changes in more than places, so that readings have no derivative there.</summary>
    /// <exception cref="FitException">There is such a number.</exception>
    public void RefuseJumps(double[] p)
    {
        SheetDevice there = DeviceAt(p);
        for (int j = 0; j < p.Length; j++)
        {
            CauseKind kind = Parameters[j].Kind;
            if (kind.Effect == CauseEffect.Motion && !MotionScale.IsSmooth(there, kind, Parameters[j].Target, by => DomainAt(p, j, by)))
            {
                throw Jump(p, j);
            }
        }
    }

    /// <summary>What to say of a number without a derivative.</summary>
    public FitException Jump(double[] p, int j)
    {
        FitParameter q = Parameters[j];
        double value = p[j];
        (bool noRoom, string why) = MotionScale.Obstacle(DeviceAt(p), new SheetCause(q.Kind, q.Target, 0, CauseShape.Normal));
        string there = noRoom ? $"there is no room for the smallest change ({why})" : "there the smallest change makes an edge of the metal or of the sheet meet another, appear or vanish";
        return new(
            string.Create(
                CultureInfo.InvariantCulture,
                $"'{q.Kind.Key}'{(q.Target.Name.Length > 0 ? $": contact '{q.Target.Name}'" : "")} cannot be free at {value / q.UnitSize:G6} {q.Unit}: {there}, and the readings have no derivative; start elsewhere (start = …), keep away from that place with 'min' and 'max', or draw it clear of the edge"),
            q.At.Line, q.At.Column);
    }

    /// <summary>Per datum: what the interpolation in the current or the rule over the phases may miss, V, from the last terms of the Chebyshev series.</summary>
    /// <param name="readings">Readings of every state, V.</param>
    public double[] InterpolationErrors(double[][] readings)
    {
        double[] errors = new double[Data.Count];
        for (int i = 0; i < errors.Length; i++)
        {
            MeasuredVoltage d = Data[i];
            if (Proportional || d.Current == 0)
            {
                continue;
            }

            if (d.Harmonic is { } n)
            {
                errors[i] = PhaseError(d, n, k => readings[k][Reading[i]]);
                continue;
            }

            if (ranges[d.Circuit] is not { } range)
            {
                continue;
            }

            double last = 0, before = 0;
            for (int k = 0; k < Nodes; k++)
            {
                double current = Node(range, k), f = readings[known[(d.Circuit, current)]][Reading[i]] / current, t = Math.PI * (k + 0.5) / Nodes;
                last += 2.0 / Nodes * f * Math.Cos((Nodes - 1) * t);
                before += 2.0 / Nodes * f * Math.Cos((Nodes - 2) * t);
            }

            errors[i] = Math.Abs(d.Current) * (Math.Abs(last) + Math.Abs(before));
        }

        return errors;
    }

    private (double Low, double High)? RangeOf(int circuit)
    {
        double[] currents = [.. Data.Where(d => d.Circuit == circuit && d.Harmonic is null && d.Current != 0).Select(d => d.Current).Distinct()];
        return Nodes >= MostNodes || currents.Length <= Nodes ? null
            : currents.Min() < 0 && currents.Max() > 0 ? (-currents.Max(Math.Abs), currents.Max(Math.Abs)) : (currents.Min(), currents.Max());
    }

    private double Node((double Low, double High) range, int k) =>
        (0.5 * (range.Low + range.High)) + (0.5 * (range.High - range.Low) * Math.Cos(Math.PI * (k + 0.5) / Nodes));

    private static int ReadingOf(MeasuredCircuit circuit, ReadingPlan plan, int pair)
    {
        Pair wanted = circuit.Pairs[pair];
        for (int k = 0; k < plan.Count; k++)
        {
            if (plan.Pairs[k].Plus == wanted.Plus && plan.Pairs[k].Minus == wanted.Minus)
            {
                return k;
            }
        }

        throw new InvalidOperationException("A measured pair is missing from its plan.");
    }

    private FitTerm[] TermsOf(MeasuredVoltage d, double offset)
    {
        if (Proportional)
        {
            double current = d.Harmonic switch { null or 1 => d.Current, 0 => offset, _ => 0 };
            return current == 0 ? [] : [new(State(d.Circuit, LargestCurrent), current / LargestCurrent)];
        }

        if (d.Harmonic is not { } n)
        {
            return d.Current == 0 ? [] : ranges[d.Circuit] is { } range ? Interpolated(d, range) : [new(State(d.Circuit, d.Current), 1)];
        }

        PhaseNodes phases = PhasesOf(n);
        (int sine, int cosine) = PhaseNodes.Direction(n);
        double scale = (sine + cosine) / (n == 0 ? 1 : Math.Sqrt(2));
        return
        [
            .. phases.Sine.Select((s, k) => (Current: CurrentAt(d, s, offset), Weight: scale * phases.Weight(n, k))).Where(t => t.Current != 0)
                .Select(t => new FitTerm(State(d.Circuit, t.Current), t.Weight)),
        ];
    }

    private PhaseNodes PhasesOf(int harmonic) => new(Math.Max(Nodes, harmonic + PhasesBeyond + (harmonic % 2)));

    private static double CurrentAt(MeasuredVoltage d, double sine, double offset) => offset + (Math.Sqrt(2) * d.Current * sine);

    // The n-th amplitude of N intervals also holds the (2N - n)-th. The last amplitudes and how fast they fall tell how large that is.
    private double PhaseError(MeasuredVoltage d, int n, Func<int, double> reading)
    {
        PhaseNodes phases = PhasesOf(n);
        double offset = device.Drive?.Offset ?? 0;
        double[] values = [.. phases.Sine.Select(s => CurrentAt(d, s, offset) is var current && current != 0 ? reading(known[(d.Circuit, current)]) : 0)];
        double Pair(int from) => Math.Abs(phases.Amplitude(from, values)) + Math.Abs(phases.Amplitude(from + 1, values));
        int most = phases.Intervals;
        double last = Pair(most - 2), before = Pair(most - 4), fall = before > 0 ? Math.Min(1, last / before) : 1;
        return last * Math.Pow(fall, (most - n) / 2.0) / (n == 0 ? 1 : Math.Sqrt(2));
    }

    // Lagrange's formula for V/I in its barycentric form at Chebyshev's points (J.-P. Berrut, L. N. Trefethen, SIAM Rev. 46, 501 (2004)).
    private FitTerm[] Interpolated(MeasuredVoltage d, (double Low, double High) range)
    {
        double[] weight = new double[Nodes], at = new double[Nodes];
        double sum = 0;
        for (int k = 0; k < Nodes; k++)
        {
            at[k] = Node(range, k);
            double apart = d.Current - at[k];
            if (Math.Abs(apart) <= 1e-12 * Math.Abs(at[k]))
            {
                return [new(State(d.Circuit, at[k]), d.Current / at[k])];
            }

            weight[k] = (k % 2 == 0 ? 1 : -1) * Math.Sin(Math.PI * (k + 0.5) / Nodes) / apart;
            sum += weight[k];
        }

        return [.. at.Select((current, k) => new FitTerm(State(d.Circuit, current), weight[k] / sum * d.Current / current))];
    }

    // Every second point from either end, by Lagrange's formula.
    private FitTerm[] SlopeTermsOf(MeasuredVoltage d, FitTerm[] terms)
    {
        if (Proportional || d.Harmonic is not null || d.Current == 0 || ranges[d.Circuit] is not { } range)
        {
            return terms;
        }

        double[] at = [.. Enumerable.Range(0, Nodes).Where(k => k < Nodes / 2 ? k % 2 == 0 : k % 2 == 1).Select(k => Node(range, k))];
        return [.. at.Select(current => new FitTerm(
            State(d.Circuit, current), at.Where(other => other != current).Aggregate(d.Current / current, (w, other) => w * (d.Current - other) / (current - other))))];
    }

    private int State(int circuit, double current)
    {
        if (!known.TryGetValue((circuit, current), out int at))
        {
            known[(circuit, current)] = at = states.Count;
            states.Add(new(circuit, current));
        }

        return at;
    }
}
