using FieldSolve.Device;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>Makes rows from states: odd and even parts, error bars, status.</summary>
internal sealed class RowMaker
{
    // Readings are differences of potentials; nothing below this share of the largest, and below what the iteration left over, is resolved.
    private const double RoundingShare = 2e-13;

    private readonly SheetDevice device;
    private readonly IReadOnlyList<GoalMeasure> goals;

    public RowMaker(SheetDevice device, IReadOnlyList<GoalMeasure> goals)
    {
        this.device = device;
        this.goals = goals;
    }

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
    /// <param name="along">Largest along voltage of all wirings at this current, V.</param>
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
            double error = Bar(plan, k, false, current, here.Difference![k]) + floor;
            double guard = here.Zone!.Share[k];
            if (opposite is null)
            {
                readings.Add(new(plan.Pairs[k].Name, here.Values[k], error, null, null, null, guard, 0));
                continue;
            }

            double odd = (here.Values[k] - opposite.Values![k]) / 2, even = (here.Values[k] + opposite.Values[k]) / 2;
            double evenError = device.Law.IsLinear
                ? 0
                : Bar(plan, k, true, current, (here.Difference[k] + opposite.Difference![k]) / 2) + floor;
            double evenGuard = (here.Zone.Share[k] + opposite.Zone!.Share[k]) / 2;
            readings.Add(new(plan.Pairs[k].Name, here.Values[k], error, odd, even, evenError, guard, evenGuard));
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

    // The bar is known in the limit of small drive and at the largest current. In between it follows the difference of the two meshes: where that
    // difference still is the one of small drive, so is the bar; an even part goes like I² and its bar no lower than a third of that.
    private double Bar(ReadingPlan plan, int pair, bool even, double current, double difference)
    {
        if (current == 0)
        {
            return 0;
        }

        GoalMeasure? goal = goals.FirstOrDefault(g => g.Plan == plan && g.Pair == pair && g.IsEven == even);
        if (goal is null)
        {
            return Math.Abs(difference);
        }

        double ratio = Math.Abs(current / goal.Current);
        if (even)
        {
            double expected = ratio * ratio * Math.Abs(goal.Difference);
            double share = expected > 0 ? Math.Abs(difference) / expected : 1;
            return ratio * ratio * goal.Error.Bar * Math.Clamp(share, 1.0 / 3, Math.Max(1, ratio));
        }

        double size = Math.Abs(current), weak = goal.WeakBar * size, strong = goal.Error.Bar * ratio;
        double towards = (goal.Difference * ratio * Math.Sign(goal.Current)) - (goal.WeakDifference * size);
        double here = (difference * Math.Sign(current)) - (goal.WeakDifference * size);
        double along = towards == 0 ? 1 : Math.Min(Math.Abs(here / towards), Math.Max(1, ratio));
        return Math.Max(weak + (along * (strong - weak)), Math.Min(weak, strong));
    }
}
