using FieldSolve.Device;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>What the live report of a tolerance run shows: for each wiring the contributions to each reading as bars, and the samples as histograms.</summary>
internal static class ToleranceLive
{
    private const int MostBars = 12, FewestSamples = 20, CurvePoints = 120, SampleLook = 5, CurveLook = 1;

    /// <summary>Name of a wiring's chart of contributions in the page.</summary>
    public static string BudgetId(int wiring) => $"budget-{wiring}";

    /// <summary>Name of its histograms.</summary>
    public static string SamplesId(int wiring) => $"samples-{wiring}";

    /// <summary>Collects the charts.</summary>
    public static LiveData Of(ToleranceResult result)
    {
        LiveData data = new() { Title = result.Device.Title, Share = LiveShare.Of(result) };
        for (int w = 0; w < result.Device.Wirings.Count; w++)
        {
            string name = result.Device.Wirings[w].Name;
            ToleranceQuantity[] own = [.. result.Quantities.Where(q => q.Wiring == name).OrderBy(q => q.IsRatio ? 1 : q.Pair switch { "across" => 0, "along" => 2, _ => 3 })];
            LiveView[] budget = [.. own.Select(q => Budget(result, q)).OfType<LiveView>()], samples = [.. own.Select(q => Samples(result, q)).OfType<LiveView>()];
            if (budget.Length > 0)
            {
                data.Charts.Add(new(
                    BudgetId(w), "Contributions of the causes",
                    $"Each for one standard deviation of its cause, with its sign; the {MostBars} largest. Second order where the first vanishes. Bars of error: numerical.", budget));
            }

            if (samples.Length > 0)
            {
                data.Charts.Add(new(
                    SamplesId(w), "Sampled devices",
                    "All causes at once, each device solved in full. Dashed upright: value as designed and percentiles."
                    + (IsNormal(result) ? " The curve is what first derivatives predict." : ""), samples));
            }
        }

        return data;
    }

    // A sum of first-order contributions is normal only when its causes are.
    private static bool IsNormal(ToleranceResult result) => result.Device.Tolerance!.Causes.All(c => c.Shape == CauseShape.Normal);

    private static string Unit(ToleranceQuantity q) => q.IsRatio ? "" : "V";

    private static LiveView? Budget(ToleranceResult result, ToleranceQuantity quantity)
    {
        BudgetEntry[] entries = [.. result.Budget.Where(e => e.Quantity == quantity && e.Contribution != 0).Take(MostBars)];
        if (entries.Length == 0)
        {
            return null;
        }

        LiveSeries? Series(string name, int look, int order)
        {
            int[] own = [.. Enumerable.Range(0, entries.Length).Where(k => entries[k].Order == order)];
            return own.Length == 0 ? null
                : new(name, look, [.. own.Select(k => (double)k)], [.. own.Select(k => entries[k].Contribution)], [.. own.Select(k => entries[k].Error)], [.. own.Select(_ => false)], null, []);
        }

        return new(quantity.Label, "cause", "", $"contribution to {quantity.Label}", Unit(quantity), [.. new[] { Series("first order", 0, 1), Series("second order", 4, 2) }.OfType<LiveSeries>()])
        {
            Kind = "bars",
            Categories = [.. entries.Select(e => e.Cause.Label)],
        };
    }

    private static LiveView? Samples(ToleranceResult result, ToleranceQuantity quantity)
    {
        SampleStatistics s = result.Statistics.First(s => s.Quantity == quantity);
        if (s.Count < FewestSamples || !(s.Deviation.Value > 0))
        {
            return null;
        }

        int q = result.Quantities.ToList().IndexOf(quantity);
        double[] values = [.. result.Samples.Where(r => r.Values.Length > 0).Select(r => r.Values[q])];
        double low = values.Min(), span = values.Max() - low;
        double[] counts = HistogramPicture.Counts(values), edges = [.. Enumerable.Range(0, counts.Length + 1).Select(k => low + (span * k / counts.Length))];
        double[] fine = [.. Enumerable.Range(0, CurvePoints + 1).Select(k => low + (span * k / CurvePoints))];
        return new(quantity.Label, quantity.Label, Unit(quantity), "samples", "",
        [
            new("samples", SampleLook, edges, counts, [], [], null, []),
            .. IsNormal(result) && s.FirstOrder > 0
                ? [new LiveSeries("first order", CurveLook, [], [], [], [], null, [])
                {
                    Curve = (fine, [.. fine.Select(v => (v - s.Design) / s.FirstOrder)
                        .Select(z => values.Length * span / counts.Length * Math.Exp(-z * z / 2) / (s.FirstOrder * Math.Sqrt(2 * Math.PI)))]),
                }]
                : Array.Empty<LiveSeries>(),
        ])
        {
            Kind = "histogram",

            // In an order that sets the names of neighbours on different heights.
            Marks = [(s.Percentiles[0].Value, "5 %"), (s.Percentiles[1].Value, "50 %"), (s.Design, "designed"), (s.Percentiles[2].Value, "95 %")],
        };
    }
}
