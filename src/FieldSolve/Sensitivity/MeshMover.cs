using FieldSolve.Geometry;
using FieldSolve.Meshing;

namespace FieldSolve.Sensitivity;

/// <summary>
/// Moves one mesh with a domain whose contacts, pads or rim have moved, without changing its triangles: vertices on an edge of the domain keep
/// their parameter on that edge, the interior follows by <see cref="Extension"/>. Safe for several threads at once.
/// </summary>
public sealed class MeshMover
{
    // A moved triangle may lose this share of its shape measure 4 sqrt(3) area / (sum of squared edges) before a new mesh is asked for.
    private const double KeptShape = 0.6;

    private readonly Extension extension;
    private readonly bool[] isGiven;
    private readonly double[] shape;

    /// <summary>Prepares a mesh.</summary>
    /// <param name="mesh">The reference.</param>
    public MeshMover(TriangleMesh mesh)
    {
        ArgumentNullException.ThrowIfNull(mesh);
        Mesh = mesh;
        isGiven = new bool[mesh.VertexCount];
        Array.Fill(isGiven, true, 0, mesh.Domain.Vertices.Count);
        foreach (MeshEdge e in mesh.Edges)
        {
            isGiven[e.A] = isGiven[e.B] = true;
        }

        extension = new Extension(mesh, isGiven);
        shape = [.. Enumerable.Range(0, mesh.TriangleCount).Select(t => Shape(mesh.Corners, mesh.X, mesh.Y, t))];
    }

    /// <summary>The reference mesh.</summary>
    public TriangleMesh Mesh { get; }

    /// <summary>Whether two domains have the same vertices, edges and contacts, so that a mesh of one can be moved to the other.</summary>
    public static bool Alike(Domain a, Domain b)
    {
        ArgumentNullException.ThrowIfNull(a);
        ArgumentNullException.ThrowIfNull(b);
        return a.Vertices.Count == b.Vertices.Count && a.Edges.Count == b.Edges.Count && a.Tips.SequenceEqual(b.Tips)
            && a.Regions.Select(r => (r.Contact, r.Corners.Count)).SequenceEqual(b.Regions.Select(r => (r.Contact, r.Corners.Count)))
            && a.Edges.Zip(b.Edges).All(p => p.First.From == p.Second.From && p.First.To == p.Second.To && p.First.IsRim == p.Second.IsRim
                && p.First.Contact == p.Second.Contact && p.First.Curve.IsArc == p.Second.Curve.IsArc);
    }

    /// <summary>The mesh on a moved domain; null when the domain differs in more than places or a triangle loses its shape: then mesh anew.</summary>
    public TriangleMesh? Move(Domain to) => Move(to, out _);

    /// <summary>The same, and how well the shapes were kept.</summary>
    /// <param name="to">The moved domain.</param>
    /// <param name="kept">Least ratio of a triangle's shape measure to the one it had; 0 without a mesh.</param>
    internal TriangleMesh? Move(Domain to, out double kept)
    {
        ArgumentNullException.ThrowIfNull(to);
        kept = 0;
        if (!Alike(Mesh.Domain, to))
        {
            return null;
        }

        double[] dx = new double[Mesh.VertexCount], dy = new double[dx.Length];
        Places(to, (v, p) => (dx[v], dy[v]) = (p.X - Mesh.X[v], p.Y - Mesh.Y[v]));
        extension.Fill(dx);
        extension.Fill(dy);
        double[] x = new double[dx.Length], y = new double[dx.Length];
        for (int v = 0; v < x.Length; v++)
        {
            (x[v], y[v]) = (Mesh.X[v] + dx[v], Mesh.Y[v] + dy[v]);
        }

        Places(to, (v, p) => (x[v], y[v]) = (p.X, p.Y));
        double least = 1;
        for (int t = 0; t < shape.Length; t++)
        {
            double now = Shape(Mesh.Corners, x, y, t) / shape[t];
            if (!(now >= KeptShape))
            {
                return null;
            }

            least = Math.Min(least, now);
        }

        kept = least;

        return new TriangleMesh
        {
            Domain = to,
            X = x,
            Y = y,
            Corners = Mesh.Corners,
            Neighbours = Mesh.Neighbours,
            Region = Mesh.Region,
            Edges = Mesh.Edges,
        };
    }

    /// <summary>Velocity of every vertex, from the velocities of those on edges of the domain and of its own vertices.</summary>
    /// <param name="x">In: x of the given vertices; out: of all. Metres per unit of the cause.</param>
    /// <param name="y">The same along y.</param>
    internal void Extend(double[] x, double[] y)
    {
        extension.Fill(x);
        extension.Fill(y);
    }

    /// <summary>Visits the given vertices with their places on a domain like the mesh's.</summary>
    internal void Places(Domain on, Action<int, Point2> visit)
    {
        for (int v = 0; v < on.Vertices.Count; v++)
        {
            visit(v, on.Vertices[v]);
        }

        foreach (MeshEdge e in Mesh.Edges)
        {
            if (e.ToT < 1)
            {
                visit(e.B, on.Edges[e.DomainEdge].Curve.At(e.ToT));
            }
        }
    }

    private static double Shape(int[] corners, double[] x, double[] y, int t)
    {
        int a = corners[3 * t], b = corners[(3 * t) + 1], c = corners[(3 * t) + 2];
        double abx = x[b] - x[a], aby = y[b] - y[a], acx = x[c] - x[a], acy = y[c] - y[a], bcx = acx - abx, bcy = acy - aby;
        double twice = (abx * acy) - (acx * aby);
        return 2 * Math.Sqrt(3) * twice / ((abx * abx) + (aby * aby) + (acx * acx) + (acy * acy) + (bcx * bcx) + (bcy * bcy));
    }
}
