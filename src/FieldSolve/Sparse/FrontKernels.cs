using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace FieldSolve.Sparse;

/// <summary>
/// Dense kernels of a front. Vectors run along rows, whose length is a multiple of eight doubles. Each element is one chain of
/// fused multiply-adds in ascending order of the eliminated steps, whatever the width of the registers: same bits on any machine.
/// </summary>
internal static unsafe partial class FrontKernels
{
    /// <summary>Multiplications per row from which on a second thread is worth calling.</summary>
    private const int WorthDividing = 16_384;

    /// <summary>Rows of C computed at a time in a large front; a multiple of four.</summary>
    private const int Strip = 96;

    /// <summary>C −= Aᵀ B for A depth x rows, B depth x columns, C rows x columns, all by rows.</summary>
    /// <param name="a">A; row p begins at p·lda. Rows are read in fours: up to 3 doubles behind the last are touched, not used.</param>
    /// <param name="lda">Distance of rows of A and of B.</param>
    /// <param name="b">B.</param>
    /// <param name="c">C.</param>
    /// <param name="ldc">Distance of rows of C.</param>
    /// <param name="depth">Rows of A and B.</param>
    /// <param name="rows">Rows of C.</param>
    /// <param name="columns">Columns of C, a multiple of eight.</param>
    public static void Subtract(double* a, nint lda, double* b, double* c, nint ldc, int depth, int rows, int columns)
    {
        for (int j = 0; j < columns;)
        {
            int wide = WidthFor(columns - j);
            Columns(a, lda, b + j, c + j, ldc, depth, rows, wide);
            j += wide;
        }
    }

    /// <summary>As <see cref="Subtract"/>, but only what lies right of the diagonal: row i from column i + shift on, or a few columns more.</summary>
    public static void SubtractUpper(double* a, nint lda, double* b, double* c, nint ldc, int depth, int rows, int columns, int shift)
    {
        for (int j = 0; j < columns;)
        {
            int wide = WidthFor(columns - j);
            Columns(a, lda, b + j, c + j, ldc, depth, Math.Min(rows, (j + wide - shift + 3) & -4), wide);
            j += wide;
        }
    }

    private static int WidthFor(int columns) =>
        Vector512.IsHardwareAccelerated && columns >= 32 ? 32 : Vector512.IsHardwareAccelerated && columns >= 16 ? 16 : 8;

    private static void Columns(double* a, nint lda, double* b, double* c, nint ldc, int depth, int rows, int wide)
    {
        int i = 0;
        if (wide == 32)
        {
            for (; i + 4 <= rows; i += 4)
            {
                Block4x32(a + i, lda, b, c + i * ldc, ldc, depth);
            }
        }
        else if (wide == 16)
        {
            for (; i + 4 <= rows; i += 4)
            {
                Block4x16(a + i, lda, b, c + i * ldc, ldc, depth);
            }
        }
        else
        {
            for (; i + 4 <= rows; i += 4)
            {
                Block4x8(a + i, lda, b, c + i * ldc, ldc, depth);
            }
        }
        for (; i < rows; i++)
        {
            for (int k = 0; k < wide; k += 8)
            {
                Block1x8(a + i, lda, b + k, c + i * ldc + k, depth);
            }
        }
    }

    /// <summary>
    /// Factors the panels of a front in place: U (by rows) and L (by columns, unit diagonal not stored), both width x stride with
    /// the block first. Entries left of the diagonal of either hold no meaning afterwards.
    /// </summary>
    /// <param name="u">Rows of the front, from the diagonal on.</param>
    /// <param name="l">Columns of the front, from below the diagonal on.</param>
    /// <param name="width">Steps to eliminate.</param>
    /// <param name="stride">Distance of rows, a multiple of eight.</param>
    /// <param name="floor">Smallest pivot accepted at each step.</param>
    /// <param name="team">Threads that may help, or null.</param>
    /// <param name="cancel">Stops the work between blocks.</param>
    /// <returns>-1, or the step whose pivot is refused.</returns>
    public static int Factor(double* u, double* l, int width, int stride, double* floor, WorkTeam? team, CancellationToken cancel)
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
                if (team is not null && (long)k * columns > WorthDividing)
                {
                    Both(team, u, l, k, stride, many);
                }
                else
                {
                    Subtract(l + k, stride, u + k, uk + k, stride, k, many, columns);
                    Subtract(u + k, stride, l + k, lk + k, stride, k, many, columns);
                }
            }
            if (k > outer)
            {
                nint above = (nint)outer * stride;
                Subtract(l + above + k, stride, u + above + from, uk + from, stride, k - outer, rows, columns);
                Subtract(u + above + k, stride, l + above + from, lk + from, stride, k - outer, rows, columns);
            }
            int refused = rows == 4
                ? Finish4(uk, lk, k, from, stride, floor + k)
                : FinishFew(uk, lk, k, from, stride, floor + k, rows);
            if (refused >= 0)
            {
                return k + refused;
            }
        }
        return -1;
    }

    /// <summary>
    /// C −= Aᵀ B as <see cref="Subtract"/>, or with a shift of at least 0 as <see cref="SubtractUpper"/>, in strips of rows: cancellable, and with the
    /// help of idle threads.
    /// </summary>
    public static void SubtractInStrips(
        double* a, nint lda, double* b, double* c, nint ldc, int depth, int rows, int columns, int shift, WorkTeam? team, CancellationToken cancel)
    {
        if ((long)depth * columns * rows < 64L * WorthDividing)
        {
            StripOf(a, lda, b, c, ldc, depth, 0, rows, columns, shift);
            return;
        }
        if (team is not null)
        {
            Together(team, a, lda, b, c, ldc, depth, rows, columns, shift, cancel);
            return;
        }
        for (int from = 0; from < rows; from += Strip)
        {
            cancel.ThrowIfCancellationRequested();
            StripOf(a, lda, b, c, ldc, depth, from, Math.Min(Strip, rows - from), columns, shift);
        }
    }

    private static void StripOf(double* a, nint lda, double* b, double* c, nint ldc, int depth, int from, int rows, int columns, int shift)
    {
        if (shift < 0)
        {
            Subtract(a + from, lda, b, c + from * ldc, ldc, depth, rows, columns);
            return;
        }
        int left = (from + shift) & -8;
        SubtractUpper(a + from, lda, b + left, c + from * ldc + left, ldc, depth, rows, columns - left, from + shift - left);
    }

    private static void Together(
        WorkTeam team, double* a, nint lda, double* b, double* c, nint ldc, int depth, int rows, int columns, int shift, CancellationToken cancel) =>
        team.Divide((rows + Strip - 1) / Strip, i =>
        {
            cancel.ThrowIfCancellationRequested();
            int from = i * Strip;
            StripOf(a, lda, b, c, ldc, depth, from, Math.Min(Strip, rows - from), columns, shift);
        });

    // The part of all earlier steps in the next few rows of U and of L, by strips of columns.
    private static void Both(WorkTeam team, double* u, double* l, int k, int stride, int many)
    {
        const int Wide = 256;
        int columns = stride - k, strips = (columns + Wide - 1) / Wide;
        team.Divide(2 * strips, i =>
        {
            int from = i / 2 * Wide;
            double* own = (i & 1) == 0 ? u : l, other = (i & 1) == 0 ? l : u;
            Subtract(other + k, stride, own + k + from, own + (nint)k * stride + k + from, stride, k, many, Math.Min(Wide, columns - from));
        });
    }

    private static bool Refused(double pivot, double floor) => !(pivot > floor) || !double.IsFinite(pivot) || !double.IsFinite(1 / pivot);

    // One to three rows that depend on each other.
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static int FinishFew(double* u, double* l, int k, int from, int stride, double* floor, int rows)
    {
        for (int i = 0; i < rows; i++)
        {
            double* ui = u + (nint)i * stride, li = l + (nint)i * stride;
            for (int p = 0; p < i; p++)
            {
                double* up = u + (nint)p * stride, lp = l + (nint)p * stride;
                Vector512<double> fu = Vector512.Create(-lp[k + i]), fl = Vector512.Create(-up[k + i]);
                for (int j = from; j < stride; j += 8)
                {
                    Vector512.FusedMultiplyAdd(fu, Vector512.Load(up + j), Vector512.Load(ui + j)).Store(ui + j);
                    Vector512.FusedMultiplyAdd(fl, Vector512.Load(lp + j), Vector512.Load(li + j)).Store(li + j);
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
                (Vector512.Load(li + j) * scale).Store(li + j);
            }
        }
        return -1;
    }

    // Four rows that depend on each other: first the 4 x 4 block, then all columns with its factors.
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static int Finish4(double* u, double* l, int k, int from, int stride, double* floor)
    {
        double* u0 = u, u1 = u + stride, u2 = u1 + stride, u3 = u2 + stride;
        double* l0 = l, l1 = l + stride, l2 = l1 + stride, l3 = l2 + stride;

        double p0 = u0[k], r0 = 1 / p0;
        double f01 = -u0[k + 1], f02 = -u0[k + 2], f03 = -u0[k + 3];
        double g01 = -(l0[k + 1] * r0), g02 = -(l0[k + 2] * r0), g03 = -(l0[k + 3] * r0);

        double p1 = Math.FusedMultiplyAdd(g01, u0[k + 1], u1[k + 1]), r1 = 1 / p1;
        double f12 = -Math.FusedMultiplyAdd(g01, u0[k + 2], u1[k + 2]), f13 = -Math.FusedMultiplyAdd(g01, u0[k + 3], u1[k + 3]);
        double g12 = -(Math.FusedMultiplyAdd(f01, -g02, l1[k + 2]) * r1), g13 = -(Math.FusedMultiplyAdd(f01, -g03, l1[k + 3]) * r1);

        double p2 = Math.FusedMultiplyAdd(g12, -f12, Math.FusedMultiplyAdd(g02, u0[k + 2], u2[k + 2])), r2 = 1 / p2;
        double f23 = -Math.FusedMultiplyAdd(g12, -f13, Math.FusedMultiplyAdd(g02, u0[k + 3], u2[k + 3]));
        double g23 = -(Math.FusedMultiplyAdd(f12, -g13, Math.FusedMultiplyAdd(f02, -g03, l2[k + 3])) * r2);

        double p3 = Math.FusedMultiplyAdd(g23, -f23, Math.FusedMultiplyAdd(g13, -f13, Math.FusedMultiplyAdd(g03, u0[k + 3], u3[k + 3])));

        Vector512<double> vf01 = Vector512.Create(f01), vf02 = Vector512.Create(f02), vf03 = Vector512.Create(f03);
        Vector512<double> vf12 = Vector512.Create(f12), vf13 = Vector512.Create(f13), vf23 = Vector512.Create(f23);
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

            Vector512<double> b0 = Vector512.Load(l0 + j) * vr0;
            Vector512<double> b1 = Vector512.FusedMultiplyAdd(vf01, b0, Vector512.Load(l1 + j)) * vr1;
            Vector512<double> b2 = Vector512.FusedMultiplyAdd(vf12, b1, Vector512.FusedMultiplyAdd(vf02, b0, Vector512.Load(l2 + j))) * vr2;
            Vector512<double> b3 = Vector512.FusedMultiplyAdd(
                vf23, b2, Vector512.FusedMultiplyAdd(vf13, b1, Vector512.FusedMultiplyAdd(vf03, b0, Vector512.Load(l3 + j)))) * vr3;
            b0.Store(l0 + j);
            b1.Store(l1 + j);
            b2.Store(l2 + j);
            b3.Store(l3 + j);
        }
        return Refused(p0, floor[0]) ? 0 : Refused(p1, floor[1]) ? 1 : Refused(p2, floor[2]) ? 2 : Refused(p3, floor[3]) ? 3 : -1;
    }
}
