using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Meshing;

namespace FieldSolve.Runs;

/// <summary>
/// Triangles that are larger than their distance from a singular point in the plane where an anisotropic sheet is isotropic. There the triangles of the mesh are slivers, and one
/// that does not touch the point may still reach past it: its error falls no faster than that of those that touch it. Only corners count, whose angle the anisotropy changes: at
/// contact ends on a smooth rim the rates were seen to hold (benchmarks/accuracy.md).
/// </summary>
internal static class NearSingular
{
    // Stretch from which on it matters: the mesh's own triangles are out of shape by about this much.
    private const double LeastStretch = 1.5;

    // Exponents that differ by rounding alone.
    private const double Same = 1e-6;

    /// <summary>Per triangle a singular vertex of the domain, the nearest in that plane; -1 for most triangles. Those that touch one may have theirs.</summary>
    /// <param name="mesh">The triangles.</param>
    /// <param name="conductance">In the lab frame.</param>
    /// <param name="exponent">Per vertex of the domain: p of an error like h^p; singular where below 2.</param>
    public static int[] Vertices(TriangleMesh mesh, Tensor2 conductance, double[] exponent)
    {
        int[] near = new int[mesh.TriangleCount];
        Array.Fill(near, -1);
        double least = conductance.SmallestSymmetricEigenvalue, largest = conductance.Aa + conductance.Bb - least;
        Dictionary<int, double> isotropic = SingularPoints.Of(mesh.Domain).ToDictionary(p => p.Vertex, p => p.Exponent);
        int[] singular = [.. SingularPoints.Of(mesh.Domain, conductance)
            .Where(p => exponent[p.Vertex] < 2 && !(isotropic.TryGetValue(p.Vertex, out double plain) && Math.Abs(p.Exponent - plain) < Same)).Select(p => p.Vertex)];
        if (singular.Length == 0 || Math.Sqrt(largest / least) < LeastStretch)
        {
            return near;
        }

        // Lengths along the direction that conducts best count as they are, those across it as longer by the stretch.
        double xx = conductance.Bb / least, yy = conductance.Aa / least, xy = -(conductance.Ab + conductance.Ba) / 2 / least;
        double Length(Point2 p) => Math.Sqrt((xx * p.X * p.X) + (2 * xy * p.X * p.Y) + (yy * p.Y * p.Y));
        Point2 At(int v) => new(mesh.X[v], mesh.Y[v]);
        var tree = new BoxTree([.. singular.Select(v => Box.Of(mesh.Domain.Vertices[v]))]);
        for (int t = 0; t < near.Length; t++)
        {
            Point2 a = At(mesh.Corners[3 * t]), b = At(mesh.Corners[(3 * t) + 1]), c = At(mesh.Corners[(3 * t) + 2]), centre = (1.0 / 3) * (a + b + c);
            double size = Math.Max(Length(b - a), Math.Max(Length(c - b), Length(a - c))), best = size;
            foreach (int k in tree.Query(Box.Of(centre).Grown(size)))
            {
                double distance = Length(centre - mesh.Domain.Vertices[singular[k]]);
                if (distance < best)
                {
                    (best, near[t]) = (distance, singular[k]);
                }
            }
        }

        return near;
    }
}
