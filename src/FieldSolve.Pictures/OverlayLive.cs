using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>What the live report of an overlay shows: the three maps in the unit of the probe, so that they hold the numbers of overlay.csv.</summary>
internal static class OverlayLive
{
    // More points than this make the page slow to open; every so manieth is sent then.
    private const int MostPoints = 40_000;

    // The field has no bound at contact ends: colours end where nearly all of the sheet lies below.
    private const double FieldShare = 0.98, ResidualShare = 0.995;

    /// <summary>Collects it.</summary>
    public static LiveData Of(OverlayResult result)
    {
        bool field = result.Measured.Quantity == MapQuantity.Field;
        LiveMesh mesh = new(result.Map.X, result.Map.Y, result.Map.Nodes);
        double gain = result.Gain.Value, offset = result.Offset.Value;
        double[] values = [.. (field ? result.Map.Ex.Zip(result.Map.Ey, double.Hypot) : result.Map.Potential).Select(v => (gain * v) + offset)];
        OverlaidPoint[] on = [.. result.Points.Where(p => p.Model is not null)];
        int stride = (on.Length + MostPoints - 1) / MostPoints;
        OverlaidPoint[] sent = [.. on.Where((_, k) => k % stride == 0)];
        double[] sorted = [.. values.Order()], measured = [.. on.Select(p => p.Point.Value).Order()];
        (double from, double to) = field
            ? (Math.Min(At(sorted, 0), At(measured, 0.005)), At(sorted, FieldShare))
            : (Math.Min(At(sorted, 0), At(measured, 1 - ResidualShare)), Math.Max(At(sorted, 1), At(measured, ResidualShare)));
        double Most(Func<OverlaidPoint, double> of, double least) => Math.Max(least, At([.. on.Select(p => Math.Abs(of(p))).Order()], ResidualShare));
        Wiring wiring = result.Device.Wirings.First(w => w.Name == result.Map.Wiring);
        LiveData data = new()
        {
            Title = result.Device.Title,
            Comparison = new()
            {
                Title = $"{result.Device.Title}: {result.Map.Wiring}, {SiScale.Text(result.Map.Current, "A")}",
                Quantity = field ? "|E|" : "potential",
                Unit = result.Unit,
                Column = field ? "V_per_m" : "V",
                Table = field ? "ember" : "shore",
                Span = (from, to),
                Most = (Most(p => p.Residual!.Value, 3 * result.Noise), Math.Max(5, Math.Min(Most(p => p.Residual!.Value / p.Sigma, 0), 50)), Most(p => p.Residual!.Value - p.OfPatch, 3 * result.Noise)),
                HasPatch = result.Patch is not null,
                Mesh = 0,
                Values = values,
                Points =
                [
                    [.. sent.Select(p => p.Place.X)], [.. sent.Select(p => p.Place.Y)], [.. sent.Select(p => p.Point.Value)], [.. sent.Select(p => p.Model!.Value)], [.. sent.Select(p => p.Sigma)],
                    [.. sent.Select(p => p.Weight)], [.. sent.Select(p => p.OfPatch)],
                ],
                Lines = [.. sent.Select(p => p.Point.Line)],
                Reach = Spacing(result, on) * Math.Sqrt(stride),
                Places = [.. result.Places.Select(p => (p.Place.X, p.Place.Y, p.Radius))],
                Rim = LiveDevice.Rim(result.Device),
                Contacts = LiveDevice.Contacts(result.Device, wiring),
                Note = "In the unit of the probe: the computed map with the registered gain and offset. Rings mark places where the mean over neighbouring points is beyond the noise. The values are those of overlay.csv."
                    + (stride > 1 ? string.Create(CultureInfo.InvariantCulture, $" Of {on.Length} points one in {stride} is shown.") : ""),
            },
        };
        data.Meshes.Add(mesh);
        return data;
    }

    private static double At(double[] sorted, double share) => sorted[(int)Math.Round(share * (sorted.Length - 1))];

    // Somewhat more than from a point of a raster to the corner of its cell: over the area that the points cover.
    private static double Spacing(OverlayResult result, OverlaidPoint[] on)
    {
        double area = 0;
        for (int t = 0; t < result.Map.TriangleCount; t++)
        {
            int a = result.Map.Nodes[6 * t], b = result.Map.Nodes[(6 * t) + 1], c = result.Map.Nodes[(6 * t) + 2];
            area += 0.5 * Math.Abs(((result.Map.X[b] - result.Map.X[a]) * (result.Map.Y[c] - result.Map.Y[a])) - ((result.Map.X[c] - result.Map.X[a]) * (result.Map.Y[b] - result.Map.Y[a])));
        }

        double low = on.Min(p => p.Place.X), high = on.Max(p => p.Place.X), bottom = on.Min(p => p.Place.Y), top = on.Max(p => p.Place.Y);
        double covered = Math.Min(area, (high - low) * (top - bottom));
        return 0.85 * Math.Sqrt(Math.Max(covered, 1e-6 * area) / on.Length);
    }
}
