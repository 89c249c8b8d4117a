using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Runs;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Measured and fitted resistances at the largest current against the direction of the current.</summary>
internal static class FitDirectionPicture
{
    /// <summary>Fewer are no curve.</summary>
    public const int FewestDirections = 3;

    private const int MostPanels = 6;

    /// <summary>Draws the picture; null with fewer than three directions.</summary>
    public static Figure? Draw(FitResult result)
    {
        var panels = new List<Plot>();
        foreach (var group in result.Data.Where(d => d.Datum.Current != 0).GroupBy(d => (d.Pair.Name, d.Datum.Harmonic)))
        {
            (double Direction, FittedVoltage Datum)[] points = Points(result, group);
            if (points.Select(p => Math.Round(p.Direction, 3)).Distinct().Count() >= FewestDirections && panels.Count < MostPanels)
            {
                panels.Add(Panel(points, group.Key.Name, group.Key.Harmonic));
            }
        }

        KeyEntry[] key = [new("measured", Look.Line(0), 0, null, MarkerShape.FilledCircle), new("fitted model", Look.Line(1), 1.2f, [6, 4], MarkerShape.OpenSquare)];
        return panels.Count == 0 ? null : Figure.Rows(panels, panels.Count > 1 ? 2 : 1, 480, 310).WithKeyBelow(key, 84);
    }

    /// <summary>The voltage at the largest current of each circuit, by the direction of its current in degrees.</summary>
    public static (double Direction, FittedVoltage Datum)[] Points(FitResult result, IEnumerable<FittedVoltage> data) => [.. data.GroupBy(d => d.Datum.Circuit)
        .Select(g => g.MaxBy(d => d.Datum.Current)!).Select(d => (Direction(result.Device, d.Circuit.Wiring), d)).OrderBy(p => p.Item1)];

    private static Plot Panel((double Direction, FittedVoltage Datum)[] points, string pair, int? harmonic)
    {
        double Over(FittedVoltage d, double v) => v / d.Datum.Current;
        SiScale scale = SiScale.For(points.Max(p => Math.Abs(Over(p.Datum, p.Datum.Datum.Value))), "Ω");
        Plot plot = Look.NewPlot($"{FitPictures.Quantity(pair, harmonic)} over current", "direction of the current (°)", $"V/I ({scale.Unit})");
        double[] x = [.. points.Select(p => p.Direction)], y = [.. points.Select(p => scale.Factor * Over(p.Datum, p.Datum.Datum.Value))];
        plot.PlottableList.Add(new CurveLine([[.. points.Select(p => new Coordinates(p.Direction, scale.Factor * Over(p.Datum, p.Datum.Model)))]])
        {
            Style = new("", Look.Line(1), 1.2f, [6, 4], MarkerShape.OpenSquare),
        });
        ScottPlot.Plottables.ErrorBar bars = plot.Add.ErrorBar(x, y, [.. points.Select(p => scale.Factor * Math.Abs(Over(p.Datum, p.Datum.Datum.Sigma)))]);
        bars.Color = Look.Line(0);
        plot.PlottableList.Add(new CurveLine([[.. x.Zip(y, (a, b) => new Coordinates(a, b))]]) { Style = new("", Look.Line(0), 0, null, MarkerShape.FilledCircle) });
        Look.FixMargins(plot);
        return plot;
    }

    private static double Direction(SheetDevice device, Wiring wiring)
    {
        Point2 line = device.Contacts[wiring.Drain].Middle - device.Contacts[wiring.Source].Middle;
        double degrees = Math.Atan2(line.Y, line.X) * 180 / Math.PI;
        return degrees < -1e-9 ? degrees + 360 : degrees;
    }
}
