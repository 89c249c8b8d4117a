using FieldSolve.Lockin;
using FieldSolve.Readings;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Second harmonic across (along cos 2wt, where a memoryless sheet has it) against the squared first harmonic along, with the fitted line.</summary>
internal static class SecondHarmonicPicture
{
    private const int MostNamed = 12;

    /// <summary>Draws the picture; null for a linear law, or when no wiring has both pairs.</summary>
    public static Figure? Draw(LockinResult result)
    {
        (int Wiring, double X, HarmonicReading Y)[] points =
        [
            .. result.Device.Wirings.SelectMany((w, k) => LockinPoints.Row(result, w.Name)
                .Select(p => (k, Along: p.Of("along", 1), Across: p.Of("across", 2))))
                .Where(p => p.Along is not null && p.Across is not null).Select(p => (p.k, p.Along!.R * p.Along.R, p.Across!)),
        ];
        if (result.Device.Law.IsLinear || points.Length == 0)
        {
            return null;
        }

        SiScale scaleX = SiScale.For(points.Max(p => p.X), "V", power: 2), scaleY = SiScale.For(points.Max(p => Math.Abs(p.Y.Y)), "V");
        Plot plot = Look.NewPlot(
            "Second harmonic across", $"(first harmonic of V_along, RMS)² ({scaleX.Unit})", $"V_across along cos 2ωt, RMS ({scaleY.Unit})");
        List<KeyEntry> key = [];
        for (int w = 0; w < result.Device.Wirings.Count; w++)
        {
            (int Wiring, double X, HarmonicReading Y)[] own = [.. points.Where(p => p.Wiring == w).OrderBy(p => p.X)];
            if (own.Length == 0)
            {
                continue;
            }

            string name = result.Device.Wirings[w].Name;
            EvenSlope? fit = result.Lines.LastOrDefault(l => l.Wiring == name)?.Line;
            KeyEntry style = KeyEntry.Curve(w, fit is null
                ? Look.Short(name, 20)
                : $"{Look.Short(name, 20)}: slope {ErrorText.Of(fit.Slope, fit.SlopeError, "1/V")}, R² = {SiScale.Number(fit.RSquared, 5)}");
            key.Add(style);
            plot.PlottableList.Add(new CurveLine([[.. own.Select(p => new Coordinates(scaleX.Factor * p.X, scaleY.Factor * p.Y.Y))]])
            {
                Style = style with { Width = 0 },
            });
            foreach ((int _, double x, HarmonicReading y) in own.Where(p => p.Y.Status != RowStatus.Ok))
            {
                plot.Add.Marker(scaleX.Factor * x, scaleY.Factor * y.Y, MarkerShape.OpenCircle, 15, Look.Ink);
            }

            if (fit is not null && double.IsFinite(fit.Slope))
            {
                Coordinates[] line = [new(0, scaleY.Factor * fit.Intercept), new(scaleX.Factor * own[^1].X, scaleY.Factor * (fit.Intercept + (fit.Slope * own[^1].X)))];
                plot.PlottableList.Add(new CurveLine([line]) { Style = style with { Shape = MarkerShape.None } });
            }
        }

        Look.FixMargins(plot);
        return Figure.Of(plot, 640, 400).WithKeyBelow([.. key.Take(MostNamed)], 80);
    }
}
