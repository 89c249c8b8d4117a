using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Runs;

/// <summary>
/// What a small patch of other conductance adds to the computed map: to first order the potential of the current that is missing there, a dipole (J. D. Jackson, Classical Electrodynamics,
/// section 4.1, for charges; the same equation), with the sheet's own edges and contacts and its law linearised at the drive.
/// </summary>
internal sealed class PatchResponse
{
    private readonly FieldLevel level;
    private readonly FieldMap map;
    private readonly MapQuantity quantity;
    private readonly int drain;
    private readonly double width;
    private readonly SparseLu factor;
    private readonly MapSampler sampler;
    private ((double X, double Y) At, double[] X, double[] Y) last = ((double.NaN, 0), [], []);

    /// <summary>Prepares the linear problem.</summary>
    /// <param name="level">A mesh.</param>
    /// <param name="u">The drive's solution on it, V.</param>
    /// <param name="map">The map of that solution.</param>
    /// <param name="drain">The contact at 0 V.</param>
    /// <param name="quantity">What the map shows.</param>
    /// <param name="width">Standard deviation of the patch, which is a bell here, metres.</param>
    /// <param name="cancel">Stops the work.</param>
    public PatchResponse(FieldLevel level, double[] u, FieldMap map, int drain, MapQuantity quantity, double width, CancellationToken cancel)
    {
        (this.level, this.map, this.drain, this.quantity, this.width, sampler) = (level, map, drain, quantity, width, new(map));
        factor = level.AtZero;
        if (!level.Equations.Law.IsLinear)
        {
            double[] jacobian = new double[level.Space.Pattern.Count + 1];
            level.Equations.Jacobian(u, jacobian);
            factor = new SparseLu(level.Analysis, level.Equations.Law.HasPotential);
            factor.Factor(jacobian.AsSpan(0, jacobian.Length - 1), cancel);
        }
    }

    /// <summary>Standard deviation of the bell, metres.</summary>
    public double Width => width;

    /// <summary>Values at the nodes per unit of missing current times area along x and along y, in the map's unit per A m.</summary>
    public (double[] X, double[] Y) At(double x, double y)
    {
        if (last.At != (x, y))
        {
            (double[] rx, double[] ry) = Load(x, y);
            last = ((x, y), Solve(rx), Solve(ry));
        }

        return (last.X, last.Y);
    }

    /// <summary>A combination of values at the nodes, at a place; 0 off the sheet.</summary>
    public double Value(double[] values, Point2 at) => sampler.Value(values, at.X, at.Y) ?? 0;

    /// <summary>Undisturbed sheet current density at the nearest node to a place, A/m.</summary>
    public (double X, double Y) CurrentAt(Point2 at)
    {
        (double? kx, double? ky) = (sampler.Value(map.Kx, at.X, at.Y), sampler.Value(map.Ky, at.X, at.Y));
        return (kx ?? 0, ky ?? 0);
    }

    private (double[] X, double[] Y) Load(double x, double y)
    {
        FieldSpace space = level.Space;
        double[] rx = new double[level.Equations.Length], ry = new double[rx.Length];
        Span<double> slope = stackalloc double[12];
        double sum = 0, reach = 5 * width;
        for (int t = 0; t < space.Mesh.TriangleCount; t++)
        {
            ReadOnlySpan<int> n = space.Nodes.AsSpan(6 * t, 6);
            double lowX = Math.Min(space.NodeX[n[0]], Math.Min(space.NodeX[n[1]], space.NodeX[n[2]])), highX = Math.Max(space.NodeX[n[0]], Math.Max(space.NodeX[n[1]], space.NodeX[n[2]]));
            double lowY = Math.Min(space.NodeY[n[0]], Math.Min(space.NodeY[n[1]], space.NodeY[n[2]])), highY = Math.Max(space.NodeY[n[0]], Math.Max(space.NodeY[n[1]], space.NodeY[n[2]]));
            if (lowX > x + reach || highX < x - reach || lowY > y + reach || highY < y - reach)
            {
                continue;
            }

            for (int q = 0; q < TriangleRule.Count; q++)
            {
                (double px, double py) = PointGradient.Place(space, t, q);
                double a = TriangleRule.Lambda[3 * q], b = TriangleRule.Lambda[(3 * q) + 1], c = TriangleRule.Lambda[(3 * q) + 2];
                QuadraticShape.Slopes(a, b, c, slope);
                (double xb, double xc, double yb, double yc, double det) = QuadraticShape.Jacobian(space, t, slope);
                double w = 0.5 * TriangleRule.Weight[q] * det * Math.Exp(-(((px - x) * (px - x)) + ((py - y) * (py - y))) / (2 * width * width)) / (2 * Math.PI * width * width);
                sum += w;
                for (int i = 0; i < 6; i++)
                {
                    int unknown = space.Unknown[n[i]];
                    rx[unknown] -= w * ((slope[2 * i] * yc) - (slope[(2 * i) + 1] * yb)) / det;
                    ry[unknown] -= w * ((slope[(2 * i) + 1] * xb) - (slope[2 * i] * xc)) / det;
                }
            }
        }

        // The bell as the quadrature sees it holds just one; at the rim part of it lies outside.
        double norm = 1 / Math.Max(sum, 0.05);
        for (int i = 0; i < rx.Length; i++)
        {
            rx[i] *= norm;
            ry[i] *= norm;
        }

        return (rx, ry);
    }

    private double[] Solve(double[] load)
    {
        FieldSpace space = level.Space;
        double[] w = new double[load.Length];
        factor.Solve(load.AsSpan(0, space.Size), w.AsSpan(0, space.Size));
        FieldMap added = FieldMapBuilder.Build(space, level.Equations.Law, w, drain, map.Wiring, map.Current, 0);
        if (quantity == MapQuantity.Potential)
        {
            return added.Potential;
        }

        // |E0 + E1| to first order.
        return [.. Enumerable.Range(0, added.Ex.Length).Select(i => ((map.Ex[i] * added.Ex[i]) + (map.Ey[i] * added.Ey[i])) / Math.Max(double.Hypot(map.Ex[i], map.Ey[i]), double.Epsilon))];
    }
}
