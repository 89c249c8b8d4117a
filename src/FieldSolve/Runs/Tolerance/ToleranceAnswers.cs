using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Quantities;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>The answers a referee asks for, in words.</summary>
internal static class ToleranceAnswers
{
    private const double WantedShare = 0.01;

    public static IReadOnlyList<string> Of(
        ToleranceModel model, IReadOnlyList<BudgetEntry> budget, IReadOnlyList<SampleStatistics> statistics, ToleranceOptions options)
    {
        var list = new List<string>();
        for (int w = 0; w < model.States.Count; w++)
        {
            DesignState s = model.States[w];
            string name = model.States.Count > 1 ? $"Wiring '{s.Plan.Wiring.Name}': " : "";
            if (s.Plan.Wiring.Across is null)
            {
                string pair = s.Plan.Wiring.Along is null ? "source" : "along";
                int read = Find(model, w, pair, ReadingPart.Odd);
                list.Add(name + PickUp(model, statistics[read], Entries(budget, model.Quantities[read]), 0));
                continue;
            }

            int odd = Find(model, w, "across", ReadingPart.Odd), even = Find(model, w, "across", ReadingPart.Even);
            double along = s.AlongIsZero ? 0 : s.Row.Of("along")?.Odd ?? 0;
            list.Add(name + PickUp(model, statistics[odd], Entries(budget, model.Quantities[odd]), along));
            if (Placement(model, statistics[odd], Entries(budget, model.Quantities[odd]), along, options.Wanted) is { } placement)
            {
                list.Add(name + placement);
            }

            if (even >= 0)
            {
                list.Add(name + Even(statistics[even], Entries(budget, model.Quantities[even])));
            }

            if (options.Explain is { } voltage)
            {
                list.Add(name + Explain(statistics[odd], Entries(budget, model.Quantities[odd]), voltage));
            }
        }

        return list;
    }

    // The spread where there are samples, else what the derivatives predict.
    private static double Spread(SampleStatistics s) => s.Count > 1 ? s.Deviation.Value : s.FirstOrder;

    private static string PickUp(ToleranceModel model, SampleStatistics s, IReadOnlyList<BudgetEntry> entries, double along)
    {
        double spread = Spread(s);
        string share = along != 0 ? Text($", {Percent(spread / Math.Abs(along))} of the along voltage") : "";
        BudgetEntry[] linear = [.. entries.Where(e => e.Order == 1)];
        double all = linear.Sum(e => e.Contribution * e.Contribution);
        if (all == 0)
        {
            return Text($"the {s.Quantity.Label} part ({Volts(s.Design)}) is untouched by these causes in first order.");
        }

        BudgetEntry first = linear[0];
        string text = Text($"the {s.Quantity.Label} part is {Volts(s.Design)} as designed and scatters by {Volts(spread)} (1 sigma){share}. Most of it comes from {first.Cause.Label} ({Percent(first.Contribution * first.Contribution / all)} of the variance; {Volts(Math.Abs(first.Contribution))} for {Size(first.Cause, first.Cause.Sigma)}).");
        BudgetEntry[] placed = [.. linear.Where(IsPlacement)];
        double byPlace = Math.Sqrt(placed.Sum(e => e.Contribution * e.Contribution));
        if (byPlace == 0)
        {
            return text;
        }

        // One size when all placements share one, as in 50 nm for every contact.
        double[] sizes = [.. placed.Where(e => e.Cause.Kind is PositionCause or PadShiftCause or LayerShiftCause).Select(e => e.Cause.Sigma).Distinct()];
        string placement = sizes.Length == 1 ? $"{SiText.Of(sizes[0], "m")} placement" : "the stated placement";
        string part = along != 0 ? Text($" is pick-up of {Percent(byPlace / Math.Abs(along))} of along for {placement}") : $" comes from {placement}";
        string who = Dominant(model, placed, byPlace * byPlace) is { } c ? Text($"; contact '{c.Name}' has the largest part of that ({Percent(c.Share)} of the variance)") : "";
        return Text($"{text} {Volts(byPlace)} of it{part}{who}.");
    }

    // The contact whose own causes carry the most variance; null when no contact has causes of its own.
    private static (string Name, double Share)? Dominant(ToleranceModel model, BudgetEntry[] linear, double all)
    {
        var sums = linear.Where(e => e.Cause.Kind.Scope == CauseScope.Contact).GroupBy(e => e.Cause.Target.Contacts[0])
            .Select(g => (g.Key, Sum: g.Sum(e => e.Contribution * e.Contribution))).OrderByDescending(g => g.Sum).ThenBy(g => g.Key).ToList();
        return sums.Count == 0 || sums[0].Sum == 0 ? null : (model.Device.Contacts[sums[0].Key].Name, sums[0].Sum / all);
    }

    private static string? Placement(ToleranceModel model, SampleStatistics s, IReadOnlyList<BudgetEntry> entries, double along, double? wanted)
    {
        double level = wanted ?? (WantedShare * Math.Abs(along));
        BudgetEntry[] moving = [.. entries.Where(e => e.Order == 1 && IsPlacement(e))];
        double byPlace = Math.Sqrt(moving.Sum(e => e.Contribution * e.Contribution));
        double others = Math.Sqrt(Math.Max(0, (s.FirstOrder * s.FirstOrder) - (byPlace * byPlace)));
        if (!(level > 0) || byPlace == 0)
        {
            return null;
        }

        string goal = Text($"{Volts(level)}{(wanted is null ? " (1 % of along)" : "")}");
        BudgetEntry? largest = moving.FirstOrDefault(e => e.Cause.Kind is PositionCause) ?? moving.FirstOrDefault(e => e.Cause.Kind.Dimension == Dimension.Length);
        if (others >= level)
        {
            double alone = level / byPlace;
            string own = largest is null ? "" : Text($" Placement alone would stay under it with {Size(largest.Cause, alone * largest.Cause.Sigma)} for {largest.Cause.Label} and the others in proportion.");
            return Text($"no placement keeps the scatter under {goal}: the other causes make {Volts(others)}.{own}");
        }

        double factor = Math.Sqrt((level * level) - (others * others)) / byPlace;
        string example = largest is null ? "" : Text($", for instance {Size(largest.Cause, factor * largest.Cause.Sigma)} for {largest.Cause.Label}");
        return factor >= 1
            ? Text($"the placement is good enough for {goal}: it could be {factor:G3} times worse{example}.")
            : Text($"to keep the scatter under {goal}, the placement must be {1 / factor:G3} times better{example}.");
    }

    private static string Even(SampleStatistics s, IReadOnlyList<BudgetEntry> entries)
    {
        double spread = Spread(s), share = spread == 0 ? 0 : s.Design != 0 ? spread / Math.Abs(s.Design) : double.PositiveInfinity;
        string noise = s.NumericalError > Math.Abs(s.Design) ? Text($" (below its numerical error of {Volts(s.NumericalError)})") : "";
        string largest = entries.FirstOrDefault(e => e.Contribution != 0) is { } e ? Text($" Most of it comes from {e.Cause.Label}{(e.Order == 2 ? ", in second order" : "")}.") : "";
        string verdict = share < 0.1 ? "these causes cannot fake it"
            : share < 1 ? "these causes change it, but do not make it up"
            : "these causes alone could fake it";
        string part = s.Design != 0 ? Text($", {Percent(share)} of it") : "";
        return Text($"the across even part is {Volts(s.Design)} as designed{noise} and scatters by {Volts(spread)} (1 sigma){part}: {verdict}.{largest}");
    }

    private static string Explain(SampleStatistics s, IReadOnlyList<BudgetEntry> entries, double voltage)
    {
        double gap = voltage - s.Design;
        BudgetEntry[] linear = [.. entries.Where(e => e.Order == 1 && e.Slope != 0)];
        if (linear.Length == 0)
        {
            return Text($"no cause changes the across odd part in first order, so none explains {Volts(voltage)}.");
        }

        double sigmas = Math.Abs(gap) / s.FirstOrder;
        IEnumerable<string> named = linear.Take(3).Select(e => $"{e.Cause.Label} off by {Size(e.Cause, gap / e.Slope)}");
        return Text($"an across voltage of {Volts(voltage)} lies {Volts(gap)} from the {Volts(s.Design)} as designed. One cause alone would explain it: {string.Join("; or ", named)} (first order). With all causes at once it takes {sigmas:G2} times the stated tolerances{(sigmas <= 2 ? ", which is likely enough to be misalignment" : sigmas > 5 ? ", so misalignment does not explain it" : "")}.");
    }

    private static bool IsPlacement(BudgetEntry e) => e.Cause.Kind.Effect == CauseEffect.Motion && e.Cause.Kind.Scope != CauseScope.Sheet;

    // Two digits, without a power of ten.
    private static string Percent(double share)
    {
        double p = 100 * share;
        return Text($"{(p >= 9.95 ? p.ToString("F0", CultureInfo.InvariantCulture) : p.ToString("G2", CultureInfo.InvariantCulture))} %");
    }

    private static int Find(ToleranceModel model, int wiring, string pair, ReadingPart part) => model.Quantities.ToList()
        .FindIndex(q => q.WiringIndex == wiring && q.Pair == pair && q.Part == part);

    private static IReadOnlyList<BudgetEntry> Entries(IReadOnlyList<BudgetEntry> budget, ToleranceQuantity q) => [.. budget.Where(e => e.Quantity == q)];

    private static string Size(SheetCause cause, double si) => cause.Unit switch
    {
        "1" => Text($"{si:G3}"),
        _ when cause.Kind.Dimension == Dimension.Length => SiText.Of(si, "m"),
        var unit when unit == "deg" || unit.Contains(' ', StringComparison.Ordinal) => Text($"{si / cause.UnitSize:G3} {unit}"),
        var unit => SiText.Of(si, unit),
    };

    private static string Volts(double v) => SiText.Of(v, "V");

    private static string Text(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
