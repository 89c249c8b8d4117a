namespace FieldSolve.Geometry;

/// <summary>
/// A directed stretch of rim or of a pad's edge: a straight segment or a circular arc. The parameter t runs from 0
/// (start) to 1 (end) at constant speed. The end points are stored exactly, so that neighbouring stretches share them bit for bit.
/// </summary>
public readonly record struct Curve
{
    private Curve(Point2 start, Point2 end, Point2 centre, double radius, double startAngle, double sweep)
    {
        Start = start;
        End = end;
        Centre = centre;
        Radius = radius;
        StartAngle = startAngle;
        Sweep = sweep;
    }

    /// <summary>First point, metres.</summary>
    public Point2 Start { get; }

    /// <summary>Last point, metres.</summary>
    public Point2 End { get; }

    /// <summary>Centre of the arc; unused for a segment.</summary>
    public Point2 Centre { get; }

    /// <summary>Radius of the arc in metres; 0 for a segment.</summary>
    public double Radius { get; }

    /// <summary>Angle of the start seen from the centre, radians; unused for a segment.</summary>
    public double StartAngle { get; }

    /// <summary>Signed angle the arc covers, radians, positive counter-clockwise; 0 for a segment.</summary>
    public double Sweep { get; }

    /// <summary>True for a circular arc.</summary>
    public bool IsArc => Sweep != 0;

    /// <summary>Length along the stretch, metres.</summary>
    public double Length => IsArc ? Radius * Math.Abs(Sweep) : Point2.Distance(Start, End);

    /// <summary>A straight stretch.</summary>
    public static Curve Segment(Point2 start, Point2 end) => new(start, end, default, 0, 0, 0);

    /// <summary>An arc about a centre; sweep in radians, positive counter-clockwise.</summary>
    public static Curve Arc(Point2 centre, double radius, double startAngle, double sweep) =>
        new(OnCircle(centre, radius, startAngle), OnCircle(centre, radius, startAngle + sweep), centre, radius, startAngle, sweep);

    /// <summary>An arc whose end points are given exactly (they must lie on the circle up to rounding).</summary>
    public static Curve Arc(Point2 centre, double radius, double startAngle, double sweep, Point2 start, Point2 end) =>
        new(start, end, centre, radius, startAngle, sweep);

    /// <summary>The point at parameter t in [0, 1].</summary>
    public Point2 At(double t) => t switch
    {
        0 => Start,
        1 => End,
        _ when IsArc => OnCircle(Centre, Radius, StartAngle + (t * Sweep)),
        _ => new(Start.X + (t * (End.X - Start.X)), Start.Y + (t * (End.Y - Start.Y))),
    };

    /// <summary>Unit tangent in the direction of travel at parameter t.</summary>
    public Point2 Tangent(double t)
    {
        if (IsArc)
        {
            (double s, double c) = Math.SinCos(StartAngle + (t * Sweep));
            return Sweep > 0 ? new(-s, c) : new(s, -c);
        }

        Point2 d = End - Start;
        return (1 / d.Length) * d;
    }

    /// <summary>The stretch between two parameters, 0 &lt;= from &lt; to &lt;= 1.</summary>
    public Curve Part(double from, double to) => IsArc
        ? new(At(from), At(to), Centre, Radius, StartAngle + (from * Sweep), (to - from) * Sweep)
        : Segment(At(from), At(to));

    /// <summary>The same stretch travelled backwards.</summary>
    public Curve Reversed() => new(End, Start, Centre, Radius, StartAngle + Sweep, -Sweep);

    /// <summary>Parameter in [0, 1] of the point of the stretch nearest to p.</summary>
    public double Nearest(Point2 p)
    {
        if (!IsArc)
        {
            Point2 d = End - Start;
            return Math.Clamp(Point2.Dot(p - Start, d) / Point2.Dot(d, d), 0, 1);
        }

        Point2 r = p - Centre;
        double turn = Math.IEEERemainder(Math.Atan2(r.Y, r.X) - StartAngle - (Sweep / 2), 2 * Math.PI) + (Sweep / 2);
        double t = turn / Sweep;
        return t is >= 0 and <= 1 ? t : Point2.Distance(p, Start) <= Point2.Distance(p, End) ? 0 : 1;
    }

    private static Point2 OnCircle(Point2 centre, double radius, double angle)
    {
        (double s, double c) = Math.SinCos(angle);
        return new(centre.X + (radius * c), centre.Y + (radius * s));
    }
}
