using FieldSolve.Device;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>Makes rows from states: odd and even parts, error bars, status.</summary>
internal sealed class RowMaker
{
    // Readings are differences of potentials; nothing below this share of the largest, and below what the iteration left over, is resolved.
    private const double RoundingShare = 2e-13;

    // An even part is compared with that at the largest current where that is so many of its bars.
    private const double Resolved = 10;

    private readonly SheetDevice device;
    private readonly IReadOnlyList<GoalMeasure> goals;

    public RowMaker(SheetDevice device, IReadOnlyList<GoalMeasure> goals)
    {
        this.device = device;
        this.goals = goals;
    }

    /// <summary>What the rows are of.</summary>
    public SheetDevice Device => device;

    /// <summary>Largest even part at one current, V.</summary>
    /// <param name="states">Wirings with their states at +I and -I.</param>
    public static double EvenScale(IEnumerable<(ReadingPlan Plan, StateResult? Plus, StateResult? Minus)> states)
    {
        double largest = 0;
        foreach ((ReadingPlan plan, StateResult? plus, StateResult? minus) in states)
        {
            for (int k = 0; plus?.Values is not null && minus?.Values is not null && k < plan.Count; k++)
            {
                largest = plan.HasEven[k] ? Math.Max(largest, Math.Abs(plus.Values[k] + minus.Values[k]) / 2) : largest;
            }
        }

        return largest;
    }

    /// <summary>One row.</summary>
    /// <param name="plan">Wiring and pairs.</param>
    /// <param name="current">A.</param>
    /// <param name="here">State at the row's current.</param>
    /// <param name="opposite">State at the opposite current; null when it was not solved.</param>
    /// <param name="along">What wanted errors are relative to at this current, V; see <see cref="VoltageScale"/>.</param>
    /// <param name="curve">Largest even part of the curve that the row is a point of, V; 0 when it stands by itself.</param>
    public CurveRow Make(ReadingPlan plan, double current, StateResult here, StateResult? opposite, double along, double curve = 0)
    {
        int steps = here.Outcome.Steps + (opposite?.Outcome.Steps ?? 0);
        if (here.Values is null || (opposite is not null && opposite.Values is null))
        {
            return new(plan.Wiring.Name, current, [], steps, RowStatus.NotConverged, null, 0, 0);
        }

        var readings = new List<Reading>();
        double rest = Math.Max(here.Outcome.RelativeResidual, opposite?.Outcome.RelativeResidual ?? 0);
        for (int k = 0; k < plan.Count; k++)
        {
            // A left-over current moves a reading by its share of what the reading's own resistance makes of the current: the sheet's for probes, with
            // the contacts' for the source.
            double own = plan.Pairs[k].Name == ReadingPlan.Source ? Math.Abs(here.Values[k]) : along;
            double floor = (RoundingShare * here.Values.Max(Math.Abs)) + (rest * own);
            double guard = here.Zone!.Share[k];
            if (opposite is null)
            {
                (double missing, double bar) = Estimate(plan, k, current, here.Difference![k], 0);
                readings.Add(new(plan.Pairs[k].Name, here.Values[k] + missing, bar + floor, null, null, null, guard, 0));
                continue;
            }

            double odd = (here.Values[k] - opposite.Values![k]) / 2, even = (here.Values[k] + opposite.Values[k]) / 2;
            double oddDifference = (here.Difference![k] - opposite.Difference![k]) / 2, evenDifference = (here.Difference[k] + opposite.Difference[k]) / 2;
            (double missingEven, double evenBar) = device.Law.IsLinear ? (0, -floor) : EstimateEven(plan, k, current, even, evenDifference);
            (double missingOdd, double error) = Estimate(plan, k, current, oddDifference, evenDifference);
            (odd, even) = (odd + missingOdd, even + missingEven);
            double evenGuard = (here.Zone.Share[k] + opposite.Zone!.Share[k]) / 2;
            readings.Add(new(plan.Pairs[k].Name, odd + even, error + floor, odd, even, evenBar + floor, guard, evenGuard));
        }

        LawExit? exit = here.Zone!.Exit ?? opposite?.Zone?.Exit;
        return new(
            plan.Wiring.Name, current, readings, steps, Judge(plan, readings, along, curve, exit), exit, here.Peak.SheetCurrent, here.Peak.Power);
    }

    private RowStatus Judge(ReadingPlan plan, List<Reading> readings, double along, double curve, LawExit? exit)
    {
        double[] evens = [.. readings.Where((r, k) => plan.HasEven[k] && r.Even is not null).Select(r => r.Even!.Value), curve];
        bool outside = false, coarse = false;
        for (int k = 0; k < readings.Count; k++)
        {
            Reading r = readings[k];
            double wanted = MeshRefinement.Wanted(device.Mesh, along, r.Value);
            outside |= exit is not null && Math.Abs(r.GuardShare) > wanted;
            coarse |= r.Error > wanted;
            if (plan.HasEven[k] && r.Even is { } even)
            {
                double wantedEven = MeshRefinement.WantedEven(device.Mesh, along, evens, even);
                outside |= exit is not null && Math.Abs(r.EvenGuardShare) > wantedEven;
                coarse |= r.EvenError > wantedEven;
            }
        }

        return outside ? RowStatus.OutsideLaw : coarse && along > 0 ? RowStatus.ErrorAboveWanted : RowStatus.Ok;
    }

    private GoalMeasure? Goal(ReadingPlan plan, int pair, bool even) => goals.FirstOrDefault(g => g.Plan == plan && g.Pair == pair && g.IsEven == even);

    // Error and bar are known in the limit of small drive and at the largest current. In between they follow the difference of the two meshes: where that
    // difference still is the one of small drive, so are they.
    private (double Missing, double Bar) Estimate(ReadingPlan plan, int pair, double current, double oddDifference, double evenDifference)
    {
        if (current == 0)
        {
            return default;
        }

        if (Goal(plan, pair, false) is not { } goal)
        {
            return (0, Math.Abs(oddDifference) + Math.Abs(evenDifference));
        }

        // The measure at the largest current has an even part in it, where one was measured; the odd part is the rest.
        GoalMeasure? even = Goal(plan, pair, true);
        double oddMeasured = goal.Difference - (even?.Difference ?? 0), oddCorrection = goal.Error.Correction - (even?.Error.Correction ?? 0);
        double ratio = Math.Abs(current / goal.Current), weak = goal.WeakError!.Bar * Math.Abs(current), strong = goal.Error.Bar * ratio;
        double Along(double measured, double difference)
        {
            double towards = (measured * Math.Sign(goal.Current) * ratio) - (goal.WeakDifference * Math.Abs(current));
            double here = (difference * Math.Sign(current)) - (goal.WeakDifference * Math.Abs(current));
            double most = Math.Max(1, ratio);
            return towards == 0 ? 1 : Math.Clamp(here / towards, -most, most);
        }

        // With its sign: where one sign of the current was measured alone, what is even changes its side at the other.
        double share = Math.Abs(Along(goal.Difference, oddDifference + evenDifference)), oddShare = Math.Clamp(Along(oddMeasured, oddDifference), -1, 1);
        double missing = goal.WeakError.Correction + (oddShare * ((oddCorrection / goal.Current) - goal.WeakError.Correction));
        return (current * missing, Math.Max(weak + (share * (strong - weak)), Math.Min(weak, strong)));
    }

    // An even part goes like I², its bar no lower than a third of that. Where the law fades, a weaker drive has more of it, and more still of its error, which sits at contact ends where the
    // law fades first: of an even part f times what I² makes of the one at the largest current, bars of up to 2f - 1 times were needed (discs and squares whose law fades; f up to 90).
    // The difference of the two meshes is heeded too, since by itself it may be small by chance at the largest current.
    private (double Missing, double Bar) EstimateEven(ReadingPlan plan, int pair, double current, double even, double difference)
    {
        if (current == 0)
        {
            return default;
        }

        if (Goal(plan, pair, true) is not { } goal)
        {
            return (0, Math.Abs(difference));
        }

        double ratio = Math.Abs(current / goal.Current), expected = ratio * ratio * Math.Abs(goal.Difference);
        double share = expected > 0 ? Math.Abs(difference) / expected : 1, bar = ratio * ratio * goal.Error.Bar;
        double fade = Math.Abs(goal.Value) > Resolved * goal.Error.Bar ? Math.Max(1, Math.Abs(even / (ratio * ratio * goal.Value))) : 1;
        double follows = Math.Abs(difference) * (goal.Difference == 0 ? 1 : Math.Min(1, goal.Error.Bar / Math.Abs(goal.Difference)));
        return (ratio * ratio * goal.Error.Correction, Math.Max(fade > 1 ? bar * ((2 * fade) - 1) : bar * Math.Clamp(share, 1.0 / 3, Math.Max(1, ratio)), follows));
    }
}
