using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Sparse;

namespace FieldSolve.Sessions;

/// <summary>
/// Moves the nodes of a mesh to a domain of the same structure: nodes on the edges keep their place along them, nodes inside follow as the nodes of a net
/// of springs do, each at the mean of its neighbours' displacements (D. A. Field, Commun. Appl. Numer. Methods 4, 709 (1988), describes such smoothing). The springs'
/// matrix depends on the mesh alone and is factored once.
/// </summary>
internal sealed class MeshMover
{
    // A mesh with a smaller angle than this is made anew. The mesher keeps 26 degrees.
    private const double SmallestAngle = 14 * Math.PI / 180;

    private readonly TriangleMesh mesh;
    private readonly bool[] isFixed;
    private readonly int[] unknown;
    private readonly List<(int Free, int Fixed, double Weight)> ties = [];
    private readonly SparseLu? factor;
    private readonly int size;

    /// <summary>Prepares the springs.</summary>
    public MeshMover(TriangleMesh mesh)
    {
        this.mesh = mesh;
        isFixed = new bool[mesh.VertexCount];
        for (int v = 0; v < mesh.Domain.Vertices.Count; v++)
        {
            isFixed[v] = true;
        }

        foreach (MeshEdge e in mesh.Edges)
        {
            isFixed[e.A] = isFixed[e.B] = true;
        }

        unknown = new int[mesh.VertexCount];
        for (int v = 0; v < unknown.Length; v++)
        {
            unknown[v] = isFixed[v] ? -1 : size++;
        }

        if (size == 0)
        {
            return;
        }

        // Each inner edge is seen from both of its triangles.
        SortedSet<int>[] neighbours = [.. Enumerable.Range(0, size).Select(i => new SortedSet<int> { i })];
        Dictionary<(int, int), double> values = [];
        void Tie(int a, int b)
        {
            double weight = 0.5 / Math.Max(Length(mesh.X, mesh.Y, a, b), double.Epsilon);
            if (unknown[a] < 0)
            {
                return;
            }

            int i = unknown[a], j = unknown[b];
            values[(i, i)] = values.GetValueOrDefault((i, i)) + weight;
            if (j < 0)
            {
                ties.Add((i, b, weight));
                return;
            }

            neighbours[i].Add(j);
            values[(i, j)] = values.GetValueOrDefault((i, j)) - weight;
        }

        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            for (int k = 0; k < 3; k++)
            {
                int a = mesh.Corners[(3 * t) + k], b = mesh.Corners[(3 * t) + ((k + 1) % 3)];
                Tie(a, b);
                Tie(b, a);
            }
        }

        int[] start = new int[size + 1];
        List<int> column = [];
        List<double> entries = [];
        double scale = values.Values.Max();
        for (int i = 0; i < size; i++)
        {
            foreach (int j in neighbours[i])
            {
                column.Add(j);
                entries.Add(values[(i, j)] / scale);
            }

            start[i + 1] = column.Count;
        }

        for (int k = 0; k < ties.Count; k++)
        {
            ties[k] = ties[k] with { Weight = ties[k].Weight / scale };
        }

        double[] x = new double[size], y = new double[size];
        for (int v = 0; v < unknown.Length; v++)
        {
            if (unknown[v] >= 0)
            {
                (x[unknown[v]], y[unknown[v]]) = (mesh.X[v], mesh.Y[v]);
            }
        }

        factor = new SparseLu(SparseAnalysis.Analyse(new SymmetricPattern(start, [.. column]), x, y, CancellationToken.None));
        factor.Factor([.. entries], CancellationToken.None);
    }

    /// <summary>The mesh on another domain; null when that has another structure, or when triangles would get too flat.</summary>
    public TriangleMesh? Moved(Domain domain)
    {
        Domain from = mesh.Domain;
        if (domain.Vertices.Count != from.Vertices.Count || domain.Edges.Count != from.Edges.Count || domain.Regions.Count != from.Regions.Count
            || !domain.Tips.SequenceEqual(from.Tips)
            || !domain.Edges.Zip(from.Edges).All(p => p.First.From == p.Second.From && p.First.To == p.Second.To && p.First.IsRim == p.Second.IsRim
                && p.First.Contact == p.Second.Contact && p.First.Curve.IsArc == p.Second.Curve.IsArc)
            || !domain.Regions.Zip(from.Regions).All(p => p.First.Contact == p.Second.Contact))
        {
            return null;
        }

        double[] x = [.. mesh.X], y = [.. mesh.Y];
        for (int v = 0; v < domain.Vertices.Count; v++)
        {
            (x[v], y[v]) = (domain.Vertices[v].X, domain.Vertices[v].Y);
        }

        foreach (MeshEdge e in mesh.Edges)
        {
            Curve curve = domain.Edges[e.DomainEdge].Curve;
            foreach ((int node, double t) in new[] { (e.A, e.FromT), (e.B, e.ToT) })
            {
                if (node >= domain.Vertices.Count)
                {
                    Point2 p = curve.At(t);
                    (x[node], y[node]) = (p.X, p.Y);
                }
            }
        }

        if (factor is not null)
        {
            Follow(mesh.X, x);
            Follow(mesh.Y, y);
        }

        return IsGood(x, y)
            ? new TriangleMesh { Domain = domain, X = x, Y = y, Corners = mesh.Corners, Neighbours = mesh.Neighbours, Region = mesh.Region, Edges = mesh.Edges }
            : null;
    }

    private void Follow(double[] before, double[] after)
    {
        double[] load = new double[size], moved = new double[size];
        foreach ((int free, int end, double weight) in ties)
        {
            load[free] += weight * (after[end] - before[end]);
        }

        factor!.Solve(load, moved);
        for (int v = 0; v < unknown.Length; v++)
        {
            after[v] = unknown[v] >= 0 ? before[v] + moved[unknown[v]] : after[v];
        }
    }

    private bool IsGood(double[] x, double[] y)
    {
        double least = Math.Sin(SmallestAngle);
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            int a = mesh.Corners[3 * t], b = mesh.Corners[(3 * t) + 1], c = mesh.Corners[(3 * t) + 2];
            double twice = ((x[b] - x[a]) * (y[c] - y[a])) - ((x[c] - x[a]) * (y[b] - y[a]));
            double p = Length(x, y, a, b), q = Length(x, y, b, c), r = Length(x, y, c, a);
            double longest = Math.Max(p, Math.Max(q, r)), shortest = Math.Min(p, Math.Min(q, r));

            // The smallest angle lies opposite the shortest side; its sine is twice the area over the product of the other two.
            double others = p * q * r / Math.Max(shortest, double.Epsilon);
            if (!(twice > least * others) && !WasAsFlat(t, twice / others) || !double.IsFinite(longest))
            {
                return false;
            }
        }

        return true;
    }

    // Beside sharp corners of the sheet the mesh was flat from the start.
    private bool WasAsFlat(int t, double sine)
    {
        int a = mesh.Corners[3 * t], b = mesh.Corners[(3 * t) + 1], c = mesh.Corners[(3 * t) + 2];
        double[] x = mesh.X, y = mesh.Y;
        double twice = ((x[b] - x[a]) * (y[c] - y[a])) - ((x[c] - x[a]) * (y[b] - y[a]));
        double p = Length(x, y, a, b), q = Length(x, y, b, c), r = Length(x, y, c, a);
        return sine > 0.6 * twice * Math.Min(p, Math.Min(q, r)) / (p * q * r);
    }

    private static double Length(double[] x, double[] y, int a, int b) => double.Hypot(x[b] - x[a], y[b] - y[a]);
}
