using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Measured;

namespace FieldSolve.Runs;

/// <summary>
/// What the probe shows at the points of a map, by shift x, shift y, turn, scale, gain and offset. A point that falls off the sheet shows what the nearest rim does, so that the sum of
/// squares stays continuous.
/// </summary>
internal sealed class OverlayFunction(MapSampler sampler, FieldMap map, double[] values, IReadOnlyList<MapPoint> points, Point2 centre, double size) : IFitFunction
{
    public const int ShiftX = 0, ShiftY = 1, Turn = 2, Scale = 3, Gain = 4, Offset = 5, Count = 6;

    // Of the size of the sheet: far above rounding, far below what a map resolves.
    private const double Step = 1e-5;

    /// <summary>Where a point of the map lies on the sheet.</summary>
    public static Point2 Place(double[] p, MapPoint point, Point2 centre)
    {
        (double s, double c) = Math.SinCos(p[Turn]);
        double x = point.X - centre.X, y = point.Y - centre.Y;
        return new(centre.X + (p[Scale] * ((c * x) - (s * y))) + p[ShiftX], centre.Y + (p[Scale] * ((s * x) + (c * y))) + p[ShiftY]);
    }

    /// <summary>The computed value at a place; null off the sheet.</summary>
    public double? Inside(Point2 at) => sampler.Value(values, at.X, at.Y);

    public double[]? Values(double[] p, CancellationToken cancel) => [.. points.Select(q => (p[Gain] * At(Place(p, q, centre))) + p[Offset])];

    public double[,] Jacobian(double[] p, CancellationToken cancel)
    {
        double[,] jacobian = new double[points.Count, Count];
        double h = Step * size;
        for (int i = 0; i < points.Count; i++)
        {
            Point2 at = Place(p, points[i], centre);
            double gx = p[Gain] * (At(new(at.X + h, at.Y)) - At(new(at.X - h, at.Y))) / (2 * h);
            double gy = p[Gain] * (At(new(at.X, at.Y + h)) - At(new(at.X, at.Y - h))) / (2 * h);
            double rx = at.X - centre.X - p[ShiftX], ry = at.Y - centre.Y - p[ShiftY];
            jacobian[i, ShiftX] = gx;
            jacobian[i, ShiftY] = gy;
            jacobian[i, Turn] = (gy * rx) - (gx * ry);
            jacobian[i, Scale] = ((gx * rx) + (gy * ry)) / p[Scale];
            jacobian[i, Gain] = At(at);
            jacobian[i, Offset] = 1;
        }

        return jacobian;
    }

    private double At(Point2 p) => Inside(p) ?? values[sampler.NearestRim(p.X, p.Y).Node];

    /// <summary>Smallest and largest value of the map's nodes.</summary>
    public (double Low, double High) Range => (values.Min(), values.Max());

    /// <summary>The map.</summary>
    public FieldMap Map => map;
}
