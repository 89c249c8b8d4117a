namespace FieldSolve.Geometry;

/// <summary>
/// Moves a whole rim outwards by a small amount (inwards where negative), piece by piece: circles change their radius, straight edges move
/// along their normals and meet at mitred corners. Every piece keeps its number, so that what sits on it can follow.
/// </summary>
internal static class OutlineGrowth
{
    /// <summary>The outline, larger by this amount on every side; holes shrink.</summary>
    /// <exception cref="LayoutException">An edge would vanish, or the outline mixes arcs and straight edges.</exception>
    public static Outline Of(Outline outline, double by) =>
        by == 0 ? outline : new([.. outline.Loops.Select(l => l.Any(c => c.IsArc) ? Circle(l, by) : (IReadOnlyList<Curve>)Polygon([.. l.Select(c => c.Start)], by))]);

    /// <summary>A polygon with every edge moved to its right by this amount: outwards for one that runs counter-clockwise.</summary>
    /// <exception cref="LayoutException">An edge would vanish.</exception>
    public static Curve[] Polygon(IReadOnlyList<Point2> corners, double by)
    {
        int n = corners.Count;
        var moved = new Point2[n];
        for (int k = 0; k < n; k++)
        {
            Point2 before = Unit(corners[k] - corners[(k + n - 1) % n]), after = Unit(corners[(k + 1) % n] - corners[k]);
            Point2 a = -before.Left, b = -after.Left;
            double share = 1 + Point2.Dot(a, b);
            if (!(share > 1e-3))
            {
                throw new LayoutException("a corner of the outline is too sharp to move its edges");
            }

            moved[k] = corners[k] + ((by / share) * (a + b));
        }

        for (int k = 0; k < n; k++)
        {
            if (!(Point2.Dot(moved[(k + 1) % n] - moved[k], corners[(k + 1) % n] - corners[k]) > 0))
            {
                throw new LayoutException("an edge of the outline vanishes when the outline shrinks");
            }
        }

        return OutlinePolygons.Segments(moved);
    }

    /// <summary>Where a stretch of rim is on the grown outline: between the same corners, or as long as before about the same middle.</summary>
    public static RimSpan Follow(RimSpan span, Outline from, Outline to)
    {
        double length = from.LoopLength(span.Loop);
        if (span.Length >= length - from.Tolerance)
        {
            return new(span.Loop, 0, to.LoopLength(span.Loop));
        }

        if (IsCorner(from, span.Loop, span.From) && IsCorner(from, span.Loop, span.From + span.Length))
        {
            double a = Foot(span.Loop, span.From, from, to), b = Foot(span.Loop, span.From + span.Length, from, to);
            return new(span.Loop, a, Outline.Wrapped(b - a, to.LoopLength(span.Loop)));
        }

        double middle = Foot(span.Loop, span.From + (span.Length / 2), from, to);
        return new(span.Loop, Outline.Wrapped(middle - (span.Length / 2), to.LoopLength(span.Loop)), span.Length);
    }

    /// <summary>Where a point of the rim is on the grown outline.</summary>
    public static Point2 Follow(RimPlace place, Outline from, Outline to) => to.At(place.Loop, Foot(place.Loop, place.S, from, to));

    /// <summary>Whether the rim turns at a place.</summary>
    public static bool IsCorner(Outline outline, int loop, double s)
    {
        (int piece, double t) = outline.PieceAt(loop, s);
        Curve c = outline.Pieces[piece];
        bool first = t * c.Length <= 2 * outline.Tolerance, last = (1 - t) * c.Length <= 2 * outline.Tolerance;
        if (!first && !last)
        {
            return false;
        }

        Curve before = first ? outline.Pieces[outline.Neighbour(piece, -1)] : c, after = first ? c : outline.Pieces[outline.Neighbour(piece, 1)];
        return Math.Abs(Point2.Cross(before.Tangent(1), after.Tangent(0))) > 1e-6 || Point2.Dot(before.Tangent(1), after.Tangent(0)) < 0;
    }

    private static double Foot(int loop, double s, Outline from, Outline to)
    {
        (int piece, double t) = from.PieceAt(loop, s);
        Curve was = from.Pieces[piece], now = to.Pieces[piece];
        double at = was.IsArc ? t : t <= 1e-9 ? 0 : t >= 1 - 1e-9 ? 1 : now.Nearest(was.At(t));
        return to.StartOf(piece) + (at * now.Length);
    }

    private static Curve[] Circle(IReadOnlyList<Curve> loop, double by)
    {
        if (!loop.All(c => c.IsArc && c.Centre == loop[0].Centre && c.Radius == loop[0].Radius))
        {
            throw new LayoutException("'growth' is not available for outlines that mix arcs and straight edges");
        }

        return [.. loop.Select(c =>
        {
            double radius = c.Radius + (c.Sweep > 0 ? by : -by);
            return radius > 0
                ? Curve.Arc(c.Centre, radius, c.StartAngle, c.Sweep)
                : throw new LayoutException("a circle of the outline vanishes when the outline shrinks");
        })];
    }

    private static Point2 Unit(Point2 v) => (1 / v.Length) * v;
}
