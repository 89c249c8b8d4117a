namespace FieldSolve.Geometry;

/// <summary>Boxes, distances and crossings of curves.</summary>
internal static class CurveMeasures
{
    /// <summary>The smallest upright rectangle about a curve (up to rounding).</summary>
    public static Box Bounds(this Curve curve)
    {
        Box box = Box.Of(curve.Start, curve.End);
        if (!curve.IsArc)
        {
            return box;
        }

        // An arc also reaches the circle's easternmost, northernmost, ... point where that lies on it.
        double low = curve.StartAngle + Math.Min(0, curve.Sweep), high = low + Math.Abs(curve.Sweep);
        const double Quarter = Math.PI / 2;
        for (double k = Math.Ceiling(low / Quarter); k * Quarter <= high; k++)
        {
            (double s, double c) = Math.SinCos(k * Quarter);
            box = box.With(Box.Of(curve.Centre + (curve.Radius * new Point2(c, s))));
        }

        return box;
    }

    /// <summary>Parameter of the nearest point; 0 for a curve without length.</summary>
    public static double NearestParameter(this Curve curve, Point2 p) =>
        !curve.IsArc && curve.Start == curve.End ? 0 : curve.Nearest(p);

    /// <summary>Distance from a point.</summary>
    public static double Distance(this Curve curve, Point2 p) => Point2.Distance(p, curve.At(curve.NearestParameter(p)));

    /// <summary>
    /// Twice the area swept by the ray from a fixed point that follows the curve, positive counter-clockwise; summed over a
    /// closed loop it gives twice the area whatever the fixed point.
    /// </summary>
    public static double TwiceSweptArea(this Curve curve, Point2 from) =>
        Point2.Cross(curve.Start - from, curve.End - from)
        + (curve.IsArc ? curve.Radius * curve.Radius * (curve.Sweep - Math.Sin(curve.Sweep)) : 0);

    /// <summary>How far the curve bulges from its chord; meant for arcs up to half a turn.</summary>
    public static double Bulge(this Curve curve) => curve.IsArc ? curve.Radius * (1 - Math.Cos(curve.Sweep / 2)) : 0;

    /// <summary>
    /// Where a straight segment meets a curve: at most two points, given on the curve. A line that grazes an arc closer than the
    /// tolerance meets it at one point. Ends count within the tolerance when the curve is an arc.
    /// </summary>
    public static List<Point2> Crossings(Curve segment, Curve curve, double tolerance)
    {
        Point2 a = segment.Start, d = segment.End - a;
        var points = new List<Point2>(2);
        if (!curve.IsArc)
        {
            Point2 e = curve.End - curve.Start;
            double side0 = Point2.Cross(d, curve.Start - a), side1 = Point2.Cross(d, curve.End - a);
            double side2 = Point2.Cross(e, a - curve.Start), side3 = Point2.Cross(e, segment.End - curve.Start);
            if ((side0 < 0) != (side1 < 0) && (side2 < 0) != (side3 < 0) && side0 != side1)
            {
                points.Add(curve.At(side0 / (side0 - side1)));
            }

            return points;
        }

        double length = d.Length;
        Point2 u = (1 / length) * d, w = curve.Centre - a;
        double foot = Point2.Dot(w, u), offset = Math.Abs(Point2.Cross(u, w));
        if (offset > curve.Radius + tolerance)
        {
            return points;
        }

        double half = offset >= curve.Radius - tolerance ? 0 : Math.Sqrt((curve.Radius - offset) * (curve.Radius + offset));
        Take(foot - half);
        if (half > 0)
        {
            Take(foot + half);
        }

        return points;

        void Take(double s)
        {
            if (s < -tolerance || s > length + tolerance)
            {
                return;
            }

            Point2 p = a + (s * u), on = curve.At(curve.Nearest(p));
            if (Point2.Distance(p, on) <= tolerance)
            {
                points.Add(on);
            }
        }
    }
}
