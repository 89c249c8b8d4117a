namespace FieldSolve.Geometry;

/// <summary>An upright rectangle.</summary>
internal readonly record struct Box(double X0, double Y0, double X1, double Y1)
{
    public double Diagonal => new Point2(X1 - X0, Y1 - Y0).Length;

    public static Box Of(Point2 p) => new(p.X, p.Y, p.X, p.Y);

    public static Box Of(Point2 a, Point2 b) => new(Math.Min(a.X, b.X), Math.Min(a.Y, b.Y), Math.Max(a.X, b.X), Math.Max(a.Y, b.Y));

    public static Box Of(IEnumerable<Point2> points) =>
        points.Select(Of).Aggregate((a, b) => a.With(b));

    public Box With(Box b) => new(Math.Min(X0, b.X0), Math.Min(Y0, b.Y0), Math.Max(X1, b.X1), Math.Max(Y1, b.Y1));

    public Box Grown(double margin) => new(X0 - margin, Y0 - margin, X1 + margin, Y1 + margin);

    public bool Meets(Box b) => X0 <= b.X1 && b.X0 <= X1 && Y0 <= b.Y1 && b.Y0 <= Y1;

    /// <summary>Distance from a point; 0 inside.</summary>
    public double Distance(Point2 p) => new Point2(
        Math.Max(0, Math.Max(X0 - p.X, p.X - X1)),
        Math.Max(0, Math.Max(Y0 - p.Y, p.Y - Y1))).Length;
}
