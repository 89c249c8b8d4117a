using FieldSolve.Device;
using FieldSolve.Geometry;

namespace FieldSolve.Turning;

/// <summary>A wiring taken for a strip with a uniform field: length between the along probes, width between the across probes.</summary>
/// <param name="Length">Distance of the along probes in the direction of the current, metres; 0 without such a pair.</param>
/// <param name="Width">Distance of the across probes across it, or the width of the sheet without such a pair, metres.</param>
internal sealed record StripGeometry(double Length, double Width)
{
    public static StripGeometry Of(SheetDevice device, Wiring wiring, double direction)
    {
        (double s, double c) = Math.SinCos(direction);
        Point2 forward = new(c, s);
        Point2 Place(Terminal t) => t.IsTip ? device.Tips[t.Index].At : device.Contacts[t.Index].Middle;
        double length = wiring.Along is { } along ? Point2.Dot(Place(along.Minus) - Place(along.Plus), forward) : 0;
        if (wiring.Across is { } across)
        {
            return new(length, Point2.Dot(Place(across.Plus) - Place(across.Minus), forward.Left));
        }

        double[] side = [.. device.Domain.Vertices.Concat(device.Domain.Edges.Select(e => e.Curve.At(0.5))).Select(p => Point2.Dot(p, forward.Left))];
        return new(length, side.Max() - side.Min());
    }
}
