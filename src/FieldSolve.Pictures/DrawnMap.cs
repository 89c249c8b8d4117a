using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>The map of a wiring prepared for drawing; all its pictures share it.</summary>
internal sealed class DrawnMap(SheetDevice device, FieldMap map, FineMesh mesh, TriangleFinder finder)
{
    private const double MapMargin = 0.06, MapSize = 560, LeastField = 0.01;

    private Wiring Wiring => device.Wirings.First(w => w.Name == map.Wiring);

    /// <summary>Potential in colour with equipotential lines.</summary>
    public Figure Potential()
    {
        double[] volts = mesh.Quadratic(map.Potential);
        SiScale scale = SiScale.For(Math.Max(Math.Abs(volts.Min()), Math.Abs(volts.Max())), "V");
        double[] values = [.. volts.Select(v => v * scale.Factor)];
        double low = values.Min(), high = values.Max(), step = Levels.Step(high - low, 22);
        SheetFrame frame = Frame("Potential");
        frame.AddPadMetal(device);
        MapImage image = new(mesh, values, frame.Scale.Factor, MapColours.Shore, low, high);
        frame.Plot.PlottableList.Add(image);
        List<Point2[]> lines = [];
        foreach (double level in Levels.Between(low, high, step))
        {
            lines.AddRange(LevelLines.Of(mesh, values, level).Select(l => LevelLines.Thinned(l, 0.003 * frame.Size)));
        }

        frame.Plot.PlottableList.Add(new PolylineSet(lines, frame.Scale.Factor) { Colour = Colors.White, Width = 1, Halo = Colors.Black.WithAlpha(0.25) });
        frame.AddDevice(device, Wiring);
        AddBar(frame.Plot, image, $"potential ({scale.Unit}); lines every {SiScale.Number(step)} {scale.Unit}", null);
        return Figure.Of(frame.Plot, frame.Width, frame.Height);
    }

    /// <summary>Magnitude of the field in colour (logarithmic, between the 1st and the 99th percentile by area, at most two decades) with current streamlines.</summary>
    public Figure Field()
    {
        double[] ex = mesh.Straight(map.Ex), ey = mesh.Straight(map.Ey);
        double[] field = [.. ex.Zip(ey, (x, y) => Math.Sqrt((x * x) + (y * y)))];
        (double low, double high) = Percentiles(mesh, field);
        SiScale scale = SiScale.For(high, "V/m");
        double floor = high > 0 ? Math.Max(low, LeastField * high) : 1;
        double bottom = Math.Log10(floor * scale.Factor), top = high > floor ? Math.Log10(high * scale.Factor) : bottom + 1;
        double[] values = [.. field.Select(e => Math.Log10(Math.Max(e, 0.5 * floor) * scale.Factor))];
        SheetFrame frame = Frame("Field");
        frame.AddPadMetal(device);
        MapImage image = new(mesh, values, frame.Scale.Factor, MapColours.Ember, bottom, top);
        frame.Plot.PlottableList.Add(image);
        IReadOnlyList<Point2[]> lines = Streamlines.Of(mesh, finder, mesh.Straight(map.Kx), mesh.Straight(map.Ky), frame.Size / 32);
        frame.Plot.PlottableList.Add(new PolylineSet(lines, frame.Scale.Factor)
        {
            Colour = Colors.White,
            Width = 1.3f,
            Halo = Colors.Black.WithAlpha(0.45),
            Arrows = true,
        });
        frame.AddDevice(device, Wiring);
        AddBar(frame.Plot, image, $"|E| ({scale.Unit}); arrows: current", Levels.LogTicks(bottom, top));
        return Figure.Of(frame.Plot, frame.Width, frame.Height);
    }

    private SheetFrame Frame(string what) => SheetFrame.Around(
        device, $"{what}, {Look.Short(map.Wiring, 24)}, I = {SiScale.Text(map.Current, "A")}", true, (MapMargin, MapMargin), MapSize);

    /// <summary>The colour bar at the right of a map.</summary>
    internal static void AddBar(Plot plot, IHasColorAxis image, string label, ITickGenerator? ticks)
    {
        ScottPlot.Panels.ColorBar bar = plot.Add.ColorBar(image);
        bar.Label = label;
        bar.Width = 18;
        bar.LabelStyle.FontSize = Look.LabelSize;
        bar.LabelStyle.FontName = EmbeddedFont.Family;
        bar.LabelStyle.Bold = false;
        bar.LabelStyle.ForeColor = Look.Ink;
        bar.Axis.TickLabelStyle.FontSize = Look.TickSize;
        bar.Axis.TickLabelStyle.FontName = EmbeddedFont.Family;
        bar.Axis.TickLabelStyle.ForeColor = Look.Ink;
        bar.Axis.TickLabelStyle.OffsetY = Look.TickDrop;
        if (ticks is not null)
        {
            bar.Axis.TickGenerator = ticks;
        }
        else if (bar.Axis.TickGenerator is ScottPlot.TickGenerators.NumericAutomatic automatic)
        {
            automatic.LabelFormatter = v => SiScale.Number(v, 6);
        }
    }

    // Percentiles weighted by the area of the small triangles, each with the mean of its corners.
    internal static (double Low, double High) Percentiles(FineMesh mesh, double[] field)
    {
        int count = mesh.Count;
        double[] mean = new double[count], area = new double[count];
        for (int t = 0; t < count; t++)
        {
            (int a, int b, int c) = (mesh.Triangles[3 * t], mesh.Triangles[(3 * t) + 1], mesh.Triangles[(3 * t) + 2]);
            mean[t] = (field[a] + field[b] + field[c]) / 3;
            area[t] = Math.Abs(((mesh.X[b] - mesh.X[a]) * (mesh.Y[c] - mesh.Y[a])) - ((mesh.Y[b] - mesh.Y[a]) * (mesh.X[c] - mesh.X[a])));
        }

        Array.Sort(mean, area);
        double all = area.Sum(), below = 0, low = mean[0], high = mean[^1];
        for (int t = 0; t < count; t++)
        {
            low = below <= 0.01 * all ? mean[t] : low;
            below += area[t];
            if (below >= 0.99 * all)
            {
                high = mean[t];
                break;
            }
        }

        return (low, high);
    }
}
