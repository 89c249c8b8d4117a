using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace FieldSolve.Sparse;

// Pieces of C −= Aᵀ B that are held in registers.
internal static unsafe partial class FrontKernels
{
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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
