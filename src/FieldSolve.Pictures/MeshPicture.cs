using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Readings;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>The mesh, and how the estimated error fell from mesh to mesh.</summary>
internal static class MeshPicture
{
    private const int MostNamed = 24;

    /// <summary>The triangles with the rim and the contacts.</summary>
    public static Figure Mesh(DriveResult result)
    {
        TriangleMesh mesh = result.Mesh;
        string title = string.Create(System.Globalization.CultureInfo.InvariantCulture, $"Mesh: {mesh.TriangleCount:N0} triangles").Replace(',', '\u202f');
        SheetFrame frame = SheetFrame.Around(result.Device, title, false, (0.05, 0.05), 560);
        frame.AddPadMetal(result.Device);
        frame.Plot.PlottableList.Add(new MeshLines(mesh, frame.Scale.Factor));
        frame.AddDevice(result.Device, null);
        return Figure.Of(frame.Plot, frame.Width, frame.Height);
    }

    /// <summary>Largest estimated error over the wanted one against the number of unknowns; null when there is nothing to show.</summary>
    public static Figure? Convergence(DriveResult result)
    {
        List<(string Wiring, int Index, string Part, (double X, double Y)[] Points)> lines = [];
        for (int w = 0; w < result.Device.Wirings.Count; w++)
        {
            string name = result.Device.Wirings[w].Name;
            foreach (string part in new[] { "value", "even" })
            {
                (double X, double Y)[] points =
                [
                    .. result.Levels
                        .Select(l => (l.Unknowns, Ratio: l.Estimates.Where(e => e.Wiring == name && e.Part == part && e.Wanted > 0)
                            .Select(e => e.Error / e.Wanted).DefaultIfEmpty(0).Max()))
                        .Where(p => p.Ratio > 0 && double.IsFinite(p.Ratio) && p.Unknowns > 0)
                        .Select(p => (Math.Log10(p.Unknowns), Math.Log10(p.Ratio))),
                ];
                if (points.Length > 0)
                {
                    lines.Add((name, w, part, points));
                }
            }
        }

        if (lines.Count == 0)
        {
            return null;
        }

        Plot plot = Look.NewPlot("Refinement", "unknowns", "estimated error / wanted error");
        for (int k = 0; k < lines.Count; k++)
        {
            double[] x = [.. lines[k].Points.Select(p => p.X)], y = [.. lines[k].Points.Select(p => p.Y)];
            plot.PlottableList.Add(new CurveLine([[.. x.Zip(y, (a, b) => new Coordinates(a, b))]]) { Style = Style(lines[k]) });
        }

        IEnumerable<(double X, double Y)> all = lines.SelectMany(l => l.Points);
        (double x0, double x1) = (all.Min(p => p.X) - 0.12, all.Max(p => p.X) + 0.12);
        (double y0, double y1) = (Math.Min(0, all.Min(p => p.Y)) - 0.25, Math.Max(0, all.Max(p => p.Y)) + 0.25);
        KeyEntry wanted = new("wanted", Look.Ink, 1.2f, [2, 3], MarkerShape.None);
        plot.PlottableList.Add(new CurveLine([[new(x0, 0), new(x1, 0)]]) { Style = wanted });
        plot.Axes.SetLimits(x0, x1, y0, y1);
        plot.Axes.Bottom.TickGenerator = Levels.LogTicks(x0, x1);
        plot.Axes.Left.TickGenerator = Levels.LogTicks(y0, y1);
        Look.FixMargins(plot);
        return Figure.Of(plot, 560, 340).WithKeyRight([.. lines.Take(MostNamed).Select(Style), wanted]);
    }

    private static KeyEntry Style((string Wiring, int Index, string Part, (double X, double Y)[] Points) line) =>
        KeyEntry.Curve(line.Index, $"{Look.Short(line.Wiring, 14)}, {(line.Part == "even" ? "even part" : "voltage")}") with
        {
            Dash = line.Part == "even" ? Look.Dash(1) : null,
        };
}
