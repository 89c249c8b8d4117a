using FieldSolve.Lockin;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>First and second harmonic of a wiring against the frequency at the largest current: parts along sin and cos.</summary>
internal static class SpectrumPicture
{
    /// <summary>Draws a wiring; null when there are fewer than two frequencies or the sheet has no gate.</summary>
    public static Figure? Draw(LockinResult result, string wiring)
    {
        if (!(result.Device.GateCapacitance > 0) || LockinPoints.Largest(result, wiring) is not { } last)
        {
            return null;
        }

        LockinPoint[] points =
        [
            .. result.Points.Where(p => p.Wiring == wiring && p.CurrentRms == last.CurrentRms && p.Readings.Count > 0 && p.Frequency is not null)
                .OrderBy(p => p.Frequency).DistinctBy(p => p.Frequency),
        ];
        List<Plot> panels = [];
        List<KeyEntry> key = [];
        foreach (string pair in new[] { "along", "across", "source" })
        {
            foreach (int h in result.Device.Law.IsLinear ? [1] : new[] { 1, 2 })
            {
                if (points.Length > 1 && Panel(points, pair, h, key) is { } panel)
                {
                    panels.Add(panel);
                }
            }
        }

        return panels.Count == 0 ? null : Figure.Rows(panels, result.Device.Law.IsLinear ? 1 : 2, 470, 280).WithKeyBelow(key, 80);
    }

    private static Plot? Panel(LockinPoint[] points, string pair, int harmonic, List<KeyEntry> key)
    {
        (double F, HarmonicReading Reading)[] own = [.. points.Select(p => (Math.Log10(p.Frequency!.Value), p.Of(pair, harmonic)!)).Where(p => p.Item2 is not null)];
        if (own.Length == 0 || own.All(p => p.Reading.R <= p.Reading.Error))
        {
            return null;
        }

        SiScale scale = SiScale.For(own.Max(p => p.Reading.R), "V");
        Plot plot = Look.NewPlot($"V_{pair}, harmonic {harmonic.ToString(System.Globalization.CultureInfo.InvariantCulture)}", "frequency (Hz)", $"RMS ({scale.Unit})");
        KeyEntry x = KeyEntry.Curve(0, "x, along sin"), y = KeyEntry.Curve(1, "y, along cos");
        plot.PlottableList.Add(new CurveLine([[.. own.Select(p => new Coordinates(p.F, scale.Factor * p.Reading.X))]]) { Style = x });
        plot.PlottableList.Add(new CurveLine([[.. own.Select(p => new Coordinates(p.F, scale.Factor * p.Reading.Y))]]) { Style = y });
        if (key.Count == 0)
        {
            key.AddRange([x, y]);
        }

        double low = own[0].F - 0.1, high = own[^1].F + 0.1;
        plot.Axes.SetLimitsX(low, high);
        plot.Axes.Bottom.TickGenerator = Levels.LogTicks(low, high);
        Look.FixMargins(plot);
        return plot;
    }
}
