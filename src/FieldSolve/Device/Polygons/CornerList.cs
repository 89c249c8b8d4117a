using FieldSolve.Geometry;

namespace FieldSolve.Device;

/// <summary>Corners of a polygon written in the device file.</summary>
internal static class CornerList
{
    private const double SameCorner = 1e-9; // of the polygon's size

    /// <summary>Corners in metres, without coincident neighbours; null, with faults, if they are no good.</summary>
    /// <param name="value">A list of points.</param>
    /// <param name="what">How messages call a point of it, such as 'pad'.</param>
    /// <param name="tooFew">What to say of under three corners.</param>
    /// <param name="faults">Where to report.</param>
    public static List<Point2>? Read(TomlArray value, string what, string tooFew, FaultList faults)
    {
        List<Point2?> points = [.. value.Items.Select(i => Values.Point(i, what, faults))];
        if (points.Any(p => p is null))
        {
            return null;
        }

        Point2[] given = [.. points.Select(p => p!.Value)];
        double size = given.Length == 0 ? 0 : Math.Max(given.Max(p => p.X) - given.Min(p => p.X), given.Max(p => p.Y) - given.Min(p => p.Y));
        List<Point2> corners = OutlinePolygons.Distinct(given, SameCorner * size);
        if (corners.Count >= 3)
        {
            return corners;
        }

        faults.Add(value.At, tooFew);
        return null;
    }
}
