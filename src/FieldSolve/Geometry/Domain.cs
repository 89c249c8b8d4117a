namespace FieldSolve.Geometry;

/// <summary>
/// One stretch of a <see cref="Domain"/> between two of its vertices.
/// </summary>
/// <param name="From">Index of the first vertex.</param>
/// <param name="To">Index of the last vertex.</param>
/// <param name="Curve">The true stretch; its end points are the vertices, bit for bit.</param>
/// <param name="IsRim">True for the rim of the conducting sheet, which then lies to the left of the direction of travel;
/// false for an edge inside the sheet (the outline of a resistive pad), with sheet on both sides.</param>
/// <param name="Contact">Index of the contact whose metal lies along this rim stretch; -1 for a free edge or an inner edge.</param>
public sealed record DomainEdge(int From, int To, Curve Curve, bool IsRim, int Contact);

/// <summary>A part of the sheet under a resistive pad.</summary>
/// <param name="Contact">Index of the pad's contact.</param>
/// <param name="Corners">The pad's polygon, counter-clockwise, not repeated at the end. It may reach beyond the sheet.</param>
public sealed record DomainRegion(int Contact, IReadOnlyList<Point2> Corners);

/// <summary>
/// What the mesher triangulates: the conducting sheet with its true rim. Ideal pads are already cut out (their edges are
/// rim with a contact), so the sheet may have holes and may fall into several parts. Every corner, contact end, pad corner
/// and tip is a vertex.
/// </summary>
/// <param name="Vertices">Metres. The mesh keeps them first and in this order.</param>
/// <param name="Edges">Rim loops (sheet to the left) and inner edges; they meet only at vertices.</param>
/// <param name="Regions">Polygons of the resistive pads.</param>
/// <param name="Tips">Vertex index of each point tip, in the device's order.</param>
public sealed record Domain(
    IReadOnlyList<Point2> Vertices,
    IReadOnlyList<DomainEdge> Edges,
    IReadOnlyList<DomainRegion> Regions,
    IReadOnlyList<int> Tips)
{
    /// <summary>Length of the diagonal of the smallest upright rectangle about the sheet, metres; tolerances are relative to it.</summary>
    public double Size { get; } = Diagonal(Vertices, Edges);

    private static double Diagonal(IReadOnlyList<Point2> vertices, IReadOnlyList<DomainEdge> edges)
    {
        double x0 = double.PositiveInfinity, x1 = double.NegativeInfinity, y0 = x0, y1 = x1;
        void Add(Point2 p)
        {
            (x0, x1) = (Math.Min(x0, p.X), Math.Max(x1, p.X));
            (y0, y1) = (Math.Min(y0, p.Y), Math.Max(y1, p.Y));
        }

        foreach (Point2 p in vertices)
        {
            Add(p);
        }

        foreach (DomainEdge e in edges)
        {
            for (int k = 1; e.Curve.IsArc && k < 16; k++)
            {
                Add(e.Curve.At(k / 16.0));
            }
        }

        return vertices.Count == 0 ? 0 : new Point2(x1 - x0, y1 - y0).Length;
    }
}
