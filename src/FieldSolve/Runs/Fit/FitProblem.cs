using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Measured;

namespace FieldSolve.Runs;

/// <summary>One current of one circuit that has to be solved.</summary>
internal sealed record FitState(int Circuit, double Current);

/// <summary>A measured voltage as a sum over states.</summary>
internal readonly record struct FitTerm(int State, double Weight);

/// <summary>What a fit has to solve and how its data come out of it.</summary>
internal sealed class FitProblem
{
    // Nodes over half a period: the n-th harmonic is then exact up to what the (2N - n)-th one holds.
    private const int HarmonicNodes = 8;

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
    /// <param name="nodes">A circuit with more DC currents than these is solved at so many, and V/I interpolated between.</param>
    public FitProblem(
        SheetDevice device, IReadOnlyList<FitParameter> parameters, MeasuredVoltages measured, IReadOnlyList<MeasuredVoltage> data, int nodes = FewestNodes)
    {
        this.device = device;
        Nodes = nodes;
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
    public FitProblem With(IReadOnlyList<MeasuredVoltage> data) => new(device, Parameters, Measured, data, Nodes);

    /// <summary>The same with more points.</summary>
    public FitProblem With(int nodes) => new(device, Parameters, Measured, Data, nodes);

    /// <summary>Per datum: what the interpolation may miss, V, from the last two terms of its Chebyshev series.</summary>
    /// <param name="readings">Readings of every state, V.</param>
    public double[] InterpolationErrors(double[][] readings)
    {
        double[] errors = new double[Data.Count];
        for (int i = 0; i < errors.Length; i++)
        {
            MeasuredVoltage d = Data[i];
            if (Proportional || d.Harmonic is not null || ranges[d.Circuit] is not { } range || d.Current == 0)
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

        // V is a function of I = I0 + sqrt(2) I cos(t), t counted from the crest: a series of cos(n t), by Chebyshev's points. Back to the phase counted from
        // the zero of sin: cos(n t) is sin, -cos, -sin, cos of n times it for n = 1, 2, 3, 4.
        int nodes = Math.Max(HarmonicNodes, n + 4);
        double scale = (n == 0 ? 1.0 : Math.Sqrt(2)) * (n % 4 is 2 or 3 ? -1 : 1) / nodes;
        var terms = new List<FitTerm>();
        for (int k = 0; k < nodes; k++)
        {
            double t = Math.PI * (k + 0.5) / nodes, current = offset + (Math.Sqrt(2) * d.Current * Math.Cos(t));
            if (current != 0)
            {
                terms.Add(new(State(d.Circuit, current), scale * Math.Cos(n * t)));
            }
        }

        return [.. terms];
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
