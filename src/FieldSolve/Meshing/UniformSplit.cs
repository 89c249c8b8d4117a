using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>
/// Splits every triangle into four at the middles of its edges. The children of triangle t are 4t (v0, m01, m20),
/// 4t+1 (m01, v1, m12), 4t+2 (m20, m12, v2) and 4t+3 (m01, m12, m20).
/// </summary>
public static class UniformSplit
{
    /// <summary>
    /// The split mesh. Old vertices keep their indices; one new vertex per edge follows, in the order of first occurrence going through
    /// the triangles and their edges 01, 12, 20. The middle of a piece of an arc lies on the true arc, at the mean parameter.
    /// </summary>
    /// <remarks>Splitting keeps angles except at arcs, where the middle moves off the chord by an eighth of the piece's length times its angle.</remarks>
    public static TriangleMesh Split(TriangleMesh mesh) => Split(mesh, out _);

    /// <inheritdoc cref="Split(TriangleMesh)"/>
    /// <param name="mesh">The mesh to split.</param>
    /// <param name="edgeMiddles">Three per old triangle: the new vertices in the middles of its edges 01, 12 and 20.</param>
    public static TriangleMesh Split(TriangleMesh mesh, out int[] edgeMiddles)
    {
        ArgumentNullException.ThrowIfNull(mesh);
        edgeMiddles = EdgeMiddles(mesh, out int added);
        int old = mesh.VertexCount;
        double[] x = new double[old + added], y = new double[old + added];
        mesh.X.CopyTo(x, 0);
        mesh.Y.CopyTo(y, 0);
        int count = mesh.TriangleCount;
        int[] corners = new int[12 * count], neighbours = new int[12 * count], region = new int[4 * count];
        for (int t = 0; t < count; t++)
        {
            int a = mesh.Corners[3 * t], b = mesh.Corners[(3 * t) + 1], c = mesh.Corners[(3 * t) + 2];
            int ab = edgeMiddles[3 * t], bc = edgeMiddles[(3 * t) + 1], ca = edgeMiddles[(3 * t) + 2];
            Middle(ab, a, b);
            Middle(bc, b, c);
            Middle(ca, c, a);
            ReadOnlySpan<int> four = [a, ab, ca, ab, b, bc, ca, bc, c, ab, bc, ca];
            four.CopyTo(corners.AsSpan(12 * t));
            Array.Fill(region, mesh.Region[t], 4 * t, 4);

            // Child i sits at corner i; its inner side, opposite that corner, faces child 3. Child 3's corners are m01, m12, m20, which
            // face the children at corners 2, 0 and 1.
            for (int i = 0; i < 3; i++)
            {
                int child = (4 * t) + i;
                neighbours[(3 * child) + i] = (4 * t) + 3;
                neighbours[(3 * child) + ((i + 1) % 3)] = ChildAt(mesh, mesh.Neighbours[(3 * t) + ((i + 1) % 3)], mesh.Corners[(3 * t) + i]);
                neighbours[(3 * child) + ((i + 2) % 3)] = ChildAt(mesh, mesh.Neighbours[(3 * t) + ((i + 2) % 3)], mesh.Corners[(3 * t) + i]);
                neighbours[(12 * t) + 9 + ((i + 1) % 3)] = child;
            }
        }

        MeshEdge[] edges = new MeshEdge[2 * mesh.Edges.Length];
        for (int i = 0; i < mesh.Edges.Length; i++)
        {
            MeshEdge e = mesh.Edges[i];
            Curve curve = mesh.Domain.Edges[e.DomainEdge].Curve;
            double t = (e.FromT + e.ToT) / 2;
            int m = MiddleOf(mesh, edgeMiddles, e);
            if (curve.IsArc)
            {
                Point2 p = curve.At(t);
                (x[m], y[m]) = (p.X, p.Y);
            }

            edges[2 * i] = new(e.A, m, e.DomainEdge, e.FromT, t, ChildAt(mesh, e.LeftTriangle, e.A), ChildAt(mesh, e.RightTriangle, e.A));
            edges[(2 * i) + 1] = new(m, e.B, e.DomainEdge, t, e.ToT, ChildAt(mesh, e.LeftTriangle, e.B), ChildAt(mesh, e.RightTriangle, e.B));
        }

        return new TriangleMesh { Domain = mesh.Domain, X = x, Y = y, Corners = corners, Neighbours = neighbours, Region = region, Edges = edges };

        void Middle(int m, int p, int q)
        {
            // Half the sum in this form is the same from either end, and exact on a point far from the origin.
            (x[m], y[m]) = ((0.5 * mesh.X[p]) + (0.5 * mesh.X[q]), (0.5 * mesh.Y[p]) + (0.5 * mesh.Y[q]));
        }
    }

    /// <summary>Three per triangle: the vertices <see cref="Split(TriangleMesh)"/> will put in the middles of its edges 01, 12 and 20.</summary>
    public static int[] EdgeMiddles(TriangleMesh mesh)
    {
        ArgumentNullException.ThrowIfNull(mesh);
        return EdgeMiddles(mesh, out _);
    }

    private static int[] EdgeMiddles(TriangleMesh mesh, out int added)
    {
        int[] middles = new int[mesh.Corners.Length];
        int next = mesh.VertexCount;
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            for (int i = 0; i < 3; i++)
            {
                // Edge i runs from corner i to corner i + 1, opposite corner i + 2.
                int n = mesh.Neighbours[(3 * t) + ((i + 2) % 3)];
                middles[(3 * t) + i] = n >= 0 && n < t ? middles[(3 * n) + EdgeFrom(mesh, n, mesh.Corners[(3 * t) + ((i + 1) % 3)])] : next++;
            }
        }

        added = next - mesh.VertexCount;
        return middles;
    }

    private static int EdgeFrom(TriangleMesh mesh, int t, int v) =>
        mesh.Corners[3 * t] == v ? 0 : mesh.Corners[(3 * t) + 1] == v ? 1 : 2;

    private static int ChildAt(TriangleMesh mesh, int t, int v) => t < 0 ? -1 : (4 * t) + EdgeFrom(mesh, t, v);

    private static int MiddleOf(TriangleMesh mesh, int[] middles, MeshEdge e) => middles[(3 * e.LeftTriangle) + EdgeFrom(mesh, e.LeftTriangle, e.A)];
}
