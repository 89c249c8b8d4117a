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
    private const double Sharp = (Math.PI / 3) - Noise;
    private const double Noise = 1e-9;
    private const double Cusp = 1e-6;
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
        List<(int Edge, bool AtStart, Point2 Away)>?[] at = new List<(int, bool, Point2)>?[domain.Vertices.Count];
        for (int e = 0; e < domain.Edges.Count; e++)
        {
            DomainEdge edge = domain.Edges[e];
            (at[edge.From] ??= []).Add((e, true, edge.Curve.Tangent(0)));
            (at[edge.To] ??= []).Add((e, false, -edge.Curve.Tangent(1)));
        }

        for (int v = 0; v < at.Length; v++)
        {
            List<(int Edge, bool AtStart, Point2 Away)>? fan = at[v];
            for (int i = 0; fan != null && i < fan.Count; i++)
            {
                // The wedge counter-clockwise from this edge to the next one.
                int next = -1;
                double wedge = 2 * Math.PI;
                for (int j = 0; j < fan.Count; j++)
                {
                    double turn = j == i ? 2 * Math.PI : Turn(fan[i].Away, fan[j].Away);
                    if (turn < wedge)
                    {
                        (next, wedge) = (j, turn);
                    }
                }

                // The sheet lies left of a rim edge that leaves.
                bool inSheet = !domain.Edges[fan[i].Edge].IsRim || fan[i].AtStart;
                if (inSheet && wedge < Cusp)
                {
                    Point2 p = domain.Vertices[v];
                    throw new MeshException(FormattableString.Invariant(
                        $"The sheet runs out into a point of no angle at ({p.X:G9}, {p.Y:G9}) m. Cut the point off, or let the edges meet at an angle."));
                }

                if (inSheet && wedge < Sharp)
                {
                    (fan[i].AtStart ? sharpStart : sharpEnd)[fan[i].Edge] = true;
                    (fan[next].AtStart ? sharpStart : sharpEnd)[fan[next].Edge] = true;
                    sharpVertex[v] = true;
                }
            }
        }
    }

    // Counter-clockwise angle from a to b, 0 to 2 pi.
    private static double Turn(Point2 a, Point2 b)
    {
        double turn = Math.Atan2(Point2.Cross(a, b), Point2.Dot(a, b));
        return turn >= -Noise ? Math.Max(0, turn) : turn + (2 * Math.PI);
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
