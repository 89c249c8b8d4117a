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

    private readonly SheetDevice device;
    private readonly int[] order;
    private readonly Dictionary<(int, double), int> known = [];
    private readonly List<FitState> states = [];

    public FitProblem(SheetDevice device, IReadOnlyList<FitParameter> parameters, MeasuredVoltages measured, IReadOnlyList<MeasuredVoltage> data)
    {
        this.device = device;
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
        Terms = LargestCurrent > 0 ? [.. data.Select(d => TermsOf(d, offset))] : [];
    }

    public IReadOnlyList<FitParameter> Parameters { get; }

    public MeasuredVoltages Measured { get; }

    public IReadOnlyList<MeasuredVoltage> Data { get; }

    public ReadingPlan[] Plans { get; }

    public IReadOnlyList<FitState> States => states;

    /// <summary>Per datum: index into its plan's pairs.</summary>
    public int[] Reading { get; }

    /// <summary>Per datum: states and weights; none for what is zero for all devices.</summary>
    public FitTerm[][] Terms { get; }

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
    public FitProblem With(IReadOnlyList<MeasuredVoltage> data) => new(device, Parameters, Measured, data);

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
            return d.Current == 0 ? [] : [new(State(d.Circuit, d.Current), 1)];
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
