using System.Globalization;
using NetTopologySuite.Geometries;
using NetTopologySuite.Operation.Buffer;

namespace FieldSolve.Geometry;

/// <summary>Takes a dead edge off an outline.</summary>
internal static class OutlineInset
{
    private const double MitreLimit = 5;

    public static Outline Of(Outline outline, double distance)
    {
        if (!(distance >= 0) || double.IsInfinity(distance))
        {
            throw new ArgumentOutOfRangeException(nameof(distance), string.Create(
                CultureInfo.InvariantCulture, $"The width of the dead edge is {distance:G6} m; it must be finite and not negative."));
        }

        return distance == 0 ? outline
            : outline.Loops.All(IsCircle) ? Circles(outline, distance)
            : outline.Pieces.Any(c => c.IsArc) ? throw new LayoutException("a dead edge is not available for outlines that mix arcs and straight edges")
            : Straight(outline, distance);
    }

    private static bool IsCircle(IReadOnlyList<Curve> loop) =>
        loop.All(c => c.IsArc && c.Centre == loop[0].Centre && c.Radius == loop[0].Radius)
        && Math.Abs(Math.Abs(loop.Sum(c => c.Sweep)) - (2 * Math.PI)) < 1e-9;

    private static Outline Circles(Outline outline, double distance)
    {
        Curve[] circles = [.. outline.Loops.Select(l => l[0])];
        Point2 centre = circles[0].Centre;
        double radius = circles[0].Radius - distance;
        if (!(radius > outline.Tolerance))
        {
            throw NothingLeft();
        }

        for (int i = 1; i < circles.Length; i++)
        {
            double hole = circles[i].Radius + distance, shift = Point2.Distance(circles[i].Centre, centre);
            if (hole - shift >= radius - outline.Tolerance)
            {
                throw NothingLeft();
            }

            if (hole + shift >= radius - outline.Tolerance)
            {
                throw new LayoutException("the dead edges of the rim and of a hole meet");
            }

            for (int j = 1; j < i; j++)
            {
                if (hole + circles[j].Radius + distance >= Point2.Distance(circles[i].Centre, circles[j].Centre) - outline.Tolerance)
                {
                    throw new LayoutException("the dead edges of two holes meet");
                }
            }
        }

        return new([.. outline.Loops.Select((l, i) => l.Select(c =>
            Curve.Arc(c.Centre, c.Radius + (i == 0 ? -distance : distance), c.StartAngle, c.Sweep)).ToArray())]);
    }

    private static Outline Straight(Outline outline, double distance)
    {
        // By a power of two, which costs no rounding.
        double scale = Math.ScaleB(1, -Math.ILogB(outline.Size));
        var how = new BufferParameters(16, EndCapStyle.Flat, JoinStyle.Mitre, MitreLimit) { SimplifyFactor = 1e-6 };
        NetTopologySuite.Geometries.Geometry left = OutlinePolygons.Polygon(outline, scale).Buffer(-scale * distance, how);
        double sliver = outline.Tolerance * outline.Size * scale * scale;
        Polygon[] parts = [.. Enumerable.Range(0, left.NumGeometries).Select(left.GetGeometryN).OfType<Polygon>().Where(p => p.Area > sliver)];
        return parts.Length switch
        {
            0 => throw NothingLeft(),
            1 => Outline.FromPolygon(parts[0], 1 / scale),
            _ => throw new LayoutException(string.Create(
                CultureInfo.InvariantCulture, $"the dead edge leaves {parts.Length} separate pieces of the sheet")),
        };
    }

    private static LayoutException NothingLeft() => new("the dead edge leaves nothing of the sheet");
}
