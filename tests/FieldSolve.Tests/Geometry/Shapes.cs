using FieldSolve.Geometry;

namespace FieldSolve.Tests.GeometryTests;

/// <summary>Outlines the tests use.</summary>
internal static class Shapes
{
    public static Outline Disc(double radius, Point2 centre = default) => new([[Curve.Arc(centre, radius, 0, 2 * Math.PI)]]);

    public static Outline Ring(double inner, double outer, Point2 centre = default) =>
        new([[Curve.Arc(centre, outer, 0, 2 * Math.PI)], [Curve.Arc(centre, inner, 0, -2 * Math.PI)]]);

    /// <summary>Centred at the origin, starting at the lower left corner.</summary>
    public static Outline Bar(double length, double width) => new([Loop(Rectangle(-length / 2, -width / 2, length / 2, width / 2))]);

    public static Point2[] Rectangle(double x0, double y0, double x1, double y1) => [new(x0, y0), new(x1, y0), new(x1, y1), new(x0, y1)];

    /// <summary>A polygon without holes.</summary>
    public static Outline Simple(Point2[] corners) => Polygon([corners]);

    public static Outline Polygon(params Point2[][] loops) => new([.. loops.Select(Loop)]);

    public static Curve[] Loop(Point2[] corners) =>
        [.. corners.Select((p, i) => Curve.Segment(p, corners[(i + 1) % corners.Length]))];

    /// <summary>The same outline scaled, then moved.</summary>
    public static Outline Moved(Outline outline, double scale, Point2 by) => new([.. outline.Loops.Select(l => l.Select(c => Moved(c, scale, by)).ToArray())]);

    public static Curve Moved(Curve c, double scale, Point2 by) => c.IsArc
        ? Curve.Arc((scale * c.Centre) + by, scale * c.Radius, c.StartAngle, c.Sweep, (scale * c.Start) + by, (scale * c.End) + by)
        : Curve.Segment((scale * c.Start) + by, (scale * c.End) + by);

    public static ContactPlacement Edge(int loop, double from, double length) => new(new RimSpan(loop, from, length), null, false);

    public static ContactPlacement Ideal(params Point2[] corners) => new(null, corners, true);

    public static ContactPlacement Resistive(params Point2[] corners) => new(null, corners, false);
}
