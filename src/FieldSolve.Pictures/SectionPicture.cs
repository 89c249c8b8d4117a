using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Potential along two perpendicular lines through the middle of the sheet, for several currents of one wiring.</summary>
internal static class SectionPicture
{
    private const int Samples = 600, MostCurves = 5;

    /// <summary>Draws the picture.</summary>
    /// <param name="maps">Maps of one wiring in the order of the drive.</param>
    /// <param name="mesh">Small triangles of these maps.</param>
    /// <param name="finder">Point location on them.</param>
    /// <param name="direction">Direction of the wiring, degrees; null where the current has none, as from rim to rim of a ring.</param>
    public static Figure Draw(IReadOnlyList<FieldMap> maps, FineMesh mesh, TriangleFinder finder, double? direction)
    {
        double degrees = direction ?? 0;
        FieldMap[] chosen = Spread(maps);
        double[][] volts = [.. chosen.Select(m => mesh.Quadratic(m.Potential))];
        SiScale scaleV = SiScale.For(volts.Max(v => v.Max(Math.Abs)), "V");
        Plot along = Panel(chosen, volts, mesh, finder, degrees, scaleV);
        Plot across = Panel(chosen, volts, mesh, finder, degrees + 90, scaleV);
        AxisLimits first = along.Axes.GetLimits(), second = across.Axes.GetLimits();
        double left = Math.Min(first.Left, second.Left), right = Math.Max(first.Right, second.Right);
        along.Axes.SetLimitsX(left, right);
        across.Axes.SetLimitsX(left, right);
        string Title(string way, double angle, string axis) =>
            $"Potential {(direction is null ? $"along {axis}" : $"{way} the current ({SiScale.Number(Math.Round(angle % 360, 2))}°)")}, {Look.Short(chosen[0].Wiring, 24)}";
        along.Title(Title("along", degrees, "x"), Look.TitleSize);
        across.Title(Title("across", degrees + 90, "y"), Look.TitleSize);
        return Figure.Rows([along, across], 1, 600, 300).WithKeyRight([.. chosen.Select((m, k) => Style(k, m))]);
    }

    private static KeyEntry Style(int k, FieldMap map) => KeyEntry.Curve(k, SiScale.Text(map.Current, "A"), marked: false);

    private static FieldMap[] Spread(IReadOnlyList<FieldMap> maps)
    {
        FieldMap[] driven = [.. maps.Where(m => m.Current != 0)];
        FieldMap[] use = driven.Length > 0 ? driven : [.. maps];
        int count = Math.Min(MostCurves, use.Length);
        return [.. Enumerable.Range(0, count).Select(k => use[count == 1 ? use.Length - 1 : k * (use.Length - 1) / (count - 1)])];
    }

    private static Plot Panel(
        FieldMap[] maps, double[][] volts, FineMesh mesh, TriangleFinder finder, double degrees, SiScale scaleV)
    {
        (double x0, double x1, double y0, double y1) = (mesh.X.Min(), mesh.X.Max(), mesh.Y.Min(), mesh.Y.Max());
        Point2 centre = new((x0 + x1) / 2, (y0 + y1) / 2), direction = new Point2(1, 0).Turned(degrees * Math.PI / 180);
        double reach = new Point2(x1 - x0, y1 - y0).Length / 2;
        SiScale scale = SiScale.For(Math.Max(x1 - x0, y1 - y0) / 2, "m");
        Plot plot = Look.NewPlot("", $"distance from the middle ({scale.Unit})", $"potential ({scaleV.Unit})");
        for (int m = 0; m < maps.Length; m++)
        {
            List<Coordinates[]> runs = Runs(volts[m], finder, centre, direction, reach, scale.Factor, scaleV.Factor);
            plot.PlottableList.Add(new CurveLine(runs) { Style = Style(m, maps[m]) });
        }

        Look.FixMargins(plot);
        plot.Axes.AutoScale();
        return plot;
    }

    // Stretches of the line inside the sheet.
    private static List<Coordinates[]> Runs(
        double[] volts, TriangleFinder finder, Point2 centre, Point2 direction, double reach, double scale, double scaleV)
    {
        List<Coordinates[]> runs = [];
        List<Coordinates> run = [];
        for (int k = 0; k <= Samples; k++)
        {
            double s = reach * ((2.0 * k / Samples) - 1);
            Point2 p = centre + (s * direction);
            double? v = finder.Value(volts, p.X, p.Y);
            if (v is { } value)
            {
                run.Add(new(s * scale, value * scaleV));
            }

            if ((v is null || k == Samples) && run.Count > 0)
            {
                if (run.Count > 1)
                {
                    runs.Add([.. run]);
                }

                run.Clear();
            }
        }

        return runs;
    }
}
