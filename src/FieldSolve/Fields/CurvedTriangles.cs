using FieldSolve.Laws;

namespace FieldSolve.Fields;

/// <summary>Residual and Jacobian of the isoparametric triangles along arcs; gradients are stored per quadrature point.</summary>
internal sealed class CurvedTriangles
{
    private const int Q = TriangleRule.Count;
    private readonly FieldSpace space;
    private readonly int[] triangle;
    private readonly int[] unknown;     // 6 per triangle
    private readonly double[] gradient; // per triangle and point: 6 pairs (dN/dx, dN/dy)
    private readonly double[] weight;   // per triangle and point, m²

    public CurvedTriangles(FieldSpace space)
    {
        this.space = space;
        triangle = space.TrianglesThatAre(curved: true);
        unknown = new int[6 * triangle.Length];
        gradient = new double[12 * Q * triangle.Length];
        weight = new double[Q * triangle.Length];
        Span<double> slope = stackalloc double[12];
        for (int e = 0; e < triangle.Length; e++)
        {
            for (int i = 0; i < 6; i++)
            {
                unknown[(6 * e) + i] = space.Unknown[space.Nodes[(6 * triangle[e]) + i]];
            }

            for (int q = 0; q < Q; q++)
            {
                QuadraticShape.Slopes(TriangleRule.Lambda[3 * q], TriangleRule.Lambda[(3 * q) + 1], TriangleRule.Lambda[(3 * q) + 2], slope);
                (double xb, double xc, double yb, double yc, double det) = QuadraticShape.Jacobian(space, triangle[e], slope);
                if (!(det > 0))
                {
                    throw new FieldSpaceException(
                        "A triangle along an arc is folded over; the mesh is too coarse there. Ask for a smaller error to get a finer one.");
                }

                weight[(Q * e) + q] = 0.5 * det * TriangleRule.Weight[q];
                for (int i = 0; i < 6; i++)
                {
                    double b = slope[2 * i], c = slope[(2 * i) + 1];
                    int at = (12 * ((Q * e) + q)) + (2 * i);
                    gradient[at] = ((b * yc) - (c * yb)) / det;
                    gradient[at + 1] = ((c * xb) - (b * xc)) / det;
                }
            }
        }
    }

    public void AddResidual(LabLaw law, ReadOnlySpan<double> u, Span<double> residual)
    {
        Span<double> ex = stackalloc double[Q], ey = stackalloc double[Q], kx = stackalloc double[Q], ky = stackalloc double[Q];
        Span<double> r = stackalloc double[6];
        for (int e = 0; e < triangle.Length; e++)
        {
            Field(e, u, ex, ey);
            try
            {
                law.Evaluate(ex, ey, kx, ky);
            }
            catch (FieldOutsideTableException o)
            {
                throw Refused(e, o);
            }

            r.Clear();
            for (int q = 0; q < Q; q++)
            {
                ReadOnlySpan<double> g = gradient.AsSpan(12 * ((Q * e) + q), 12);
                double wx = weight[(Q * e) + q] * kx[q], wy = weight[(Q * e) + q] * ky[q];
                for (int i = 0; i < 6; i++)
                {
                    r[i] -= (wx * g[2 * i]) + (wy * g[(2 * i) + 1]);
                }
            }

            for (int i = 0; i < 6; i++)
            {
                residual[unknown[(6 * e) + i]] += r[i];
            }
        }
    }

    public void AddJacobian(LabLaw law, ReadOnlySpan<double> u, Span<double> values)
    {
        Span<double> ex = stackalloc double[Q], ey = stackalloc double[Q], kx = stackalloc double[Q], ky = stackalloc double[Q];
        Span<double> xx = stackalloc double[Q], xy = stackalloc double[Q], yx = stackalloc double[Q], yy = stackalloc double[Q];
        Span<double> block = stackalloc double[36];
        for (int e = 0; e < triangle.Length; e++)
        {
            Field(e, u, ex, ey);
            try
            {
                law.Evaluate(ex, ey, kx, ky, xx, xy, yx, yy);
            }
            catch (FieldOutsideTableException o)
            {
                throw Refused(e, o);
            }

            block.Clear();
            for (int q = 0; q < Q; q++)
            {
                ReadOnlySpan<double> g = gradient.AsSpan(12 * ((Q * e) + q), 12);
                double w = weight[(Q * e) + q];
                for (int j = 0; j < 6; j++)
                {
                    double dx = w * ((xx[q] * g[2 * j]) + (xy[q] * g[(2 * j) + 1]));
                    double dy = w * ((yx[q] * g[2 * j]) + (yy[q] * g[(2 * j) + 1]));
                    for (int i = 0; i < 6; i++)
                    {
                        block[(6 * i) + j] += (g[2 * i] * dx) + (g[(2 * i) + 1] * dy);
                    }
                }
            }

            for (int k = 0; k < 36; k++)
            {
                values[space.TrianglePlaces[(36 * triangle[e]) + k]] += block[k];
            }
        }
    }

    public void VisitStrongField(ReadOnlySpan<double> u, double limit, StrongFieldVisitor visit)
    {
        Span<double> ex = stackalloc double[Q], ey = stackalloc double[Q];
        for (int e = 0; e < triangle.Length; e++)
        {
            Field(e, u, ex, ey);
            for (int q = 0; q < Q; q++)
            {
                if ((ex[q] * ex[q]) + (ey[q] * ey[q]) > limit * limit)
                {
                    visit(triangle[e], q, ex[q], ey[q], weight[(Q * e) + q]);
                }
            }
        }
    }

    private LawRefusedException Refused(int e, FieldOutsideTableException inner)
    {
        (double x, double y) = PointGradient.Place(space, triangle[e], inner.Index);
        return new(x, y, inner);
    }

    private void Field(int e, ReadOnlySpan<double> u, Span<double> ex, Span<double> ey)
    {
        for (int q = 0; q < Q; q++)
        {
            ReadOnlySpan<double> g = gradient.AsSpan(12 * ((Q * e) + q), 12);
            double x = 0, y = 0, first = u[unknown[6 * e]];
            for (int i = 1; i < 6; i++)
            {
                // The functions sum to 1, so only differences matter; this keeps digits where the potential is nearly flat.
                double d = u[unknown[(6 * e) + i]] - first;
                x += d * g[2 * i];
                y += d * g[(2 * i) + 1];
            }

            ex[q] = -x;
            ey[q] = -y;
        }
    }
}
