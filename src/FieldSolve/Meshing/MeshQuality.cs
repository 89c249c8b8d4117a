using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>Figures of a mesh.</summary>
/// <param name="Triangles">Number of triangles.</param>
/// <param name="Vertices">Number of vertices.</param>
/// <param name="MinimumAngle">Smallest angle of any triangle, degrees.</param>
/// <param name="MinimumAngleAwayFromSharpCorners">Smallest angle, degrees, of the triangles that do not owe it to a corner of the outline
/// sharper than 60 degrees: neither at such a corner nor on a short edge across it. 60 when there is no such triangle.</param>
/// <param name="MeanMinimumAngle">Mean over the triangles of their smallest angle, degrees; 60 would be perfect.</param>
/// <param name="MaximumAngle">Largest angle, degrees.</param>
/// <param name="SmallestEdge">Metres.</param>
/// <param name="LargestEdge">Metres.</param>
/// <param name="SmallestArea">Square metres.</param>
/// <param name="LargestArea">Square metres.</param>
/// <param name="Area">Area of all triangles, square metres.</param>
public sealed record MeshQuality(
    int Triangles,
    int Vertices,
    double MinimumAngle,
    double MinimumAngleAwayFromSharpCorners,
    double MeanMinimumAngle,
    double MaximumAngle,
    double SmallestEdge,
    double LargestEdge,
    double SmallestArea,
    double LargestArea,
    double Area)
{
    /// <summary>Measures a mesh.</summary>
    /// <exception cref="ArgumentNullException">The mesh is null.</exception>
    public static MeshQuality Of(TriangleMesh mesh)
    {
        ArgumentNullException.ThrowIfNull(mesh);
        SharpCorners sharp = new(mesh.Domain);
        int[] edgeOf = new int[mesh.VertexCount];
        Array.Fill(edgeOf, -1);
        foreach (MeshEdge e in mesh.Edges)
        {
            if (e.ToT < 1)
            {
                edgeOf[e.B] = e.DomainEdge;
            }
        }

        double smallest = 180, free = 60, sum = 0, largest = 0, area = 0;
        double shortEdge = double.MaxValue, longEdge = 0, smallArea = double.MaxValue, largeArea = 0;
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            double least = 180;
            bool excused = false;
            for (int i = 0; i < 3; i++)
            {
                int v = mesh.Corners[(3 * t) + i], p = mesh.Corners[(3 * t) + ((i + 1) % 3)], q = mesh.Corners[(3 * t) + ((i + 2) % 3)];
                Point2 u = Vector(mesh, v, p), w = Vector(mesh, v, q);
                double angle = Math.Atan2(Point2.Cross(u, w), Point2.Dot(u, w)) * 180 / Math.PI;
                least = Math.Min(least, angle);
                largest = Math.Max(largest, angle);
                shortEdge = Math.Min(shortEdge, u.Length);
                longEdge = Math.Max(longEdge, u.Length);
                excused |= sharp.IsSharpVertex(v) || (edgeOf[p] >= 0 && edgeOf[q] >= 0
                    && sharp.FaceEachOther(edgeOf[p], edgeOf[q], new(mesh.X[p], mesh.Y[p]), new(mesh.X[q], mesh.Y[q])));
                if (i == 0)
                {
                    double a = Point2.Cross(u, w) / 2;
                    area += a;
                    smallArea = Math.Min(smallArea, a);
                    largeArea = Math.Max(largeArea, a);
                }
            }

            smallest = Math.Min(smallest, least);
            sum += least;
            if (!excused)
            {
                free = Math.Min(free, least);
            }
        }

        return new(mesh.TriangleCount, mesh.VertexCount, smallest, free, sum / mesh.TriangleCount, largest, shortEdge, longEdge, smallArea, largeArea, area);
    }

    private static Point2 Vector(TriangleMesh m, int from, int to) => new(m.X[to] - m.X[from], m.Y[to] - m.Y[from]);
}
