using FieldSolve.Fields;

namespace FieldSolve.Sensitivity;

/// <summary>
/// The integrals over the triangles behind <see cref="StateSensitivity"/>. With g = grad z: dV/dp = integral of dK/dp.g, and for the place of a node with
/// shape function N, dV/dx_i = integral of S_ij dN/dx_j, S_ij = (K.g) d_ij - E_i (D' g)_j - g_i K_j with D = dK/dE.
/// </summary>
internal sealed class TriangleSlopes(SheetEquations equations, string[] keys, double[,] law, double[][] nodeX, double[][] nodeY, bool places)
{
    private const int Q = TriangleRule.Count;
    private const int Block = 24;
    private const int Points = Q * Block;

    private static readonly double[] Slopes = AllSlopes();

    private readonly FieldSpace space = equations.Space;
    private readonly double[] gradient = new double[12 * Points];   // per point: six pairs
    private readonly double[] weight = new double[Points];
    private readonly double[] ex = new double[Points], ey = new double[Points], kx = new double[Points], ky = new double[Points];
    private readonly double[] xx = new double[Points], xy = new double[Points], yx = new double[Points], yy = new double[Points];
    private readonly double[] gx = new double[Points], gy = new double[Points];
    private readonly double[][] slopeX = [.. Enumerable.Range(0, keys.Length + 1).Select(_ => new double[Points])];
    private readonly double[][] slopeY = [.. Enumerable.Range(0, keys.Length + 1).Select(_ => new double[Points])];

    public void Add(ReadOnlySpan<double> u, double[][] adjoints)
    {
        for (int first = 0; first < space.Mesh.TriangleCount; first += Block)
        {
            int count = Math.Min(Block, space.Mesh.TriangleCount - first), points = Q * count;
            for (int e = 0; e < count; e++)
            {
                Geometry(first + e, e);
            }

            Gradients(first, count, u, ex, ey);
            for (int p = 0; p < points; p++)
            {
                (ex[p], ey[p]) = (-ex[p], -ey[p]);
            }

            equations.Law.Evaluate(
                ex.AsSpan(0, points), ey.AsSpan(0, points), kx.AsSpan(0, points), ky.AsSpan(0, points),
                xx.AsSpan(0, points), xy.AsSpan(0, points), yx.AsSpan(0, points), yy.AsSpan(0, points));
            LawSlopes(points);
            for (int r = 0; r < adjoints.Length; r++)
            {
                Gradients(first, count, adjoints[r], gx, gy);
                for (int k = 0; k <= keys.Length; k++)
                {
                    double sum = 0;
                    double[] px = slopeX[k], py = slopeY[k];
                    for (int p = 0; p < points; p++)
                    {
                        sum += weight[p] * ((px[p] * gx[p]) + (py[p] * gy[p]));
                    }

                    law[r, k] += sum;
                }

                if (places)
                {
                    AddNodes(first, count, nodeX[r], nodeY[r]);
                }
            }
        }
    }

    // Turning the crystal by da turns K with it and E against it: dK/da = r K - D r E, r a quarter turn.
    private void LawSlopes(int points)
    {
        for (int p = 0; p < points; p++)
        {
            slopeX[0][p] = -ky[p] + (xx[p] * ey[p]) - (xy[p] * ex[p]);
            slopeY[0][p] = kx[p] + (yx[p] * ey[p]) - (yy[p] * ex[p]);
        }

        for (int k = 0; k < keys.Length; k++)
        {
            equations.Law.ParameterSlope(
                keys[k], ex.AsSpan(0, points), ey.AsSpan(0, points), slopeX[k + 1].AsSpan(0, points), slopeY[k + 1].AsSpan(0, points));
        }
    }

    private void AddNodes(int first, int count, double[] toX, double[] toY)
    {
        Span<double> nx = stackalloc double[6], ny = stackalloc double[6];
        for (int e = 0; e < count; e++)
        {
            nx.Clear();
            ny.Clear();
            for (int p = Q * e; p < (Q * e) + Q; p++)
            {
                double w = weight[p], zx = gx[p], zy = gy[p], power = (kx[p] * zx) + (ky[p] * zy);
                double dx = (xx[p] * zx) + (yx[p] * zy), dy = (xy[p] * zx) + (yy[p] * zy);
                double sxx = w * (power - (ex[p] * dx) - (zx * kx[p])), sxy = -w * ((ex[p] * dy) + (zx * ky[p]));
                double syx = -w * ((ey[p] * dx) + (zy * kx[p])), syy = w * (power - (ey[p] * dy) - (zy * ky[p]));
                ReadOnlySpan<double> g = gradient.AsSpan(12 * p, 12);
                for (int i = 0; i < 6; i++)
                {
                    nx[i] += (sxx * g[2 * i]) + (sxy * g[(2 * i) + 1]);
                    ny[i] += (syx * g[2 * i]) + (syy * g[(2 * i) + 1]);
                }
            }

            ReadOnlySpan<int> nodes = space.Nodes.AsSpan(6 * (first + e), 6);
            for (int i = 0; i < 6; i++)
            {
                toX[nodes[i]] += nx[i];
                toY[nodes[i]] += ny[i];
            }
        }
    }

    private void Geometry(int triangle, int e)
    {
        (double xb, double xc, double yb, double yc, double det) = (0, 0, 0, 0, 0);
        for (int q = 0; q < Q; q++)
        {
            ReadOnlySpan<double> slope = Slopes.AsSpan(12 * q, 12);
            if (q == 0 || space.Curved[triangle])
            {
                (xb, xc, yb, yc, det) = QuadraticShape.Jacobian(space, triangle, slope);
            }

            int p = (Q * e) + q;
            weight[p] = 0.5 * det * TriangleRule.Weight[q];
            Span<double> to = gradient.AsSpan(12 * p, 12);
            double inverse = 1 / det;
            for (int i = 0; i < 6; i++)
            {
                double b = slope[2 * i], c = slope[(2 * i) + 1];
                to[2 * i] = ((b * yc) - (c * yb)) * inverse;
                to[(2 * i) + 1] = ((c * xb) - (b * xc)) * inverse;
            }
        }
    }

    private void Gradients(int first, int count, ReadOnlySpan<double> function, double[] toX, double[] toY)
    {
        Span<double> value = stackalloc double[6];
        for (int e = 0; e < count; e++)
        {
            ReadOnlySpan<int> nodes = space.Nodes.AsSpan(6 * (first + e), 6);
            for (int i = 0; i < 6; i++)
            {
                value[i] = function[space.Unknown[nodes[i]]];
            }

            double zero = value[0];
            for (int p = Q * e; p < (Q * e) + Q; p++)
            {
                ReadOnlySpan<double> g = gradient.AsSpan(12 * p, 12);
                double x = 0, y = 0;
                for (int i = 1; i < 6; i++)
                {
                    double d = value[i] - zero;
                    x += d * g[2 * i];
                    y += d * g[(2 * i) + 1];
                }

                (toX[p], toY[p]) = (x, y);
            }
        }
    }

    private static double[] AllSlopes()
    {
        double[] all = new double[12 * Q];
        for (int q = 0; q < Q; q++)
        {
            QuadraticShape.Slopes(
                TriangleRule.Lambda[3 * q], TriangleRule.Lambda[(3 * q) + 1], TriangleRule.Lambda[(3 * q) + 2], all.AsSpan(12 * q, 12));
        }

        return all;
    }
}
