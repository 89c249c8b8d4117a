using FieldSolve.Readings;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>The even part of V_across against the square of the odd part of V_along, with the fitted straight line.</summary>
internal static class EvenPicture
{
    private const int MostNamed = 12;

    /// <summary>Draws the picture; null when the law is linear (the even parts are then rounding) or no wiring has both parts.</summary>
    public static Figure? Draw(DriveResult result)
    {
        (string Wiring, RowStatus Status, double X, double Y, double Error)[] points =
        [
            .. result.Rows
                .Select(r => (r.Wiring, r.Status, X: r.Of("along")?.Odd, Y: r.Of("across")?.Even, Error: r.Of("across")?.EvenError))
                .Where(p => p.X is not null && p.Y is not null)
                .Select(p => (p.Wiring, p.Status, p.X!.Value * p.X.Value, p.Y!.Value, p.Error ?? 0)),
        ];
        if (result.Device.Law.IsLinear || points.Length == 0)
        {
            return null;
        }

        SiScale scaleX = SiScale.For(points.Max(p => p.X), "V", power: 2), scaleY = SiScale.For(points.Max(p => Math.Abs(p.Y)), "V");
        double range = scaleY.Factor * (points.Max(p => p.Y) - points.Min(p => p.Y));
        Plot plot = Look.NewPlot(
            "Even part of V_across", $"(V_along, odd part)² ({scaleX.Unit})", $"V_across, even part ({scaleY.Unit})");
        List<KeyEntry> key = [];
        for (int w = 0; w < result.Device.Wirings.Count; w++)
        {
            string name = result.Device.Wirings[w].Name;
            var own = points.Where(p => p.Wiring == name).OrderBy(p => p.X).ToArray();
            if (own.Length == 0)
            {
                continue;
            }

            double[] x = [.. own.Select(p => scaleX.Factor * p.X)], y = [.. own.Select(p => scaleY.Factor * p.Y)];
            EvenSlope? fit = result.Summaries.FirstOrDefault(s => s.Wiring == name)?.Slope;
            KeyEntry style = KeyEntry.Curve(w, Legend(name, fit));
            key.Add(style);
            plot.PlottableList.Add(new CurveLine([[.. x.Zip(y, (a, b) => new Coordinates(a, b))]]) { Style = style with { Width = 0 } });
            double[] errors = [.. own.Select(p => double.IsFinite(p.Error) ? scaleY.Factor * p.Error : 0)];
            if (errors.Max() > 0.004 * range)
            {
                plot.Add.ErrorBar(x, y, errors).Color = Look.Line(w);
            }

            foreach (int k in Enumerable.Range(0, own.Length).Where(k => own[k].Status != RowStatus.Ok))
            {
                plot.Add.Marker(x[k], y[k], MarkerShape.OpenCircle, 15, Look.Ink);
            }

            if (fit is not null && double.IsFinite(fit.Slope) && double.IsFinite(fit.Intercept))
            {
                double end = own[^1].X;
                Coordinates[] line =
                [
                    new(0, scaleY.Factor * fit.Intercept), new(scaleX.Factor * end, scaleY.Factor * ((fit.Slope * end) + fit.Intercept)),
                ];
                plot.PlottableList.Add(new CurveLine([line]) { Style = style with { Shape = MarkerShape.None } });
            }
        }

        Look.FixMargins(plot);
        return Figure.Of(plot, 640, 400).WithKeyBelow([.. key.Take(MostNamed)], 80);
    }

    private static string Legend(string name, EvenSlope? fit) => fit is null || !double.IsFinite(fit.RSquared)
        ? Look.Short(name, 20)
        : $"{Look.Short(name, 20)}: slope {ErrorText.Of(fit.Slope, fit.SlopeError, "1/V")}, R² = {SiScale.Number(fit.RSquared, 6)}";
}
