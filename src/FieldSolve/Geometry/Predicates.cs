namespace FieldSolve.Geometry;

/// <summary>
/// Orientation and in-circle tests whose sign is always right: a rounding-error bound settles the clear cases, expansion
/// arithmetic the rest. J. R. Shewchuk, "Adaptive precision floating-point arithmetic and fast robust geometric predicates",
/// Discrete Comput. Geom. 18 (1997) 305. Coordinates are finite; squares and fourth powers of their differences and of their
/// last places must stay within the range of a double, which holds from 1e-40 to 1e60.
/// </summary>
public static class Predicates
{
    private const double Epsilon = 1.1102230246251565e-16; // 2^-53
    private const double OrientBound = (3 + (16 * Epsilon)) * Epsilon;
    private const double CircleBound = (10 + (96 * Epsilon)) * Epsilon;

    // The second stage of the in-circle test works to 2^-104 per operation; some sixty operations, with room to spare.
    private const double DoubledBound = 1e-28;

    /// <summary>
    /// Twice the signed area of triangle abc: positive when c lies to the left of a to b, zero exactly when the three are on a line.
    /// Only the sign is exact.
    /// </summary>
    public static double Orient(double ax, double ay, double bx, double by, double cx, double cy)
    {
        double left = (ax - cx) * (by - cy);
        double right = (ay - cy) * (bx - cx);
        double det = left - right;
        double bound = OrientBound * (Math.Abs(left) + Math.Abs(right));
        return Math.Abs(det) > bound ? det : OrientExact(ax, ay, bx, by, cx, cy);
    }

    /// <inheritdoc cref="Orient(double, double, double, double, double, double)"/>
    public static double Orient(Point2 a, Point2 b, Point2 c) => Orient(a.X, a.Y, b.X, b.Y, c.X, c.Y);

    /// <summary>
    /// Positive when d lies inside the circle through a, b, c (counter-clockwise), negative outside, zero exactly on it.
    /// Only the sign is exact.
    /// </summary>
    public static double InCircle(double ax, double ay, double bx, double by, double cx, double cy, double dx, double dy)
    {
        double adx = ax - dx, ady = ay - dy;
        double bdx = bx - dx, bdy = by - dy;
        double cdx = cx - dx, cdy = cy - dy;

        double bc = bdx * cdy, cb = cdx * bdy;
        double ca = cdx * ady, ac = adx * cdy;
        double ab = adx * bdy, ba = bdx * ady;
        double al = (adx * adx) + (ady * ady);
        double bl = (bdx * bdx) + (bdy * bdy);
        double cl = (cdx * cdx) + (cdy * cdy);

        double det = (al * (bc - cb)) + (bl * (ca - ac)) + (cl * (ab - ba));
        double permanent = (al * (Math.Abs(bc) + Math.Abs(cb)))
            + (bl * (Math.Abs(ca) + Math.Abs(ac)))
            + (cl * (Math.Abs(ab) + Math.Abs(ba)));
        if (Math.Abs(det) > CircleBound * permanent)
        {
            return det;
        }

        double doubled = InCircleDoubled(ax, ay, bx, by, cx, cy, dx, dy);
        return Math.Abs(doubled) > DoubledBound * permanent ? doubled : InCircleExact(ax, ay, bx, by, cx, cy, dx, dy);
    }

    private static double OrientExact(double ax, double ay, double bx, double by, double cx, double cy)
    {
        Span<double> acx = stackalloc double[2], bcy = stackalloc double[2], acy = stackalloc double[2], bcx = stackalloc double[2];
        acx[1] = Expansion.Difference(ax, cx, out acx[0]);
        bcy[1] = Expansion.Difference(by, cy, out bcy[0]);
        acy[1] = Expansion.Difference(ay, cy, out acy[0]);
        bcx[1] = Expansion.Difference(bx, cx, out bcx[0]);
        Span<double> left = stackalloc double[8], right = stackalloc double[8], det = stackalloc double[16];
        return Largest(det[..Minor(acx, bcy, bcx, acy, left, right, det)]);
    }

    // det = a b - c d
    private static int Minor(
        ReadOnlySpan<double> a, ReadOnlySpan<double> b, ReadOnlySpan<double> c, ReadOnlySpan<double> d, Span<double> left, Span<double> right, Span<double> det)
    {
        int l = Expansion.Multiply(a, b, left);
        int r = Expansion.Multiply(c, d, right);
        Expansion.Negate(right[..r]);
        return Expansion.Add(left[..l], right[..r], det);
    }

    private static double Largest(ReadOnlySpan<double> e) => e.IsEmpty ? 0 : e[^1];

    private static double InCircleDoubled(double ax, double ay, double bx, double by, double cx, double cy, double dx, double dy)
    {
        Doubled adx = Doubled.Difference(ax, dx), ady = Doubled.Difference(ay, dy);
        Doubled bdx = Doubled.Difference(bx, dx), bdy = Doubled.Difference(by, dy);
        Doubled cdx = Doubled.Difference(cx, dx), cdy = Doubled.Difference(cy, dy);
        Doubled a = ((adx * adx) + (ady * ady)) * ((bdx * cdy) - (cdx * bdy));
        Doubled b = ((bdx * bdx) + (bdy * bdy)) * ((cdx * ady) - (adx * cdy));
        Doubled c = ((cdx * cdx) + (cdy * cdy)) * ((adx * bdy) - (bdx * ady));
        return (a + b + c).High;
    }

    private static double InCircleExact(double ax, double ay, double bx, double by, double cx, double cy, double dx, double dy)
    {
        Span<double> a = stackalloc double[512], b = stackalloc double[512], c = stackalloc double[512];
        int na = LiftTimesMinor(ax, ay, bx, by, cx, cy, dx, dy, a);
        int nb = LiftTimesMinor(bx, by, cx, cy, ax, ay, dx, dy, b);
        int nc = LiftTimesMinor(cx, cy, ax, ay, bx, by, dx, dy, c);
        Span<double> ab = stackalloc double[1024], det = stackalloc double[1536];
        int nab = Expansion.Add(a[..na], b[..nb], ab);
        return Largest(det[..Expansion.Add(ab[..nab], c[..nc], det)]);
    }

    // |p - d|^2 ((q - d) x (r - d))
    private static int LiftTimesMinor(
        double px, double py, double qx, double qy, double rx, double ry, double dx, double dy, Span<double> result)
    {
        Span<double> v = stackalloc double[12];
        v[1] = Expansion.Difference(px, dx, out v[0]);
        v[3] = Expansion.Difference(py, dy, out v[2]);
        v[5] = Expansion.Difference(qx, dx, out v[4]);
        v[7] = Expansion.Difference(qy, dy, out v[6]);
        v[9] = Expansion.Difference(rx, dx, out v[8]);
        v[11] = Expansion.Difference(ry, dy, out v[10]);
        Span<double> left = stackalloc double[8], right = stackalloc double[8], lift = stackalloc double[16], minor = stackalloc double[16];
        int nx = Expansion.Multiply(v[..2], v[..2], left);
        int ny = Expansion.Multiply(v[2..4], v[2..4], right);
        int nl = Expansion.Add(left[..nx], right[..ny], lift);
        int nm = Minor(v[4..6], v[10..12], v[8..10], v[6..8], left, right, minor);
        return Expansion.Multiply(lift[..nl], minor[..nm], result);
    }

    // A number as the unevaluated sum of two doubles, about 32 digits: T. J. Dekker, Numer. Math. 18 (1971) 224.
    private readonly record struct Doubled(double High, double Low)
    {
        public static Doubled Difference(double a, double b)
        {
            double d = Expansion.Difference(a, b, out double tail);
            return new(d, tail);
        }

        public static Doubled operator +(Doubled a, Doubled b)
        {
            double s = Expansion.Sum(a.High, b.High, out double tail);
            tail += a.Low + b.Low;
            double high = s + tail;
            return new(high, tail - (high - s));
        }

        public static Doubled operator -(Doubled a, Doubled b) => a + new Doubled(-b.High, -b.Low);

        public static Doubled operator *(Doubled a, Doubled b)
        {
            double p = Expansion.Product(a.High, b.High, out double tail);
            tail += (a.High * b.Low) + (a.Low * b.High);
            double high = p + tail;
            return new(high, tail - (high - p));
        }
    }
}
