using FieldSolve.Geometry;
using FieldSolve.Measured;

namespace FieldSolve.Runs;

/// <summary>
/// What the probe shows at the points of a map, by shift x, shift y, turn, scale, gain and offset, and where a patch is looked for by its place and the current missing in it. A point
/// that falls off the sheet shows what the nearest rim does, so that the sum of squares stays continuous.
/// </summary>
internal sealed class OverlayFunction(ComputedMap map, IReadOnlyList<MapPoint> points, PatchResponse? patch = null) : IFitFunction
{
    public const int ShiftX = 0, ShiftY = 1, Turn = 2, Scale = 3, Gain = 4, Offset = 5, Count = 6;
    public const int PatchX = 6, PatchY = 7, MissingX = 8, MissingY = 9, PatchCount = 10;

    // Of the size of the sheet: far above rounding, far below what a map resolves.
    private const double Step = 1e-5;

    // Of the width of a patch.
    private const double PatchStep = 0.1;

    private readonly Point2 centre = map.Centre;

    /// <summary>The computed map.</summary>
    public ComputedMap Map => map;

    /// <summary>Number of numbers.</summary>
    public int Length => patch is null ? Count : PatchCount;

    /// <summary>The patch that is looked for; null for none.</summary>
    public PatchResponse? Patch => patch;

    /// <summary>Where a point of the map lies on the sheet.</summary>
    public Point2 Place(double[] p, MapPoint point)
    {
        (double s, double c) = Math.SinCos(p[Turn]);
        double x = point.X - centre.X, y = point.Y - centre.Y;
        return new(centre.X + (p[Scale] * ((c * x) - (s * y))) + p[ShiftX], centre.Y + (p[Scale] * ((s * x) + (c * y))) + p[ShiftY]);
    }

    public double[]? Values(double[] p, CancellationToken cancel)
    {
        double[]? added = Added(p, 0, 0);
        return [.. points.Select(q => (p[Gain] * At(Place(p, q), added)) + p[Offset])];
    }

    public double[,] Jacobian(double[] p, CancellationToken cancel)
    {
        double[,] jacobian = new double[points.Count, Length];
        double h = Step * map.Size;
        double[]? added = Added(p, 0, 0);
        for (int i = 0; i < points.Count; i++)
        {
            Point2 at = Place(p, points[i]);
            double gx = p[Gain] * Slope(new(at.X + h, at.Y), at, new(at.X - h, at.Y), h, added), gy = p[Gain] * Slope(new(at.X, at.Y + h), at, new(at.X, at.Y - h), h, added);
            double rx = at.X - centre.X - p[ShiftX], ry = at.Y - centre.Y - p[ShiftY];
            jacobian[i, ShiftX] = gx;
            jacobian[i, ShiftY] = gy;
            jacobian[i, Turn] = (gy * rx) - (gx * ry);
            jacobian[i, Scale] = ((gx * rx) + (gy * ry)) / p[Scale];
            jacobian[i, Gain] = At(at, added);
            jacobian[i, Offset] = 1;
        }

        if (patch is not null)
        {
            AddPatch(p, jacobian);
        }

        return jacobian;
    }

    // At the rim one-sided, and none off the sheet: a step from the sheet's value to that of the nearest rim is no slope.
    private double Slope(Point2 ahead, Point2 here, Point2 behind, double h, double[]? added) => (On(ahead, added), On(here, added), On(behind, added)) switch
    {
        ({ } a, _, { } b) => (a - b) / (2 * h),
        ({ } a, { } m, _) => (a - m) / h,
        (_, { } m, { } b) => (m - b) / h,
        _ => 0,
    };

    private void AddPatch(double[] p, double[,] jacobian)
    {
        double d = PatchStep * patch!.Width;
        double[] right = Added(p, d, 0)!, left = Added(p, -d, 0)!, up = Added(p, 0, d)!, down = Added(p, 0, -d)!;
        (double[] x, double[] y) = patch.At(p[PatchX], p[PatchY]);
        for (int i = 0; i < points.Count; i++)
        {
            Point2 at = Place(p, points[i]);
            jacobian[i, PatchX] = p[Gain] * (patch.Value(right, at) - patch.Value(left, at)) / (2 * d);
            jacobian[i, PatchY] = p[Gain] * (patch.Value(up, at) - patch.Value(down, at)) / (2 * d);
            jacobian[i, MissingX] = p[Gain] * patch.Value(x, at);
            jacobian[i, MissingY] = p[Gain] * patch.Value(y, at);
        }
    }

    private double[]? Added(double[] p, double dx, double dy)
    {
        if (patch is null)
        {
            return null;
        }

        (double[] x, double[] y) = patch.At(p[PatchX] + dx, p[PatchY] + dy);
        return [.. x.Zip(y, (a, b) => (p[MissingX] * a) + (p[MissingY] * b))];
    }

    private double At(Point2 p, double[]? added) => On(p, added) ?? map.AtRim(p);

    private double? On(Point2 p, double[]? added) => map.Value(p) is { } v ? v + (added is null ? 0 : patch!.Value(added, p)) : null;
}
