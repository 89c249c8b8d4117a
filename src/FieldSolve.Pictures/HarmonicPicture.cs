using System.Globalization;
using FieldSolve.Lockin;
using FieldSolve.Readings;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>RMS of the first three harmonics against the RMS current on logarithmic axes, with lines of slope 1, 2 and 3 and the fitted slopes.</summary>
internal static class HarmonicPicture
{
    private const int Highest = 3;

    /// <summary>Draws a wiring; null when no harmonic has two currents to show.</summary>
    public static Figure? Draw(LockinResult result, string wiring)
    {
        LockinPoint[] points = [.. LockinPoints.Row(result, wiring).Where(p => p.CurrentRms > 0)];
        List<(Plot Plot, KeyEntry[] Key)> panels = [];
        foreach ((string pair, string quantity) in new[] { ("along", "V_along"), ("across", "V_across"), ("source", "V_source") })
        {
            if (panels.Count < 2 && Panel(result, points, pair, quantity) is { } panel)
            {
                panels.Add(panel);
            }
        }

        if (panels.Count == 0)
        {
            return null;
        }

        // Each panel with its own key, side by side.
        const int Width = 470, Height = 380;
        Figure figure = Figure.Rows([.. panels.Select(p => p.Plot)], 2, Width, Height);
        return figure.WithKeyBelow([.. panels.SelectMany(p => p.Key)], 80);
    }

    private static (Plot Plot, KeyEntry[] Key)? Panel(LockinResult result, LockinPoint[] points, string pair, string quantity)
    {
        List<(int Harmonic, (double X, double Y, RowStatus Status)[] Points)> lines = [];
        for (int h = 1; h <= Highest; h++)
        {
            (double, double, RowStatus)[] own =
            [
                .. points.Select(p => (p.CurrentRms, Reading: p.Of(pair, h))).Where(p => p.Reading is { } r && r.R > r.Error)
                    .Select(p => (Math.Log10(p.CurrentRms), Math.Log10(p.Reading!.R), p.Reading.Status)),
            ];
            if (own.Length > 1)
            {
                lines.Add((h, own));
            }
        }

        if (lines.Count == 0)
        {
            return null;
        }

        (double x0, double x1) = (lines.Min(l => l.Points.Min(p => p.X)) - 0.08, lines.Max(l => l.Points.Max(p => p.X)) + 0.08);
        (double y0, double y1) = (lines.Min(l => l.Points.Min(p => p.Y)) - 0.4, lines.Max(l => l.Points.Max(p => p.Y)) + 0.4);
        SiScale scaleI = SiScale.For(Math.Pow(10, x1), "A"), scaleV = SiScale.For(Math.Pow(10, y1), "V");
        double sx = Math.Log10(scaleI.Factor), sy = Math.Log10(scaleV.Factor);
        Plot plot = Look.NewPlot($"Harmonics of {quantity}; dashed: slopes 1, 2, 3", $"current, RMS ({scaleI.Unit})", $"{quantity}, RMS ({scaleV.Unit})");
        List<KeyEntry> key = [];
        foreach ((int h, (double X, double Y, RowStatus Status)[] own) in lines)
        {
            HarmonicSlope? fit = result.Slopes.LastOrDefault(s => s.Wiring == points[^1].Wiring && s.Pair == pair && s.Harmonic == h);
            string slope = fit is null ? "" : string.Create(CultureInfo.InvariantCulture, $", fitted slope {fit.Slope:F3}");
            KeyEntry style = KeyEntry.Curve(h - 1, $"{quantity}, harmonic {h}{slope}");
            key.Add(style);

            // The expected slope through the smallest current.
            Coordinates[] expected = [new(own[0].X + sx, own[0].Y + sy), new(own[^1].X + sx, own[0].Y + sy + (h * (own[^1].X - own[0].X)))];
            plot.PlottableList.Add(new CurveLine([expected]) { Style = new("", Look.Line(h - 1), 1.2f, [5, 4], MarkerShape.None) });
            plot.PlottableList.Add(new CurveLine([[.. own.Select(p => new Coordinates(p.X + sx, p.Y + sy))]]) { Style = style with { Width = 0 } });
            foreach ((double x, double y, RowStatus status) in own.Where(p => p.Status != RowStatus.Ok))
            {
                plot.Add.Marker(x + sx, y + sy, MarkerShape.OpenCircle, 14, Look.Ink);
            }
        }

        plot.Axes.SetLimits(x0 + sx, x1 + sx, y0 + sy, y1 + sy);
        plot.Axes.Bottom.TickGenerator = Levels.LogTicks(x0 + sx, x1 + sx);
        plot.Axes.Left.TickGenerator = Levels.LogTicks(y0 + sy, y1 + sy);
        Look.FixMargins(plot);
        return (plot, [.. key.Select(k => k with { Width = 1.2f, Dash = [5, 4] })]);
    }
}
