using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Meshing;

namespace FieldSolve.Runs;

/// <summary>
/// Largest sheet current and power density, leaving out a small disc about each singular point (a twentieth of the shorter stretch that ends
/// there), where both grow without bound in the model and mean nothing for the device.
/// </summary>
internal sealed class PeakFinder
{
    private const double LeftOut = 0.05;
    private readonly SheetEquations equations;
    private readonly int[] triangles;

    public PeakFinder(SheetEquations equations)
    {
        this.equations = equations;
        TriangleMesh mesh = equations.Space.Mesh;
        IReadOnlyList<SingularPoint> singular = SingularPoints.Of(mesh.Domain, equations.Law.AtZeroField);
        var tree = new BoxTree([.. singular.Select(s => Box.Of(mesh.Domain.Vertices[s.Vertex]).Grown(LeftOut * s.Reach))]);
        var list = new List<int>();
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            Point2 centre = Centre(mesh, t);
            if (!tree.Query(Box.Of(centre)).Exists(k => Point2.Distance(centre, mesh.Domain.Vertices[singular[k].Vertex]) < LeftOut * singular[k].Reach))
            {
                list.Add(t);
            }
        }

        triangles = [.. list];
    }

    /// <summary>The peaks of a state, A/m and W/m².</summary>
    public (double SheetCurrent, double Power) Find(ReadOnlySpan<double> u)
    {
        const int Batch = 256;
        Span<double> ex = stackalloc double[Batch], ey = stackalloc double[Batch], kx = stackalloc double[Batch], ky = stackalloc double[Batch];
        double current = 0, power = 0;
        for (int first = 0; first < triangles.Length; first += Batch)
        {
            int n = Math.Min(Batch, triangles.Length - first);
            for (int i = 0; i < n; i++)
            {
                (double gx, double gy) = PointGradient.At(equations.Space, triangles[first + i], 1.0 / 3, 1.0 / 3, 1.0 / 3, u);
                (ex[i], ey[i]) = (-gx, -gy);
            }

            equations.Law.Evaluate(ex[..n], ey[..n], kx[..n], ky[..n]);
            for (int i = 0; i < n; i++)
            {
                current = Math.Max(current, (kx[i] * kx[i]) + (ky[i] * ky[i]));
                power = Math.Max(power, (ex[i] * kx[i]) + (ey[i] * ky[i]));
            }
        }

        return (Math.Sqrt(current), power);
    }

    private static Point2 Centre(TriangleMesh mesh, int t)
    {
        int a = mesh.Corners[3 * t], b = mesh.Corners[(3 * t) + 1], c = mesh.Corners[(3 * t) + 2];
        return new((mesh.X[a] + mesh.X[b] + mesh.X[c]) / 3, (mesh.Y[a] + mesh.Y[b] + mesh.Y[c]) / 3);
    }
}
