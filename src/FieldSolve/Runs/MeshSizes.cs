using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;

namespace FieldSolve.Runs;

/// <summary>Chooses element sizes: a first guess from the shape, then from the estimated errors.</summary>
internal static class MeshSizes
{
    // Elements across the sheet and growth of their size with the distance from a singular point, at the first level.
    private const double FirstAcross = 12;
    private const double FirstGrowth = 0.6;
    private const double ContactEndFirst = 0.02;

    // Largest ratio of size to distance from a smaller element, at later levels.
    private const double Growth = 0.7;

    // Share of the wanted error that regular triangles and singular points may use; the rest is for what the prediction misses.
    private const double RegularBudget = 0.5;
    private const double CoreBudget = 0.2;

    private const double LessEachLevel = 0.65;

    // The sizes are those of longest edges; a mesh made for a size has edges of about 0.8 of it.
    private const double EdgeToSize = 1.2;

    /// <summary>Sizes of the first mesh.</summary>
    public static ISizeField First(SheetDevice device)
    {
        Domain domain = device.Domain;
        double background = domain.Size / FirstAcross;
        var points = SingularPoints.Of(domain)
            .Select(p => new SizePoint(
                domain.Vertices[p.Vertex].X, domain.Vertices[p.Vertex].Y, Math.Min(background, ContactEndFirst * p.Reach), FirstGrowth))
            .ToList();
        return new GradedSize(background, points);
    }

    /// <summary>Sizes of the next mesh.</summary>
    /// <param name="meshes">The meshes that were measured.</param>
    /// <param name="goals">Errors with what was wanted.</param>
    /// <param name="level">Level of the mesh that was measured; a prediction that failed before gets less of the wanted error.</param>
    /// <param name="mostTriangles">Most triangles of the next coarse mesh.</param>
    public static ISizeField Next(MeshPair meshes, IReadOnlyList<GoalMeasure> goals, int level, int mostTriangles)
    {
        TriangleMesh mesh = meshes.Coarse.Space.Mesh;
        double[] load = Loads(mesh, goals);
        double coreLoad = 0;
        int cores = 0;
        var regular = new List<double>();
        for (int t = 0; t < load.Length; t++)
        {
            if (meshes.IsCore[t])
            {
                coreLoad += load[t];
                cores++;
            }
            else
            {
                regular.Add(load[t]);
            }
        }

        double cancelling = Cancelling(regular.Sum() + coreLoad, goals) * Math.Pow(LessEachLevel, level);
        double even = Equidistribution(regular, RegularBudget * cancelling, mostTriangles);
        double[] size = new double[mesh.VertexCount];
        Array.Fill(size, double.PositiveInfinity);
        for (int t = 0; t < load.Length; t++)
        {
            double factor = meshes.IsCore[t]
                ? Math.Clamp(CoreBudget * cancelling / Math.Max(cores, 1) / Math.Max(load[t], double.Epsilon), 1e-3, 2)
                : Math.Clamp(Math.Pow(even / Math.Max(load[t], double.Epsilon), 1.0 / 6), 0.2, 2);
            double edge = EdgeToSize * LongestEdge(mesh, t);
            for (int k = 0; k < 3; k++)
            {
                // At a singular point only the point itself asks for tiny triangles; its neighbours follow by the growth.
                int v = mesh.Corners[(3 * t) + k];
                bool mayShrink = !meshes.IsCore[t] || v < mesh.Domain.Vertices.Count;
                size[v] = Math.Min(size[v], (mayShrink ? factor : Math.Max(factor, 1)) * edge);
            }
        }

        return new VertexSize(mesh, size, Growth);
    }

    // The loads count every contribution positive and take the worst reading in each triangle; how much more that is than the worst reading's own
    // bar is much the same on the next mesh.
    private static double Cancelling(double total, IReadOnlyList<GoalMeasure> goals)
    {
        double worst = goals.Max(g => g.Error.Bar / g.Wanted);
        return worst > 0 ? Math.Clamp(total / worst, 1, 20) : 1;
    }

    // Per triangle, the largest share of a wanted error over all readings.
    private static double[] Loads(TriangleMesh mesh, IReadOnlyList<GoalMeasure> goals)
    {
        double[] load = new double[mesh.TriangleCount];
        foreach (GoalMeasure goal in goals)
        {
            for (int t = 0; t < load.Length; t++)
            {
                load[t] = Math.Max(load[t], goal.Error.PerTriangle[t] / goal.Wanted);
            }
        }

        return load;
    }

    // The error per triangle goes like size^6 (density size^4 times area), so the cheapest mesh has equal errors. Find that
    // common error: with N(e) = sum of (load/e)^(1/3) triangles, e N(e) is the budget.
    private static double Equidistribution(List<double> load, double budget, int mostTriangles)
    {
        double sum = load.Sum(x => Math.Cbrt(x));
        if (sum == 0)
        {
            return 1;
        }

        double even = Math.Pow(budget / sum, 1.5);
        double count = sum / Math.Cbrt(even);
        return count > mostTriangles ? Math.Pow(sum / mostTriangles, 3) : even;
    }

    private static double LongestEdge(TriangleMesh mesh, int t)
    {
        double longest = 0;
        for (int k = 0; k < 3; k++)
        {
            int a = mesh.Corners[(3 * t) + k], b = mesh.Corners[(3 * t) + ((k + 1) % 3)];
            double dx = mesh.X[b] - mesh.X[a], dy = mesh.Y[b] - mesh.Y[a];
            longest = Math.Max(longest, (dx * dx) + (dy * dy));
        }

        return Math.Sqrt(longest);
    }
}
