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

    /// <summary>Scaled, turned about the origin, then moved.</summary>
    public sealed record Motion(double Scale, double Turn, Point2 By)
    {
        public Point2 Of(Point2 p) => (Scale * p).Turned(Turn) + By;

        public Curve Of(Curve c) => c.IsArc
            ? Curve.Arc(Of(c.Centre), Scale * c.Radius, c.StartAngle + Turn, c.Sweep, Of(c.Start), Of(c.End))
            : Curve.Segment(Of(c.Start), Of(c.End));

        public Outline Of(Outline outline) => new([.. outline.Loops.Select(l => l.Select(Of).ToArray())]);

        public ContactPlacement Of(ContactPlacement c) => new(
            c.Span is { } s ? s with { From = Scale * s.From, Length = Scale * s.Length } : null, c.Pad?.Select(Of).ToArray(), c.IdealPad);
    }

    public static ContactPlacement Edge(int loop, double from, double length) => new(new RimSpan(loop, from, length), null, false);

    public static ContactPlacement Ideal(params Point2[] corners) => new(null, corners, true);

    public static ContactPlacement Resistive(params Point2[] corners) => new(null, corners, false);
}
