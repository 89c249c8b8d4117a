using System.Runtime.Intrinsics;

namespace FieldSolve.Sparse;

/// <summary>
/// Dense kernels of a front. Vectors run along rows, whose length is a multiple of eight doubles. Each element is one chain of
/// fused multiply-adds in ascending order of the eliminated steps, whatever the width of the registers: same bits on any machine.
/// </summary>
internal static unsafe class FrontKernels
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
            int i = 0, wide;
            if (Vector512.IsHardwareAccelerated && columns - j >= 32)
            {
                wide = 32;
                for (; i + 4 <= rows; i += 4)
                {
                    Block4x32(a + i, lda, b + j, c + i * ldc + j, ldc, depth);
                }
            }
            else if (Vector512.IsHardwareAccelerated && columns - j >= 16)
            {
                wide = 16;
                for (; i + 4 <= rows; i += 4)
                {
                    Block4x16(a + i, lda, b + j, c + i * ldc + j, ldc, depth);
                }
            }
            else
            {
                wide = 8;
                for (; i + 4 <= rows; i += 4)
                {
                    Block4x8(a + i, lda, b + j, c + i * ldc + j, ldc, depth);
                }
            }
            for (; i < rows; i++)
            {
                for (int k = 0; k < wide; k += 8)
                {
                    Block1x8(a + i, lda, b + j + k, c + i * ldc + j + k, depth);
                }
            }
            j += wide;
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

    /// <summary>C −= Aᵀ B as <see cref="Subtract"/>, in strips of rows: cancellable, and with the help of idle threads.</summary>
    public static void SubtractInStrips(
        double* a, nint lda, double* b, double* c, nint ldc, int depth, int rows, int columns, WorkTeam? team, CancellationToken cancel)
    {
        if ((long)depth * columns * rows < 64L * WorthDividing)
        {
            Subtract(a, lda, b, c, ldc, depth, rows, columns);
            return;
        }
        if (team is not null)
        {
            Together(team, a, lda, b, c, ldc, depth, rows, columns, cancel);
            return;
        }
        for (int from = 0; from < rows; from += Strip)
        {
            cancel.ThrowIfCancellationRequested();
            Subtract(a + from, lda, b, c + from * ldc, ldc, depth, Math.Min(Strip, rows - from), columns);
        }
    }

    private static void Together(
        WorkTeam team, double* a, nint lda, double* b, double* c, nint ldc, int depth, int rows, int columns, CancellationToken cancel) =>
        team.Divide((rows + Strip - 1) / Strip, i =>
        {
            cancel.ThrowIfCancellationRequested();
            int from = i * Strip;
            Subtract(a + from, lda, b, c + from * ldc, ldc, depth, Math.Min(Strip, rows - from), columns);
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

    private static void Block4x32(double* a, nint lda, double* b, double* c, nint ldc, int depth)
    {
        Vector512<double> c00 = default, c01 = default, c02 = default, c03 = default;
        Vector512<double> c10 = default, c11 = default, c12 = default, c13 = default;
        Vector512<double> c20 = default, c21 = default, c22 = default, c23 = default;
        Vector512<double> c30 = default, c31 = default, c32 = default, c33 = default;
        for (int p = 0; p < depth; p++)
        {
            Vector512<double> b0 = Vector512.Load(b), b1 = Vector512.Load(b + 8), b2 = Vector512.Load(b + 16), b3 = Vector512.Load(b + 24);
            Vector512<double> x = Vector512.Create(a[0]);
            c00 = Vector512.FusedMultiplyAdd(x, b0, c00);
            c01 = Vector512.FusedMultiplyAdd(x, b1, c01);
            c02 = Vector512.FusedMultiplyAdd(x, b2, c02);
            c03 = Vector512.FusedMultiplyAdd(x, b3, c03);
            x = Vector512.Create(a[1]);
            c10 = Vector512.FusedMultiplyAdd(x, b0, c10);
            c11 = Vector512.FusedMultiplyAdd(x, b1, c11);
            c12 = Vector512.FusedMultiplyAdd(x, b2, c12);
            c13 = Vector512.FusedMultiplyAdd(x, b3, c13);
            x = Vector512.Create(a[2]);
            c20 = Vector512.FusedMultiplyAdd(x, b0, c20);
            c21 = Vector512.FusedMultiplyAdd(x, b1, c21);
            c22 = Vector512.FusedMultiplyAdd(x, b2, c22);
            c23 = Vector512.FusedMultiplyAdd(x, b3, c23);
            x = Vector512.Create(a[3]);
            c30 = Vector512.FusedMultiplyAdd(x, b0, c30);
            c31 = Vector512.FusedMultiplyAdd(x, b1, c31);
            c32 = Vector512.FusedMultiplyAdd(x, b2, c32);
            c33 = Vector512.FusedMultiplyAdd(x, b3, c33);
            a += lda;
            b += lda;
        }
        (Vector512.Load(c) - c00).Store(c);
        (Vector512.Load(c + 8) - c01).Store(c + 8);
        (Vector512.Load(c + 16) - c02).Store(c + 16);
        (Vector512.Load(c + 24) - c03).Store(c + 24);
        c += ldc;
        (Vector512.Load(c) - c10).Store(c);
        (Vector512.Load(c + 8) - c11).Store(c + 8);
        (Vector512.Load(c + 16) - c12).Store(c + 16);
        (Vector512.Load(c + 24) - c13).Store(c + 24);
        c += ldc;
        (Vector512.Load(c) - c20).Store(c);
        (Vector512.Load(c + 8) - c21).Store(c + 8);
        (Vector512.Load(c + 16) - c22).Store(c + 16);
        (Vector512.Load(c + 24) - c23).Store(c + 24);
        c += ldc;
        (Vector512.Load(c) - c30).Store(c);
        (Vector512.Load(c + 8) - c31).Store(c + 8);
        (Vector512.Load(c + 16) - c32).Store(c + 16);
        (Vector512.Load(c + 24) - c33).Store(c + 24);
    }

    private static void Block4x16(double* a, nint lda, double* b, double* c, nint ldc, int depth)
    {
        Vector512<double> c00 = default, c01 = default, c10 = default, c11 = default;
        Vector512<double> c20 = default, c21 = default, c30 = default, c31 = default;
        for (int p = 0; p < depth; p++)
        {
            Vector512<double> b0 = Vector512.Load(b), b1 = Vector512.Load(b + 8);
            Vector512<double> x = Vector512.Create(a[0]);
            c00 = Vector512.FusedMultiplyAdd(x, b0, c00);
            c01 = Vector512.FusedMultiplyAdd(x, b1, c01);
            x = Vector512.Create(a[1]);
            c10 = Vector512.FusedMultiplyAdd(x, b0, c10);
            c11 = Vector512.FusedMultiplyAdd(x, b1, c11);
            x = Vector512.Create(a[2]);
            c20 = Vector512.FusedMultiplyAdd(x, b0, c20);
            c21 = Vector512.FusedMultiplyAdd(x, b1, c21);
            x = Vector512.Create(a[3]);
            c30 = Vector512.FusedMultiplyAdd(x, b0, c30);
            c31 = Vector512.FusedMultiplyAdd(x, b1, c31);
            a += lda;
            b += lda;
        }
        (Vector512.Load(c) - c00).Store(c);
        (Vector512.Load(c + 8) - c01).Store(c + 8);
        c += ldc;
        (Vector512.Load(c) - c10).Store(c);
        (Vector512.Load(c + 8) - c11).Store(c + 8);
        c += ldc;
        (Vector512.Load(c) - c20).Store(c);
        (Vector512.Load(c + 8) - c21).Store(c + 8);
        c += ldc;
        (Vector512.Load(c) - c30).Store(c);
        (Vector512.Load(c + 8) - c31).Store(c + 8);
    }

    // Half registers: also the only block on machines without 512-bit ones, where eight accumulators and two rows of B just fit.
    private static void Block4x8(double* a, nint lda, double* b, double* c, nint ldc, int depth)
    {
        Vector256<double> c00 = default, c01 = default, c10 = default, c11 = default;
        Vector256<double> c20 = default, c21 = default, c30 = default, c31 = default;
        for (int p = 0; p < depth; p++)
        {
            Vector256<double> b0 = Vector256.Load(b), b1 = Vector256.Load(b + 4);
            Vector256<double> x = Vector256.Create(a[0]);
            c00 = Vector256.FusedMultiplyAdd(x, b0, c00);
            c01 = Vector256.FusedMultiplyAdd(x, b1, c01);
            x = Vector256.Create(a[1]);
            c10 = Vector256.FusedMultiplyAdd(x, b0, c10);
            c11 = Vector256.FusedMultiplyAdd(x, b1, c11);
            x = Vector256.Create(a[2]);
            c20 = Vector256.FusedMultiplyAdd(x, b0, c20);
            c21 = Vector256.FusedMultiplyAdd(x, b1, c21);
            x = Vector256.Create(a[3]);
            c30 = Vector256.FusedMultiplyAdd(x, b0, c30);
            c31 = Vector256.FusedMultiplyAdd(x, b1, c31);
            a += lda;
            b += lda;
        }
        (Vector256.Load(c) - c00).Store(c);
        (Vector256.Load(c + 4) - c01).Store(c + 4);
        c += ldc;
        (Vector256.Load(c) - c10).Store(c);
        (Vector256.Load(c + 4) - c11).Store(c + 4);
        c += ldc;
        (Vector256.Load(c) - c20).Store(c);
        (Vector256.Load(c + 4) - c21).Store(c + 4);
        c += ldc;
        (Vector256.Load(c) - c30).Store(c);
        (Vector256.Load(c + 4) - c31).Store(c + 4);
    }

    private static void Block1x8(double* a, nint lda, double* b, double* c, int depth)
    {
        Vector512<double> sum = default;
        for (int p = 0; p < depth; p++)
        {
            sum = Vector512.FusedMultiplyAdd(Vector512.Create(*a), Vector512.Load(b), sum);
            a += lda;
            b += lda;
        }
        (Vector512.Load(c) - sum).Store(c);
    }
}
