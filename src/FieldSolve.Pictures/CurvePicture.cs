using FieldSolve.Device;
using FieldSolve.Readings;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>V_along and V_across against the current, all wirings together.</summary>
internal static class CurvePicture
{
    private const int MostNamed = 12;
    private const double VisibleError = 0.004;

    /// <summary>Draws the picture; null when no row has either voltage.</summary>
    public static Figure? Draw(DriveResult result)
    {
        Plot[] panels = [.. new[] { ("along", "V_along"), ("across", "V_across") }
            .Select(p => Panel(result, p.Item1, p.Item2)).OfType<Plot>()];
        IEnumerable<KeyEntry> key = result.Device.Wirings.Take(MostNamed).Select((w, k) => KeyEntry.Curve(k, Look.Short(w.Name, 18)));
        return panels.Length == 0 ? null : Figure.Rows(panels, 1, 600, 330).WithKeyRight([.. key]);
    }

    private static Plot? Panel(DriveResult result, string pair, string quantity)
    {
        (CurveRow Row, Reading Reading)[] all = [.. result.Rows.Concat(result.ReversedRows)
            .Select(r => (r, r.Of(pair))).Where(r => r.Item2 is not null).Select(r => (r.r, r.Item2!))];
        if (all.Length == 0)
        {
            return null;
        }

        SiScale scaleI = SiScale.For(all.Max(r => Math.Abs(r.Row.Current)), "A"), scaleV = SiScale.For(all.Max(r => Math.Abs(r.Reading.Value)), "V");
        double range = scaleV.Factor * (all.Max(r => r.Reading.Value) - all.Min(r => r.Reading.Value));
        Plot plot = Look.NewPlot($"{quantity} against current", $"current ({scaleI.Unit})", $"{quantity} ({scaleV.Unit})");
        for (int w = 0; w < result.Device.Wirings.Count; w++)
        {
            string name = result.Device.Wirings[w].Name;
            (CurveRow Row, Reading Reading)[] own = [.. all.Where(r => r.Row.Wiring == name)
                .DistinctBy(r => r.Row.Current).OrderBy(r => r.Row.Current)];
            if (own.Length == 0)
            {
                continue;
            }

            double[] x = [.. own.Select(r => scaleI.Factor * r.Row.Current)], y = [.. own.Select(r => scaleV.Factor * r.Reading.Value)];
            plot.PlottableList.Add(new CurveLine([[.. x.Zip(y, (a, b) => new Coordinates(a, b))]]) { Style = KeyEntry.Curve(w, name) });
            AddErrors(plot, own, x, y, scaleV.Factor, range, Look.Line(w));
            AddDoubtful(plot, own, x, y);
        }

        Look.FixMargins(plot);
        return plot;
    }

    private static void AddErrors(
        Plot plot, (CurveRow Row, Reading Reading)[] own, double[] x, double[] y, double factor, double range, Color colour)
    {
        double[] errors = [.. own.Select(r => double.IsFinite(r.Reading.Error) ? factor * r.Reading.Error : 0)];
        if (errors.Max() > VisibleError * range)
        {
            ScottPlot.Plottables.ErrorBar bars = plot.Add.ErrorBar(x, y, errors);
            bars.Color = colour;
        }
    }

    // Rows that are not ok are ringed.
    private static void AddDoubtful(Plot plot, (CurveRow Row, Reading Reading)[] own, double[] x, double[] y)
    {
        for (int k = 0; k < own.Length; k++)
        {
            if (own[k].Row.Status != RowStatus.Ok)
            {
                plot.Add.Marker(x[k], y[k], MarkerShape.OpenCircle, 14, Look.Ink);
            }
        }
    }
}
