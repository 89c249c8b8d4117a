using FieldSolve.Meshing;

namespace FieldSolve.Fields;

/// <summary>Numbers the edges of a mesh in the order of their first occurrence (triangle by triangle, edges 01, 12, 20).</summary>
internal static class EdgeNumbers
{
    /// <summary>Three edge numbers per triangle (edges 01, 12, 20) and the number of edges.</summary>
    public static (int[] Edge, int Count) Of(TriangleMesh mesh)
    {
        int[] edge = new int[mesh.Corners.Length];
        int count = 0;
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            for (int k = 0; k < 3; k++)
            {
                // Edge k runs from corner k to corner k + 1 and lies opposite corner k + 2.
                int other = mesh.Neighbours[(3 * t) + ((k + 2) % 3)];
                edge[(3 * t) + k] = other >= 0 && other < t
                    ? edge[(3 * other) + LocalEdge(mesh, other, mesh.Corners[(3 * t) + ((k + 1) % 3)], mesh.Corners[(3 * t) + k])]
                    : count++;
            }
        }

        return (edge, count);
    }

    /// <summary>Which local edge of a triangle runs between two vertices, in either direction.</summary>
    public static int LocalEdge(TriangleMesh mesh, int triangle, int a, int b)
    {
        for (int k = 0; k < 3; k++)
        {
            int p = mesh.Corners[(3 * triangle) + k], q = mesh.Corners[(3 * triangle) + ((k + 1) % 3)];
            if ((p == a && q == b) || (p == b && q == a))
            {
                return k;
            }
        }

        throw new InvalidOperationException("A triangle does not have an edge that the mesh says it has.");
    }
}
