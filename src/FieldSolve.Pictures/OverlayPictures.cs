using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Runs;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>All pictures of an overlay: measured and computed on one colour scale, and their difference.</summary>
public static class OverlayPictures
{
    private const double Margin = 0.06, Size = 430, FieldShare = 0.98;

    /// <summary>Draws the pictures and writes each as PNG and SVG; the same result always gives the same bytes.</summary>
    /// <param name="result">The overlay.</param>
    /// <param name="folder">Where they go; made when missing.</param>
    /// <param name="cancel">Stops between pictures; those already written stay.</param>
    /// <returns>The pictures in the order of the report.</returns>
    /// <exception cref="OperationCanceledException">The run was cancelled.</exception>
    /// <exception cref="IOException">A file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be written.</exception>
    public static IReadOnlyList<PictureFile> Write(OverlayResult result, string folder, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(folder);
        return PictureBatch.Write(
        [
            new(
                "overlay-maps", null, "overlay-maps", "The measured map laid on the sheet (points, gain and offset of the probe taken out) and the computed one, on one colour scale.",
                () => Maps(result)),
            new(
                "overlay-residual", null, "overlay-residual", "Measured less computed. Blue is below, orange above; rings mark places where the mean over the neighbouring points is beyond the noise.",
                () => Residual(result)),
        ], folder, cancel);
    }

    private static Wiring WiringOf(OverlayResult result) => result.Device.Wirings.First(w => w.Name == result.Map.Wiring);

    private static Figure Maps(OverlayResult result)
    {
        FineMesh mesh = FineMesh.Of(result.Map);
        bool field = result.Measured.Quantity == MapQuantity.Field;
        double[] computed = field
            ? [.. mesh.Straight(result.Map.Ex).Zip(mesh.Straight(result.Map.Ey), (x, y) => Math.Sqrt((x * x) + (y * y)))]
            : mesh.Quadratic(result.Map.Potential);
        double gain = result.Gain.Value, offset = result.Offset.Value;
        (Point2 Place, double Value)[] measured = [.. result.Points.Where(p => p.Model is not null).Select(p => (p.Place, (p.Point.Value - offset) / gain))];

        // The field has no bound at contact ends: the scale ends where nearly all of the sheet lies below.
        double low = field ? 0 : computed.Min(), high = field ? computed.Order().ElementAt((int)(FieldShare * (computed.Length - 1))) : computed.Max();
        SiScale scale = SiScale.For(Math.Max(Math.Abs(low), Math.Abs(high)), result.Unit);
        (low, high) = (low * scale.Factor, high * scale.Factor);
        MapColours colours = field ? MapColours.Ember : MapColours.Shore;
        string what = field ? "|E|" : "potential";
        SheetFrame left = Frame(result, "Measured"), right = Frame(result, "Computed");
        PointMap points = new([.. measured.Select(m => (m.Place, scale.Factor * m.Value))], Side(result), left.Scale.Factor, colours, low, high);
        left.Plot.PlottableList.Add(points);
        left.AddDevice(result.Device, WiringOf(result));
        DrawnMap.AddBar(left.Plot, points, $"{what} ({scale.Unit})", null);
        right.AddPadMetal(result.Device);
        MapImage image = new(mesh, [.. computed.Select(v => v * scale.Factor)], right.Scale.Factor, colours, low, high);
        right.Plot.PlottableList.Add(image);
        right.AddDevice(result.Device, WiringOf(result));
        DrawnMap.AddBar(right.Plot, image, $"{what} ({scale.Unit})", null);
        return Figure.Rows([left.Plot, right.Plot], left.Height > 1.4 * left.Width ? 2 : left.Width > 1.4 * left.Height ? 1 : 2, left.Width, left.Height);
    }

    private static Figure Residual(OverlayResult result)
    {
        OverlaidPoint[] on = [.. result.Points.Where(p => p.Model is not null)];
        double[] sizes = [.. on.Select(p => Math.Abs(p.Residual!.Value)).Order()];
        double most = Math.Max(3 * result.Noise, sizes[(int)(0.995 * (sizes.Length - 1))]);
        SiScale scale = SiScale.For(most, result.Unit);
        SheetFrame frame = Frame(result, "Measured − computed");
        PointMap points = new(
            [.. on.Select(p => (p.Place, scale.Factor * p.Residual!.Value))], Side(result), frame.Scale.Factor, MapColours.Diverging, -most * scale.Factor, most * scale.Factor);
        frame.Plot.PlottableList.Add(points);
        frame.AddDevice(result.Device, WiringOf(result));
        foreach (OverlayPlace p in result.Places)
        {
            frame.AddLines([[.. Enumerable.Range(0, 49).Select(k => p.Place + (1.6 * p.Radius * new Point2(Math.Cos(k * Math.PI / 24), Math.Sin(k * Math.PI / 24))))]], Look.Ink, 1.6f);
        }

        DrawnMap.AddBar(frame.Plot, points, $"residual ({scale.Unit}); noise {SiScale.Text(result.Noise, result.Unit, 2)}", null);
        return Figure.Of(frame.Plot, frame.Width, frame.Height);
    }

    private static SheetFrame Frame(OverlayResult result, string what) => SheetFrame.Around(
        result.Device, $"{what}, {Look.Short(result.Map.Wiring, 16)}, {SiScale.Text(result.Map.Current, "A", 3)}", true, (Margin, Margin), Size);

    // Squares that overlap a little, turned rasters too: from the area each point stands for.
    private static double Side(OverlayResult result)
    {
        Point2[] on = [.. result.Points.Where(p => p.Model is not null).Select(p => p.Place)];
        double area = 0;
        for (int t = 0; t < result.Map.TriangleCount; t++)
        {
            int a = result.Map.Nodes[6 * t], b = result.Map.Nodes[(6 * t) + 1], c = result.Map.Nodes[(6 * t) + 2];
            area += 0.5 * Math.Abs(((result.Map.X[b] - result.Map.X[a]) * (result.Map.Y[c] - result.Map.Y[a])) - ((result.Map.X[c] - result.Map.X[a]) * (result.Map.Y[b] - result.Map.Y[a])));
        }

        return 1.14 * Math.Sqrt(area / on.Length);
    }
}
