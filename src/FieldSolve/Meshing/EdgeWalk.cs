using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>Finds the pieces of a domain's edges among the sides of given triangles by walking along them.</summary>
internal sealed class EdgeWalk
{
    private readonly Domain domain;
    private readonly double[] x;
    private readonly double[] y;
    private readonly int[] corners;
    private readonly Dictionary<(int, int), int> sides;
    private readonly double near;
    private readonly Dictionary<int, List<int>> rim = [];
    private readonly Dictionary<int, List<int>> links = [];
    private int rimSides;

    /// <summary>Takes the triangles; coordinates of vertices on the rim are moved onto the true curve.</summary>
    public EdgeWalk(Domain domain, double[] x, double[] y, int[] corners, int[] neighbours, Dictionary<(int, int), int> sides, double near)
    {
        (this.domain, this.x, this.y, this.corners, this.sides, this.near) = (domain, x, y, corners, sides, near);
        bool inner = domain.Edges.Any(e => !e.IsRim);
        for (int k = 0; k < corners.Length; k++)
        {
            (int a, int b) = SavedMesh.Side(corners, k);
            if (neighbours[k] < 0)
            {
                Add(rim, a, b);
                rimSides++;
            }

            if (inner)
            {
                Add(links, a, b);
                Add(links, b, a);
            }
        }
    }

    /// <summary>All pieces, in the order of the domain's edges.</summary>
    /// <exception cref="MeshException">An edge is not covered, or the rim of the triangles runs elsewhere.</exception>
    public MeshEdge[] Pieces()
    {
        var pieces = new List<MeshEdge>();
        for (int e = 0; e < domain.Edges.Count; e++)
        {
            DomainEdge edge = domain.Edges[e];
            int at = edge.From;
            double from = 0;
            for (bool first = true; first || at != edge.To; first = false)
            {
                (int next, double t) = Next(edge, at, from);
                int left = Triangle(at, next), right = Triangle(next, at);
                if (next < 0 || left < 0 || (right < 0) != edge.IsRim)
                {
                    throw new MeshException(FormattableString.Invariant(
                        $"the triangles do not follow the {(edge.IsRim ? "rim" : "pad's outline")} from ({x[at]:G6}, {y[at]:G6}) m on"));
                }

                pieces.Add(new(at, next, e, from, t, left, right));
                (at, from) = (next, t);
            }
        }

        int found = pieces.Count(p => p.RightTriangle < 0);
        return found == rimSides
            ? [.. pieces]
            : throw new MeshException(FormattableString.Invariant($"{rimSides - found} sides of triangles end the mesh where the device has no rim"));
    }

    private (int Vertex, double T) Next(DomainEdge edge, int at, double from)
    {
        (int best, double bestT) = (-1, double.PositiveInfinity);
        foreach (int v in (edge.IsRim ? rim : links).GetValueOrDefault(at) ?? [])
        {
            double t = v == edge.To ? 1 : edge.Curve.Nearest(new(x[v], y[v]));
            Point2 on = edge.Curve.At(t);
            if (t > from && t < bestT && Point2.Distance(on, new(x[v], y[v])) <= near && (v >= domain.Vertices.Count || v == edge.To))
            {
                (best, bestT) = (v, t);
            }
        }

        if (best >= domain.Vertices.Count)
        {
            // Where it already sits on the curve to rounding, its bits stay.
            Point2 on = edge.Curve.At(bestT);
            (x[best], y[best]) = Point2.Distance(on, new(x[best], y[best])) > 1e-13 * domain.Size ? (on.X, on.Y) : (x[best], y[best]);
        }

        return (best, bestT);
    }

    private int Triangle(int a, int b) => sides.TryGetValue((a, b), out int k) ? k / 3 : -1;

    private static void Add(Dictionary<int, List<int>> to, int a, int b)
    {
        if (!to.TryGetValue(a, out List<int>? list))
        {
            to[a] = list = [];
        }

        if (!list.Contains(b))
        {
            list.Add(b);
        }
    }
}
