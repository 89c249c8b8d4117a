using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>
/// Finds where edges of the domain meet at less than 60 degrees within the sheet and says where such edges may be split: on circles about
/// the sharp corner with radii in powers of two, the same on all edges, so that splits on one edge never force splits on the other.
/// J. Ruppert, J. Algorithms 18 (1995) 548 (concentric shells); G. L. Miller, S. E. Pav, N. J. Walkington, "When and why Ruppert's
/// algorithm works", 12th Int. Meshing Roundtable (2003) 91 (which triangles to leave alone).
/// </summary>
internal sealed class SharpCorners
{
    private const double Sharp = (Math.PI / 3) - 1e-9;
    private readonly Domain domain;
    private readonly bool[] sharpStart;
    private readonly bool[] sharpEnd;
    private readonly bool[] sharpVertex;

    /// <exception cref="MeshException">The sheet has a corner of zero angle.</exception>
    public SharpCorners(Domain domain)
    {
        this.domain = domain;
        sharpStart = new bool[domain.Edges.Count];
        sharpEnd = new bool[domain.Edges.Count];
        sharpVertex = new bool[domain.Vertices.Count];
        foreach (SheetWedge wedge in SheetWedges.Of(domain.Edges, domain.Vertices.Count))
        {
            if (wedge.Angle < SheetWedges.Cusp)
            {
                Point2 p = domain.Vertices[wedge.Vertex];
                throw new MeshException(FormattableString.Invariant(
                    $"The sheet runs out into a point of no angle at ({p.X:G9}, {p.Y:G9}) m. Cut the point off, or let the edges meet at an angle."));
            }

            if (wedge.Angle < Sharp)
            {
                (wedge.FirstAtStart ? sharpStart : sharpEnd)[wedge.First] = true;
                (wedge.SecondAtStart ? sharpStart : sharpEnd)[wedge.Second] = true;
                sharpVertex[wedge.Vertex] = true;
            }
        }
    }

    /// <summary>Whether either end of an edge is a sharp corner.</summary>
    public bool IsSharp(int edge) => sharpStart[edge] || sharpEnd[edge];

    /// <summary>Whether a vertex of the mesh is a sharp corner.</summary>
    public bool IsSharpVertex(int vertex) => vertex < sharpVertex.Length && sharpVertex[vertex];

    /// <summary>Where to split the part of an edge between two parameters.</summary>
    public double SplitAt(int edge, double from, double to)
    {
        bool start = sharpStart[edge], end = sharpEnd[edge];
        double middle = (from + to) / 2;
        if ((!start && !end) || (start && end && from == 0 && to == 1))
        {
            return middle;
        }

        Curve curve = domain.Edges[edge].Curve;
        bool aboutStart = start && (!end || to <= 0.5);
        Point2 apex = aboutStart ? curve.Start : curve.End;
        double near = aboutStart ? from : 1 - to, far = aboutStart ? to : 1 - from;
        double radiusFar = Point2.Distance(apex, curve.At(aboutStart ? far : 1 - far));
        double radius = near == 0
            ? Math.ScaleB(1, (int)Math.Round(Math.Log2(radiusFar / 2)))
            : (Point2.Distance(apex, curve.At(aboutStart ? near : 1 - near)) + radiusFar) / 2;
        double along = curve.IsArc
            ? 2 * Math.Asin(Math.Min(1, radius / (2 * curve.Radius))) / Math.Abs(curve.Sweep)
            : radius / curve.Length;
        double t = aboutStart ? along : 1 - along;
        return t > from && t < to ? t : middle;
    }

    /// <summary>
    /// Whether two points, each inside an edge, face each other on the same circle about a sharp corner both edges share. The short
    /// edge between them is the corner's doing, so triangles on it cannot be improved.
    /// </summary>
    public bool FaceEachOther(int edgeP, int edgeQ, Point2 p, Point2 q)
    {
        if (edgeP == edgeQ || !IsSharp(edgeP) || !IsSharp(edgeQ))
        {
            return false;
        }

        DomainEdge a = domain.Edges[edgeP], b = domain.Edges[edgeQ];
        return (sharpStart[edgeP] && (a.From == b.From || a.From == b.To) && SameRadius(a.Curve.Start, p, q))
            || (sharpEnd[edgeP] && (a.To == b.From || a.To == b.To) && SameRadius(a.Curve.End, p, q));
    }

    private static bool SameRadius(Point2 apex, Point2 p, Point2 q)
    {
        double rp = Point2.Distance(apex, p), rq = Point2.Distance(apex, q);
        return Math.Abs(rp - rq) <= 1e-3 * rp;
    }
}
