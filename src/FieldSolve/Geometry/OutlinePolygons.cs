using NetTopologySuite;
using NetTopologySuite.Geometries;
using NetTopologySuite.Geometries.Implementation;

namespace FieldSolve.Geometry;

/// <summary>Between outlines and NetTopologySuite's polygons.</summary>
internal static class OutlinePolygons
{
    private const int PointsPerTurn = 512;

    /// <summary>Makes polygons with the newer, more robust overlay.</summary>
    public static GeometryFactory Factory { get; } = new NtsGeometryServices(
        CoordinateArraySequenceFactory.Instance,
        PrecisionModel.Floating.Value,
        0,
        GeometryOverlay.NG,
        new CoordinateEqualityComparer()).CreateGeometryFactory();

    /// <summary>The outline as a polygon. Arcs become chords.</summary>
    /// <param name="outline">Each loop must close.</param>
    /// <param name="scale">Units of the polygon per metre.</param>
    public static Polygon Polygon(Outline outline, double scale = 1)
    {
        LinearRing[] rings = [.. outline.Loops.Select(l => Ring([.. l.SelectMany(Drawn)], scale))];
        return Factory.CreatePolygon(rings[0], rings[1..]);
    }

    public static Polygon Polygon(IReadOnlyList<Point2> corners) => Factory.CreatePolygon(Ring(corners, 1));

    /// <summary>A ring's corners, scaled, as a loop of segments without coincident neighbours.</summary>
    public static Curve[] Loop(LineString ring, double scale, double tolerance)
    {
        List<Point2> corners = Distinct([.. ring.Coordinates.Select(c => new Point2(scale * c.X, scale * c.Y))], tolerance);
        if (corners.Count < 3)
        {
            throw new LayoutException("an outline and each of its holes need at least three distinct corners");
        }

        return Segments(corners);
    }

    /// <summary>Drops corners that coincide with the one kept before them, and last ones that coincide with the first.</summary>
    public static List<Point2> Distinct(IReadOnlyList<Point2> corners, double tolerance)
    {
        var kept = new List<Point2>(corners.Count);
        foreach (Point2 p in corners)
        {
            if (kept.Count == 0 || !(Point2.Distance(kept[^1], p) <= tolerance))
            {
                kept.Add(p);
            }
        }

        while (kept.Count > 1 && Point2.Distance(kept[^1], kept[0]) <= tolerance)
        {
            kept.RemoveAt(kept.Count - 1);
        }

        return kept;
    }

    public static Curve[] Segments(IReadOnlyList<Point2> corners) =>
        [.. corners.Select((p, i) => Curve.Segment(p, corners[(i + 1) % corners.Count]))];

    private static LinearRing Ring(IReadOnlyList<Point2> corners, double scale) => Factory.CreateLinearRing(
        [.. corners.Append(corners[0]).Select(p => new Coordinate(scale * p.X, scale * p.Y))]);

    // Chords between the arc's ends and the multiples of a fixed angle, so that concentric circles become similar polygons that
    // cannot cross however close they are.
    private static IEnumerable<Point2> Drawn(Curve c)
    {
        yield return c.Start;
        if (!c.IsArc)
        {
            yield break;
        }

        const double Step = 2 * Math.PI / PointsPerTurn;
        double a = c.StartAngle, b = a + c.Sweep, sign = Math.Sign(c.Sweep);
        for (double k = Math.Floor((sign * a / Step) + 1); k * Step < (sign * b) - (Step / 1000); k++)
        {
            double t = ((sign * k * Step) - a) / c.Sweep;
            if (t * Math.Abs(c.Sweep) > Step / 1000)
            {
                yield return c.At(t);
            }
        }
    }
}
