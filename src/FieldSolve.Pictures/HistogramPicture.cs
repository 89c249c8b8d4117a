using FieldSolve.Device;
using FieldSolve.Runs;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Histograms of the sampled readings of one wiring with the first-order prediction, the value as designed and the 5 and 95 % points.</summary>
internal static class HistogramPicture
{
    private const int MostBins = 40, CurvePoints = 120;

    /// <summary>Draws the picture; null with fewer than 20 samples.</summary>
    public static Figure? Draw(ToleranceResult result, string wiring)
    {
        Plot[] panels =
        [
            .. result.Statistics.Where(s => s.Quantity.Wiring == wiring && s.Count >= 20 && s.Deviation.Value > 0
                    && (s.Quantity.Pair is "across" or ToleranceQuantity.Ratio || (s.Quantity.Pair == "along" && s.Quantity.Part == ReadingPart.Odd)))
                .OrderBy(s => s.Quantity.Pair == "across" ? (int)s.Quantity.Part : s.Quantity.IsRatio ? 3 : 2)
                .Select(s => Panel(result, s)),
        ];
        bool curve = Normal(result);
        KeyEntry[] key =
        [
            new("samples", Look.Line(5), 8, null, MarkerShape.None),
            .. curve ? [new KeyEntry("first order: normal curve", Look.Line(1), 1.8f, null, MarkerShape.None)] : Array.Empty<KeyEntry>(),
            new("as designed", Look.Ink, 1.6f, null, MarkerShape.None),
            new("5 %, 50 % and 95 %", Look.Ink, 1.2f, [6, 4], MarkerShape.None),
        ];
        return panels.Length == 0 ? null : Figure.Rows(panels, panels.Length == 1 ? 1 : 2, 420, 290).WithKeyBelow(key, 84);
    }

    // A sum of first-order contributions is normal only when its causes are.
    private static bool Normal(ToleranceResult result) => result.Device.Tolerance!.Causes.All(c => c.Shape == CauseShape.Normal);

    private static Plot Panel(ToleranceResult result, SampleStatistics s)
    {
        int q = result.Quantities.ToList().IndexOf(s.Quantity);
        double[] values = [.. result.Samples.Where(r => r.Values.Length > 0).Select(r => r.Values[q])];
        double low = values.Min(), high = values.Max(), span = high - low;
        SiScale scale = s.Quantity.IsRatio ? new(1, "") : SiScale.For(Math.Max(Math.Abs(low), Math.Abs(high)), "V");
        int bins = Math.Clamp((int)Math.Ceiling(Math.Sqrt(values.Length)), 8, MostBins);
        int[] counts = new int[bins];
        foreach (double v in values)
        {
            counts[Math.Min(bins - 1, (int)((v - low) / span * bins))]++;
        }

        string name = s.Quantity.IsRatio ? "V_across / V_along" : $"V_{s.Quantity.Pair}, {(s.Quantity.Part == ReadingPart.Odd ? "odd" : "even")} part ({scale.Unit})";
        Plot plot = Look.NewPlot($"sigma {(s.Quantity.IsRatio ? SiScale.Number(s.Deviation.Value, 3) : SiScale.Text(s.Deviation.Value, "V", 3))}, first order {(s.Quantity.IsRatio ? SiScale.Number(s.FirstOrder, 3) : SiScale.Text(s.FirstOrder, "V", 3))}", name, "samples");
        double width = scale.Factor * span / bins;
        for (int k = 0; k < bins; k++)
        {
            plot.Add.Bar(new ScottPlot.Bar
            {
                Position = (scale.Factor * low) + ((k + 0.5) * width),
                Value = counts[k],
                Size = 0.96 * width,
                FillColor = Look.Line(5),
                LineWidth = 0,
            });
        }

        double top = counts.Max();
        if (Normal(result) && s.FirstOrder > 0)
        {
            Coordinates[] curve =
            [
                .. Enumerable.Range(0, CurvePoints + 1).Select(k =>
                {
                    double v = low + (span * k / CurvePoints), z = (v - s.Design) / s.FirstOrder;
                    return new Coordinates(scale.Factor * v, values.Length * span / bins * Math.Exp(-z * z / 2) / (s.FirstOrder * Math.Sqrt(2 * Math.PI)));
                }),
            ];
            top = Math.Max(top, curve.Max(c => c.Y));
            plot.PlottableList.Add(new CurveLine([curve]) { Style = new("", Look.Line(1), 1.8f, null, MarkerShape.None) });
        }

        top *= 1.08;
        void Line(double at, float w, float[]? dash) =>
            plot.PlottableList.Add(new CurveLine([[new(scale.Factor * at, 0), new(scale.Factor * at, top)]]) { Style = new("", Look.Ink, w, dash, MarkerShape.None) });
        Line(s.Design, 1.6f, null);
        foreach (SampleEstimate p in s.Percentiles)
        {
            Line(p.Value, 1.2f, [6, 4]);
        }

        plot.Axes.SetLimits(scale.Factor * (low - (0.04 * span)), scale.Factor * (high + (0.04 * span)), 0, top);
        Look.FixMargins(plot);
        return plot;
    }
}
