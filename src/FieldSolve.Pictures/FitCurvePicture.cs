using FieldSolve.Runs;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Measured and fitted voltages against current, one panel per pair and harmonic.</summary>
internal static class FitCurvePicture
{
    private const int MostPanels = 6, MostNamed = 12;

    /// <summary>Draws the picture; null when no circuit was measured at more than one current.</summary>
    public static Figure? Draw(FitResult result)
    {
        var groups = result.Data.GroupBy(d => (d.Pair.Name, d.Datum.Harmonic)).Where(g => g.Select(d => d.Datum.Current).Distinct().Count() > 1).Take(MostPanels).ToArray();
        if (groups.Length == 0)
        {
            return null;
        }

        string[] wirings = [.. result.Measured.Circuits.Select(c => c.Wiring.Name)];
        Plot[] panels = [.. groups.Select(g => Panel([.. g], FitPictures.Quantity(g.Key.Name, g.Key.Harmonic), wirings))];
        KeyEntry[] key = [.. wirings.Take(MostNamed).Select((w, k) => KeyEntry.Curve(k, Look.Short(w, 18)))];
        return Figure.Rows(panels, panels.Length > 2 ? 2 : 1, 500, 320).WithKeyRight(key);
    }

    private static Plot Panel(FittedVoltage[] data, string quantity, string[] wirings)
    {
        SiScale scaleI = SiScale.For(data.Max(d => Math.Abs(d.Datum.Current)), "A"), scaleV = SiScale.For(data.Max(d => Math.Abs(d.Datum.Value)), "V");
        bool rms = data[0].Datum.Harmonic is not null;
        Plot plot = Look.NewPlot(quantity, $"current{(rms ? ", RMS" : "")} ({scaleI.Unit})", $"voltage{(rms ? ", RMS" : "")} ({scaleV.Unit})");
        for (int w = 0; w < wirings.Length; w++)
        {
            FittedVoltage[] own = [.. data.Where(d => d.Circuit.Wiring.Name == wirings[w]).OrderBy(d => d.Datum.Current)];
            if (own.Length == 0)
            {
                continue;
            }

            double[] x = [.. own.Select(d => scaleI.Factor * d.Datum.Current)], y = [.. own.Select(d => scaleV.Factor * d.Datum.Value)];
            KeyEntry style = KeyEntry.Curve(w, wirings[w]);
            plot.PlottableList.Add(new CurveLine([[.. own.Select((d, k) => new Coordinates(x[k], scaleV.Factor * d.Model))]]) { Style = style with { Shape = MarkerShape.None } });
            ScottPlot.Plottables.ErrorBar bars = plot.Add.ErrorBar(x, y, [.. own.Select(d => scaleV.Factor * d.Datum.Sigma)]);
            bars.Color = style.Colour;
            plot.PlottableList.Add(new CurveLine([[.. x.Zip(y, (a, b) => new Coordinates(a, b))]]) { Style = style with { Width = 0 } });
        }

        Look.FixMargins(plot);
        return plot;
    }
}
