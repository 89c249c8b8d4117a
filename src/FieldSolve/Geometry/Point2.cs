namespace FieldSolve.Geometry;

/// <summary>A point or a vector in the plane of the sheet. Metres (or volts per metre and so on for vectors).</summary>
/// <param name="X">To the right in the lab frame.</param>
/// <param name="Y">Up in the lab frame.</param>
public readonly record struct Point2(double X, double Y)
{
    /// <summary>Sum of two vectors.</summary>
    public static Point2 operator +(Point2 a, Point2 b) => new(a.X + b.X, a.Y + b.Y);

    /// <summary>Difference of two vectors.</summary>
    public static Point2 operator -(Point2 a, Point2 b) => new(a.X - b.X, a.Y - b.Y);

    /// <summary>The opposite vector.</summary>
    public static Point2 operator -(Point2 a) => new(-a.X, -a.Y);

    /// <summary>Scaled vector.</summary>
    public static Point2 operator *(double s, Point2 a) => new(s * a.X, s * a.Y);

    /// <summary>Euclidean length.</summary>
    public double Length => Math.Sqrt((X * X) + (Y * Y));

    /// <summary>The vector turned by +90 degrees (to its left).</summary>
    public Point2 Left => new(-Y, X);

    /// <summary>(x, y) in round-trip digits. The record's own text would follow <see cref="Left"/> without end.</summary>
    public override string ToString() => string.Create(System.Globalization.CultureInfo.InvariantCulture, $"({X:R}, {Y:R})");

    /// <summary>Scalar product.</summary>
    public static double Dot(Point2 a, Point2 b) => (a.X * b.X) + (a.Y * b.Y);

    /// <summary>The z component of the vector product; positive when b lies to the left of a.</summary>
    public static double Cross(Point2 a, Point2 b) => (a.X * b.Y) - (a.Y * b.X);

    /// <summary>Distance between two points.</summary>
    public static double Distance(Point2 a, Point2 b) => (b - a).Length;

    /// <summary>Turned counter-clockwise by an angle in radians about the origin.</summary>
    public Point2 Turned(double radians)
    {
        (double s, double c) = Math.SinCos(radians);
        return new((c * X) - (s * Y), (s * X) + (c * Y));
    }
}
