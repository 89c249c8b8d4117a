using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace FieldSolve.Sparse;

// L D Lᵀ: U = D Lᵀ is computed as for L U, L follows from it.
internal static unsafe partial class FrontKernels
{
    /// <summary>
    /// Factors the panel of a symmetric front: U = D Lᵀ in place, by rows, and L (by columns, unit diagonal not stored) beside it, which need not be
    /// set before. Entries left of the diagonal of either hold no meaning afterwards.
    /// </summary>
    /// <param name="u">Rows of the front, from the diagonal on.</param>
    /// <param name="l">Takes L, width x stride.</param>
    /// <param name="width">Steps to eliminate.</param>
    /// <param name="stride">Distance of rows, a multiple of eight.</param>
    /// <param name="floor">Smallest pivot accepted at each step.</param>
    /// <param name="team">Threads that may help, or null.</param>
    /// <param name="cancel">Stops the work between blocks.</param>
    /// <returns>-1, or the step whose pivot is refused.</returns>
    public static int FactorSymmetric(double* u, double* l, int width, int stride, double* floor, WorkTeam? team, CancellationToken cancel)
    {
        const int Outer = 32;
        for (int k = 0; k < width; k += 4)
        {
            int rows = Math.Min(4, width - k), from = k & -8, columns = stride - from, outer = k & -Outer;
            double* uk = u + (nint)k * stride, lk = l + (nint)k * stride;
            if (k == outer && k > 0)
            {
                int many = Math.Min(Outer, width - k);
                cancel.ThrowIfCancellationRequested();
                if (team is not null && (long)k * columns > 2 * WorthDividing)
                {
                    Next(team, u, l, k, stride, many);
                }
                else
                {
                    Subtract(l + k, stride, u + k, uk + k, stride, k, many, columns);
                }
            }
            if (k > outer)
            {
                nint above = (nint)outer * stride;
                Subtract(l + above + k, stride, u + above + from, uk + from, stride, k - outer, rows, columns);
            }
            int refused = rows == 4
                ? Finish4Symmetric(uk, lk, k, from, stride, floor + k)
                : FinishFewSymmetric(uk, lk, k, from, stride, floor + k, rows);
            if (refused >= 0)
            {
                return k + refused;
            }
        }
        return -1;
    }

    // The part of all earlier steps in the next few rows, by strips of columns.
    private static void Next(WorkTeam team, double* u, double* l, int k, int stride, int many)
    {
        const int Wide = 256;
        int columns = stride - k;
        team.Divide((columns + Wide - 1) / Wide, i =>
        {
            int from = k + (i * Wide);
            Subtract(l + k, stride, u + from, u + (nint)k * stride + from, stride, k, many, Math.Min(Wide, stride - from));
        });
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static int FinishFewSymmetric(double* u, double* l, int k, int from, int stride, double* floor, int rows)
    {
        for (int i = 0; i < rows; i++)
        {
            double* ui = u + (nint)i * stride, li = l + (nint)i * stride;
            for (int p = 0; p < i; p++)
            {
                double* up = u + (nint)p * stride;
                Vector512<double> f = Vector512.Create(-l[(nint)p * stride + k + i]);
                for (int j = from; j < stride; j += 8)
                {
                    Vector512.FusedMultiplyAdd(f, Vector512.Load(up + j), Vector512.Load(ui + j)).Store(ui + j);
                }
            }
            double pivot = ui[k + i];
            if (Refused(pivot, floor[i]))
            {
                return i;
            }
            Vector512<double> scale = Vector512.Create(1 / pivot);
            for (int j = from; j < stride; j += 8)
            {
                (Vector512.Load(ui + j) * scale).Store(li + j);
            }
        }
        return -1;
    }

    // Four rows that depend on each other: first the 4 x 4 block, then all columns with its factors.
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static int Finish4Symmetric(double* u, double* l, int k, int from, int stride, double* floor)
    {
        double* u0 = u, u1 = u + stride, u2 = u1 + stride, u3 = u2 + stride;
        double* l0 = l, l1 = l + stride, l2 = l1 + stride, l3 = l2 + stride;

        double p0 = u0[k], r0 = 1 / p0;
        double g01 = -(u0[k + 1] * r0), g02 = -(u0[k + 2] * r0), g03 = -(u0[k + 3] * r0);

        double p1 = Math.FusedMultiplyAdd(g01, u0[k + 1], u1[k + 1]), r1 = 1 / p1;
        double f12 = Math.FusedMultiplyAdd(g01, u0[k + 2], u1[k + 2]), f13 = Math.FusedMultiplyAdd(g01, u0[k + 3], u1[k + 3]);
        double g12 = -(f12 * r1), g13 = -(f13 * r1);

        double p2 = Math.FusedMultiplyAdd(g12, f12, Math.FusedMultiplyAdd(g02, u0[k + 2], u2[k + 2])), r2 = 1 / p2;
        double f23 = Math.FusedMultiplyAdd(g12, f13, Math.FusedMultiplyAdd(g02, u0[k + 3], u2[k + 3])), g23 = -(f23 * r2);

        double p3 = Math.FusedMultiplyAdd(g23, f23, Math.FusedMultiplyAdd(g13, f13, Math.FusedMultiplyAdd(g03, u0[k + 3], u3[k + 3])));

        Vector512<double> vg01 = Vector512.Create(g01), vg02 = Vector512.Create(g02), vg03 = Vector512.Create(g03);
        Vector512<double> vg12 = Vector512.Create(g12), vg13 = Vector512.Create(g13), vg23 = Vector512.Create(g23);
        Vector512<double> vr0 = Vector512.Create(r0), vr1 = Vector512.Create(r1), vr2 = Vector512.Create(r2), vr3 = Vector512.Create(1 / p3);
        for (int j = from; j < stride; j += 8)
        {
            Vector512<double> a0 = Vector512.Load(u0 + j);
            Vector512<double> a1 = Vector512.FusedMultiplyAdd(vg01, a0, Vector512.Load(u1 + j));
            Vector512<double> a2 = Vector512.FusedMultiplyAdd(vg12, a1, Vector512.FusedMultiplyAdd(vg02, a0, Vector512.Load(u2 + j)));
            Vector512<double> a3 = Vector512.FusedMultiplyAdd(
                vg23, a2, Vector512.FusedMultiplyAdd(vg13, a1, Vector512.FusedMultiplyAdd(vg03, a0, Vector512.Load(u3 + j))));
            a1.Store(u1 + j);
            a2.Store(u2 + j);
            a3.Store(u3 + j);
            (a0 * vr0).Store(l0 + j);
            (a1 * vr1).Store(l1 + j);
            (a2 * vr2).Store(l2 + j);
            (a3 * vr3).Store(l3 + j);
        }
        return Refused(p0, floor[0]) ? 0 : Refused(p1, floor[1]) ? 1 : Refused(p2, floor[2]) ? 2 : Refused(p3, floor[3]) ? 3 : -1;
    }
}
