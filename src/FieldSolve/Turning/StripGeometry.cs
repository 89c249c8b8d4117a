using FieldSolve.Device;
using FieldSolve.Geometry;

namespace FieldSolve.Turning;

/// <summary>A wiring taken for a strip with a uniform field.</summary>
/// <param name="Length">Distance of the along probes in the direction of the current, metres; 0 without such a pair.</param>
/// <param name="Width">Conducting width of the sheet across the current, half way between the along probes (or source and drain), metres.</param>
internal sealed record StripGeometry(double Length, double Width)
{
    private const double LongestPiece = 0.002;   // of an arc, radians

    public static StripGeometry Of(SheetDevice device, Wiring wiring, double direction)
    {
        (double s, double c) = Math.SinCos(direction);
        Point2 forward = new(c, s);
        Point2 Place(Terminal t) => t.IsTip ? device.Tips[t.Index].At : device.Contacts[t.Index].Middle;
        (Point2 from, Point2 to) = wiring.Along is { } along
            ? (Place(along.Plus), Place(along.Minus))
            : (device.Contacts[wiring.Source].Middle, device.Contacts[wiring.Drain].Middle);
        double length = wiring.Along is null ? 0 : Point2.Dot(to - from, forward);
        return new(length, WidthOf(device.Domain, 0.5 * (from + to), forward));
    }

    // The line across the current meets the rim an even number of times; between the first and second, third and fourth, … it runs in the sheet.
    private static double WidthOf(Domain domain, Point2 through, Point2 forward)
    {
        var cuts = new List<double>();
        foreach (DomainEdge edge in domain.Edges.Where(e => e.IsRim))
        {
            int pieces = edge.Curve.IsArc ? 1 + (int)(Math.Abs(edge.Curve.Sweep) / LongestPiece) : 1;
            Point2 a = edge.Curve.Start;
            for (int k = 1; k <= pieces; k++)
            {
                Point2 b = k == pieces ? edge.Curve.End : edge.Curve.At((double)k / pieces);
                double before = Point2.Dot(a - through, forward), after = Point2.Dot(b - through, forward);
                if (before >= 0 != after >= 0)
                {
                    cuts.Add(Point2.Dot(a + (before / (before - after) * (b - a)) - through, forward.Left));
                }

                a = b;
            }
        }

        cuts.Sort();
        double width = 0;
        for (int k = 0; k + 1 < cuts.Count; k += 2)
        {
            width += cuts[k + 1] - cuts[k];
        }

        return width > 0 ? width : domain.Size;
    }
}
