using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;
using FieldSolve.Laws;

namespace FieldSolve.Fields;

/// <summary>
/// Residual and Jacobian of the straight triangles, a vector of triangles at a time. With g_k the part of the gradient along grad lambda_k,
/// grad u = sum of g_k grad lambda_k, and g_k is linear in the barycentric coordinates, so only the three grad lambda_k are stored.
/// </summary>
internal sealed class StraightTriangles
{
    private const int Q = TriangleRule.Count;
    private const int Block = 32;       // triangles per call of the law; a multiple of every vector length
    private readonly FieldSpace space;
    private readonly int count;
    private readonly int padded;
    private readonly int[] triangle;
    private readonly int[] unknown;     // [i * padded + e], i = 0..5
    private readonly double[] gx;       // [k * padded + e], d lambda_k / dx
    private readonly double[] gy;
    private readonly double[] area;     // m²; 0 in the padding

    public StraightTriangles(FieldSpace space)
    {
        this.space = space;
        triangle = space.TrianglesThatAre(curved: false);
        count = triangle.Length;
        padded = (count + Block - 1) / Block * Block;
        unknown = new int[6 * padded];
        Array.Fill(unknown, space.Size);
        gx = new double[3 * padded];
        gy = new double[3 * padded];
        area = new double[padded];
        for (int e = 0; e < count; e++)
        {
            ReadOnlySpan<int> nodes = space.Nodes.AsSpan(6 * triangle[e], 6);
            for (int i = 0; i < 6; i++)
            {
                unknown[(i * padded) + e] = space.Unknown[nodes[i]];
            }

            double x1 = space.NodeX[nodes[1]] - space.NodeX[nodes[0]], y1 = space.NodeY[nodes[1]] - space.NodeY[nodes[0]];
            double x2 = space.NodeX[nodes[2]] - space.NodeX[nodes[0]], y2 = space.NodeY[nodes[2]] - space.NodeY[nodes[0]];
            double twice = (x1 * y2) - (x2 * y1);
            area[e] = 0.5 * twice;
            (gx[padded + e], gy[padded + e]) = (y2 / twice, -x2 / twice);
            (gx[(2 * padded) + e], gy[(2 * padded) + e]) = (-y1 / twice, x1 / twice);
            (gx[e], gy[e]) = ((y1 - y2) / twice, (x2 - x1) / twice);
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public void AddResidual(LabLaw law, ReadOnlySpan<double> u, Span<double> residual)
    {
        Span<double> nodal = stackalloc double[6 * Block], r = stackalloc double[6 * Block];
        Span<double> ex = stackalloc double[Q * Block], ey = stackalloc double[Q * Block];
        Span<double> kx = stackalloc double[Q * Block], ky = stackalloc double[Q * Block];
        for (int first = 0; first < padded; first += Block)
        {
            Field(first, u, nodal, ex, ey);
            Evaluate(law, first, ex, ey, kx, ky);
            r.Clear();
            for (int q = 0; q < Q; q++)
            {
                double l0 = TriangleRule.Lambda[3 * q], l1 = TriangleRule.Lambda[(3 * q) + 1], l2 = TriangleRule.Lambda[(3 * q) + 2];
                for (int e = 0; e < Block; e += Vector<double>.Count)
                {
                    Vector<double> w = At(area, first + e) * -TriangleRule.Weight[q];
                    Vector<double> wx = w * At(kx, (q * Block) + e), wy = w * At(ky, (q * Block) + e);
                    Vector<double> s0 = (wx * At(gx, first + e)) + (wy * At(gy, first + e));
                    Vector<double> s1 = (wx * At(gx, padded + first + e)) + (wy * At(gy, padded + first + e));
                    Vector<double> s2 = (wx * At(gx, (2 * padded) + first + e)) + (wy * At(gy, (2 * padded) + first + e));
                    Add(r, e, ((4 * l0) - 1) * s0);
                    Add(r, Block + e, ((4 * l1) - 1) * s1);
                    Add(r, (2 * Block) + e, ((4 * l2) - 1) * s2);
                    Add(r, (3 * Block) + e, 4 * ((l1 * s0) + (l0 * s1)));
                    Add(r, (4 * Block) + e, 4 * ((l2 * s1) + (l1 * s2)));
                    Add(r, (5 * Block) + e, 4 * ((l2 * s0) + (l0 * s2)));
                }
            }

            int last = Math.Min(Block, count - first);
            for (int i = 0; i < 6; i++)
            {
                ReadOnlySpan<int> to = unknown.AsSpan((i * padded) + first, last);
                for (int e = 0; e < last; e++)
                {
                    residual[to[e]] += r[(i * Block) + e];
                }
            }
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    public void AddJacobian(LabLaw law, ReadOnlySpan<double> u, Span<double> values)
    {
        Span<double> nodal = stackalloc double[6 * Block], block = stackalloc double[36 * Block];
        Span<double> ex = stackalloc double[Q * Block], ey = stackalloc double[Q * Block];
        Span<double> kx = stackalloc double[Q * Block], ky = stackalloc double[Q * Block];
        Span<double> xx = stackalloc double[Q * Block], xy = stackalloc double[Q * Block];
        Span<double> yx = stackalloc double[Q * Block], yy = stackalloc double[Q * Block];
        for (int first = 0; first < padded; first += Block)
        {
            Field(first, u, nodal, ex, ey);
            try
            {
                law.Evaluate(ex, ey, kx, ky, xx, xy, yx, yy);
            }
            catch (FieldOutsideTableException e)
            {
                throw Refused(first, e);
            }

            block.Clear();
            for (int q = 0; q < Q; q++)
            {
                for (int e = 0; e < Block; e += Vector<double>.Count)
                {
                    AddPoint(block, q, first, e, At(xx, (q * Block) + e), At(xy, (q * Block) + e), At(yx, (q * Block) + e), At(yy, (q * Block) + e));
                }
            }

            int last = Math.Min(Block, count - first);
            for (int e = 0; e < last; e++)
            {
                ReadOnlySpan<int> to = space.TrianglePlaces.AsSpan(36 * triangle[first + e], 36);
                for (int k = 0; k < 36; k++)
                {
                    values[to[k]] += block[(k * Block) + e];
                }
            }
        }
    }

    public void VisitStrongField(ReadOnlySpan<double> u, double limit, StrongFieldVisitor visit)
    {
        Span<double> nodal = stackalloc double[6 * Block], ex = stackalloc double[Q * Block], ey = stackalloc double[Q * Block];
        for (int first = 0; first < padded; first += Block)
        {
            Field(first, u, nodal, ex, ey);
            for (int e = 0; e < Math.Min(Block, count - first); e++)
            {
                for (int q = 0; q < Q; q++)
                {
                    double x = ex[(q * Block) + e], y = ey[(q * Block) + e];
                    if ((x * x) + (y * y) > limit * limit)
                    {
                        visit(triangle[first + e], q, x, y, TriangleRule.Weight[q] * area[first + e]);
                    }
                }
            }
        }
    }

    private void Evaluate(LabLaw law, int first, ReadOnlySpan<double> ex, ReadOnlySpan<double> ey, Span<double> kx, Span<double> ky)
    {
        try
        {
            law.Evaluate(ex, ey, kx, ky);
        }
        catch (FieldOutsideTableException e)
        {
            throw Refused(first, e);
        }
    }

    private LawRefusedException Refused(int first, FieldOutsideTableException e)
    {
        (double x, double y) = PointGradient.Place(space, triangle[Math.Min(first + (e.Index % Block), count - 1)], e.Index / Block);
        return new(x, y, e);
    }

    // J[i,j] += w area (grad N_i)' D grad N_j, through T[k,l] = w area (grad lambda_k)' D grad lambda_l.
    private void AddPoint(
        Span<double> block, int q, int first, int e, Vector<double> xx, Vector<double> xy, Vector<double> yx, Vector<double> yy)
    {
        double l0 = TriangleRule.Lambda[3 * q], l1 = TriangleRule.Lambda[(3 * q) + 1], l2 = TriangleRule.Lambda[(3 * q) + 2];
        Vector<double> w = At(area, first + e) * TriangleRule.Weight[q];
        Vector<double> x0 = At(gx, first + e), x1 = At(gx, padded + first + e), x2 = At(gx, (2 * padded) + first + e);
        Vector<double> y0 = At(gy, first + e), y1 = At(gy, padded + first + e), y2 = At(gy, (2 * padded) + first + e);
        double c0 = (4 * l0) - 1, c1 = (4 * l1) - 1, c2 = (4 * l2) - 1;
        for (int k = 0; k < 3; k++)
        {
            Vector<double> gkx = w * (k == 0 ? x0 : k == 1 ? x1 : x2), gky = w * (k == 0 ? y0 : k == 1 ? y1 : y2);
            Vector<double> px = (gkx * xx) + (gky * yx), py = (gkx * xy) + (gky * yy);
            Vector<double> t0 = (px * x0) + (py * y0), t1 = (px * x1) + (py * y1), t2 = (px * x2) + (py * y2);
            Vector<double> u0 = c0 * t0, u1 = c1 * t1, u2 = c2 * t2;
            Vector<double> u3 = 4 * ((l1 * t0) + (l0 * t1)), u4 = 4 * ((l2 * t1) + (l1 * t2)), u5 = 4 * ((l2 * t0) + (l0 * t2));

            // Row i of the block holds c_ik of grad lambda_k: corner k, and the middles of the two edges that meet in it.
            double own = k == 0 ? c0 : k == 1 ? c1 : c2;
            int next = 3 + k, before = 3 + ((k + 2) % 3);
            double toNext = 4 * (k == 0 ? l1 : k == 1 ? l2 : l0), toBefore = 4 * (k == 0 ? l2 : k == 1 ? l0 : l1);
            Row(block, k, e, own, u0, u1, u2, u3, u4, u5);
            Row(block, next, e, toNext, u0, u1, u2, u3, u4, u5);
            Row(block, before, e, toBefore, u0, u1, u2, u3, u4, u5);
        }
    }

    private static void Row(
        Span<double> block, int i, int e, double c,
        Vector<double> u0, Vector<double> u1, Vector<double> u2, Vector<double> u3, Vector<double> u4, Vector<double> u5)
    {
        int at = (6 * i * Block) + e;
        Add(block, at, c * u0);
        Add(block, at + Block, c * u1);
        Add(block, at + (2 * Block), c * u2);
        Add(block, at + (3 * Block), c * u3);
        Add(block, at + (4 * Block), c * u4);
        Add(block, at + (5 * Block), c * u5);
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private void Field(int first, ReadOnlySpan<double> u, Span<double> nodal, Span<double> ex, Span<double> ey)
    {
        // Potentials relative to corner 0: the gradient only needs differences, and near a contact end they are tiny.
        for (int e = 0; e < Block; e++)
        {
            double u0 = u[unknown[first + e]];
            for (int i = 1; i < 6; i++)
            {
                nodal[(i * Block) + e] = u[unknown[(i * padded) + first + e]] - u0;
            }
        }

        for (int q = 0; q < Q; q++)
        {
            double l0 = TriangleRule.Lambda[3 * q], l1 = TriangleRule.Lambda[(3 * q) + 1], l2 = TriangleRule.Lambda[(3 * q) + 2];
            for (int e = 0; e < Block; e += Vector<double>.Count)
            {
                Vector<double> u1 = At(nodal, Block + e), u2 = At(nodal, (2 * Block) + e);
                Vector<double> u3 = At(nodal, (3 * Block) + e), u4 = At(nodal, (4 * Block) + e), u5 = At(nodal, (5 * Block) + e);
                Vector<double> g0 = 4 * ((l1 * u3) + (l2 * u5));
                Vector<double> g1 = (((4 * l1) - 1) * u1) + (4 * ((l0 * u3) + (l2 * u4)));
                Vector<double> g2 = (((4 * l2) - 1) * u2) + (4 * ((l1 * u4) + (l0 * u5)));
                Vector<double> x = (g0 * At(gx, first + e)) + (g1 * At(gx, padded + first + e)) + (g2 * At(gx, (2 * padded) + first + e));
                Vector<double> y = (g0 * At(gy, first + e)) + (g1 * At(gy, padded + first + e)) + (g2 * At(gy, (2 * padded) + first + e));
                (-x).CopyTo(ex[((q * Block) + e)..]);
                (-y).CopyTo(ey[((q * Block) + e)..]);
            }
        }
    }

    private static Vector<double> At(ReadOnlySpan<double> a, int i) =>
        MemoryMarshal.Read<Vector<double>>(MemoryMarshal.AsBytes(a.Slice(i, Vector<double>.Count)));

    private static void Add(Span<double> a, int i, Vector<double> v)
    {
        Span<double> to = a.Slice(i, Vector<double>.Count);
        (new Vector<double>(to) + v).CopyTo(to);
    }
}
