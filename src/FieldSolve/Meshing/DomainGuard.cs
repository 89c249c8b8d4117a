using System.Globalization;
using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>Refuses domains no triangulation can follow.</summary>
internal static class DomainGuard
{
    public static void Check(Domain domain)
    {
        if (!domain.Edges.Any(e => e.IsRim))
        {
            throw new MeshException("The sheet has no rim. Give its outline.");
        }

        int[] order = new int[domain.Vertices.Count];
        for (int v = 0; v < order.Length; v++)
        {
            Point2 p = domain.Vertices[v];
            if (!double.IsFinite(p.X) || !double.IsFinite(p.Y))
            {
                throw new MeshException(Invariant($"Vertex {v} of the outline is at ({p.X}, {p.Y}) m. Its coordinates must be finite."));
            }

            order[v] = v;
        }

        Array.Sort(order, (a, b) => (domain.Vertices[a].X, domain.Vertices[a].Y, a).CompareTo((domain.Vertices[b].X, domain.Vertices[b].Y, b)));
        for (int k = 1; k < order.Length; k++)
        {
            Point2 p = domain.Vertices[order[k]];
            if (p == domain.Vertices[order[k - 1]])
            {
                throw new MeshException(Invariant($"Vertices {order[k - 1]} and {order[k]} of the outline coincide at ({p.X:G9}, {p.Y:G9}) m. Use one for both."));
            }
        }

        int[] balance = new int[domain.Vertices.Count];
        for (int e = 0; e < domain.Edges.Count; e++)
        {
            DomainEdge edge = domain.Edges[e];
            if (edge.From < 0 || edge.To < 0 || edge.From >= balance.Length || edge.To >= balance.Length || edge.From == edge.To)
            {
                throw new MeshException(Invariant($"Edge {e} of the outline runs from vertex {edge.From} to vertex {edge.To}. It needs two different vertices of the outline."));
            }

            if (edge.Curve.Start != domain.Vertices[edge.From] || edge.Curve.End != domain.Vertices[edge.To])
            {
                Point2 p = edge.Curve.Start;
                throw new MeshException(Invariant($"Edge {e} of the outline, from ({p.X:G9}, {p.Y:G9}) m, does not start and end at its vertices bit for bit. Take its end points from them."));
            }

            if (edge.IsRim)
            {
                balance[edge.From]++;
                balance[edge.To]--;
            }
        }

        int open = Array.FindIndex(balance, b => b != 0);
        if (open >= 0)
        {
            Point2 p = domain.Vertices[open];
            throw new MeshException(Invariant($"The rim does not close at ({p.X:G9}, {p.Y:G9}) m. Every rim edge that ends there must be followed by one that starts there."));
        }
    }

    private static string Invariant(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
