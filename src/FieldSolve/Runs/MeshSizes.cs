using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>Chooses element sizes: a first guess from the shape, then from the estimated errors.</summary>
internal static class MeshSizes
{
    // Elements across the sheet and growth of their size with the distance from a singular point, at the first level.
    private const double FirstAcross = 12;
    private const double FirstGrowth = 0.6;
    private const double ContactEndFirst = 0.02;

    // Angle of an arc that one element of the first level spans, radians.
    private const double FirstTurn = 0.25;

    // Largest ratio of size to distance from a smaller element, at later levels.
    private const double Growth = 0.7;

    // Share of the wanted error that regular triangles and singular points may use. The mesher's triangles are somewhat smaller than asked for, which
    // leaves room for what the prediction misses.
    private const double RegularBudget = 0.95;
    private const double CoreBudget = 0.2;

    // Later predictions start from better meshes, but one that failed should not fail again for a trifle.
    private const double LessEachLevel = 0.95;

    // At the rim of a pad whose transfer length is not resolved an error falls more slowly than elsewhere.
    private const double LayerPower = 1.0 / 3;

    /// <summary>Sizes of the first mesh.</summary>
    /// <param name="device">Sheet and contacts.</param>
    /// <param name="corners">Small triangles at re-entrant corners too, not at contact ends alone.</param>
    /// <param name="ends">Size at contact ends, as a share of the shorter stretch that ends there.</param>
    public static ISizeField First(SheetDevice device, bool corners = true, double ends = ContactEndFirst)
    {
        Domain domain = device.Domain;

        // An anisotropic sheet is an isotropic one stretched by the square root of its ratio (J. D. Wasscher, Philips Res. Rep. 16, 301 (1961)).
        Tensor2 tensor = device.Law.AtZeroField;
        double stretch = Math.Clamp(Math.Pow(Math.Max(tensor.Aa / tensor.Bb, tensor.Bb / tensor.Aa), 0.25), 1, 2);
        double background = domain.Size / (FirstAcross * stretch);
        var points = SingularPoints.Of(domain).Concat(SingularPoints.Of(domain, tensor.ToLab(device.Axis))).DistinctBy(p => p.Vertex)
            .Where(p => corners || p.IsContactEnd)
            .Select(p => new SizePoint(
                domain.Vertices[p.Vertex].X, domain.Vertices[p.Vertex].Y, Math.Min(background, ends * p.Reach / stretch), FirstGrowth))
            .ToList();
        foreach (Curve arc in domain.Edges.Select(e => e.Curve).Where(c => c.IsArc && FirstTurn * c.Radius < background))
        {
            int steps = (int)Math.Ceiling(Math.Abs(arc.Sweep) / FirstTurn);
            points.AddRange(Enumerable.Range(0, steps + 1).Select(i => arc.At((double)i / steps))
                .Select(p => new SizePoint(p.X, p.Y, FirstTurn * arc.Radius, FirstGrowth)));
        }

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
        (double[] load, double[][] exponent) = Loads(mesh, goals);
        double coreLoad = 0;
        int cores = 0;
        var regular = new List<double>();
        for (int t = 0; t < load.Length; t++)
        {
            if (meshes.Vertex[t] >= 0)
            {
                coreLoad += load[t];
                cores++;
            }
            else
            {
                regular.Add(load[t]);
            }
        }

        double cancelling = Cancelling(regular.Sum() + coreLoad, goals) * Math.Pow(LessEachLevel, level * level);
        double equal = Equidistribution(regular, RegularBudget * cancelling, mostTriangles);
        double[] inside = new double[load.Length], size = new double[mesh.VertexCount];
        Array.Fill(size, double.PositiveInfinity);
        for (int t = 0; t < load.Length; t++)
        {
            int vertex = meshes.Vertex[t];
            double factor = vertex >= 0
                ? Math.Clamp(Math.Pow(CoreBudget * cancelling / Math.Max(cores, 1) / Math.Max(load[t], double.Epsilon), 1 / exponent[t][vertex]), 1e-6, 2)
                : Math.Clamp(Math.Pow(equal / Math.Max(load[t], double.Epsilon), meshes.Shares.Kinds[t] == Falloff.Smooth ? 1.0 / 6 : LayerPower), 0.2, 2);
            double edge = EquilateralEdge(mesh, t);

            // At a singular point only the point itself asks for tiny triangles; its neighbours follow by the growth.
            inside[t] = (vertex >= 0 ? Math.Max(factor, 1) : factor) * edge;
            for (int k = 0; k < 3; k++)
            {
                int v = mesh.Corners[(3 * t) + k];
                size[v] = Math.Min(size[v], vertex == v ? factor * edge : inside[t]);
            }
        }

        return new TriangleSize(mesh, inside, size, Growth);
    }

    // The loads count every contribution positive and take the worst reading in each triangle; how much more that is than the worst reading's own
    // bar is much the same on the next mesh.
    private static double Cancelling(double total, IReadOnlyList<GoalMeasure> goals)
    {
        double worst = goals.Max(g => g.Error.Bar / g.Wanted);
        return worst > 0 ? Math.Clamp(total / worst, 1, 20) : 1;
    }

    // Per triangle, the largest share of a wanted error over all readings, and the exponents of that reading.
    private static (double[] Load, double[][] Exponent) Loads(TriangleMesh mesh, IReadOnlyList<GoalMeasure> goals)
    {
        double[] load = new double[mesh.TriangleCount];
        double[][] exponent = new double[load.Length][];
        Array.Fill(exponent, goals[0].Exponent);
        foreach (GoalMeasure goal in goals)
        {
            for (int t = 0; t < load.Length; t++)
            {
                double share = goal.Error.PerTriangle[t] / goal.Wanted;
                if (share > load[t])
                {
                    (load[t], exponent[t]) = (share, goal.Exponent);
                }
            }
        }

        return (load, exponent);
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

    // The mesher makes about as many triangles as equilateral ones of the wanted edge would be.
    public static double EquilateralEdge(TriangleMesh mesh, int t)
    {
        int a = mesh.Corners[3 * t], b = mesh.Corners[(3 * t) + 1], c = mesh.Corners[(3 * t) + 2];
        double area = 0.5 * (((mesh.X[b] - mesh.X[a]) * (mesh.Y[c] - mesh.Y[a])) - ((mesh.X[c] - mesh.X[a]) * (mesh.Y[b] - mesh.Y[a])));
        return Math.Sqrt(4 / Math.Sqrt(3) * area);
    }
}
