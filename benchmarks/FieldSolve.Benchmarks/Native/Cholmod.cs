using System.Runtime.InteropServices;

namespace FieldSolve.Benchmarks.Native;

/// <summary>Supernodal Cholesky factorisation of SuiteSparse, where its shared library is installed.</summary>
internal static unsafe partial class Cholmod
{
    private const string Library = "libcholmod.so.3";

    public static bool IsPresent => NativeLibrary.TryLoad(Library, out _);

    /// <summary>Runs the supernodal method with the minimum-degree or the METIS ordering on the lower triangle of the matrix.</summary>
    public static Peer Run(DiscMatrix matrix, bool metis, int analyses, int runs)
    {
        // Places of the fields of the settings, version 3.0.14.
        const int Supernodal = 48, Print = 144, Methods = 168, Ordering = 184 + 132, Postorder = 1864, NonZeros = 1984, SettingsBytes = 2664;
        int* version = stackalloc int[3];
        cholmod_version(version);
        if ((version[0], version[1], version[2]) != (3, 0, 14))
        {
            throw new InvalidOperationException($"Written for version 3.0.14, found {version[0]}.{version[1]}.{version[2]}.");
        }

        int n = matrix.Size, count = 0;
        int[] start = new int[n + 1], row = new int[(matrix.Pattern.Count + n) / 2];
        double[] values = new double[row.Length];
        for (int i = 0; i < n; i++)
        {
            for (int k = matrix.Pattern.Start[i]; k < matrix.Pattern.Start[i + 1]; k++)
            {
                if (matrix.Pattern.Column[k] >= i)
                {
                    row[count] = matrix.Pattern.Column[k];
                    values[count++] = matrix.Values[k];
                }
            }

            start[i + 1] = count;
        }

        double[] analyse = new double[analyses], factor = new double[runs], solve = new double[runs];
        double nonZeros = 0, bytes = 0;
        byte* common = (byte*)NativeMemory.AllocZeroed(2 * SettingsBytes);
        cholmod_start(common);
        *(int*)(common + Supernodal) = 2;
        *(int*)(common + Print) = 0;
        *(int*)(common + Methods) = 1;
        *(int*)(common + Ordering) = metis ? 3 : 2;
        *(int*)(common + Postorder) = 1;
        fixed (int* pStart = start, pRow = row)
        fixed (double* pValues = values, b = matrix.B)
        {
            var a = new SparseMatrix { Rows = (nuint)n, Columns = (nuint)n, Most = (nuint)count, Start = pStart, Row = pRow, Values = pValues, Symmetry = -1, ValueKind = 1, Sorted = 1, Packed = 1 };
            var right = new DenseMatrix { Rows = (nuint)n, Columns = 1, Most = (nuint)n, Distance = (nuint)n, Values = b, ValueKind = 1 };
            void* l = null;
            for (int r = 0; r < analyses; r++)
            {
                cholmod_free_factor(&l, common);
                double at = CpuClock.Now();
                l = cholmod_analyze(&a, common);
                analyse[r] = CpuClock.Now() - at;
                nonZeros = 2 * *(double*)(common + NonZeros);
            }

            for (int r = 0; r < runs; r++)
            {
                double at = CpuClock.Now();
                if (cholmod_factorize(&a, l, common) == 0)
                {
                    throw new InvalidOperationException("The library could not factor the matrix.");
                }

                factor[r] = CpuClock.Now() - at;
                bytes = 8.0 * *(nuint*)((byte*)l + 120);
                at = CpuClock.Now();
                DenseMatrix* x = cholmod_solve(0, l, &right, common);
                solve[r] = CpuClock.Now() - at;
                cholmod_free_dense(&x, common);
            }

            cholmod_free_factor(&l, common);
        }

        cholmod_finish(common);
        NativeMemory.Free(common);
        return new(CpuClock.Median(analyse), CpuClock.Median(factor), CpuClock.Median(solve), nonZeros, bytes, 0);
    }

    [StructLayout(LayoutKind.Sequential)]
    private struct SparseMatrix
    {
        public nuint Rows, Columns, Most;
        public int* Start, Row, Counts;
        public double* Values, Imaginary;
        public int Symmetry, IndexKind, ValueKind, Precision, Sorted, Packed;
    }

    [StructLayout(LayoutKind.Sequential)]
    private struct DenseMatrix
    {
        public nuint Rows, Columns, Most, Distance;
        public double* Values, Imaginary;
        public int ValueKind, Precision;
    }

    [LibraryImport(Library)]
    private static partial void cholmod_version(int* version);

    [LibraryImport(Library)]
    private static partial void cholmod_start(void* common);

    [LibraryImport(Library)]
    private static partial void cholmod_finish(void* common);

    [LibraryImport(Library)]
    private static partial void* cholmod_analyze(SparseMatrix* a, void* common);

    [LibraryImport(Library)]
    private static partial int cholmod_factorize(SparseMatrix* a, void* factor, void* common);

    [LibraryImport(Library)]
    private static partial DenseMatrix* cholmod_solve(int system, void* factor, DenseMatrix* b, void* common);

    [LibraryImport(Library)]
    private static partial void cholmod_free_dense(DenseMatrix** dense, void* common);

    [LibraryImport(Library)]
    private static partial void cholmod_free_factor(void** factor, void* common);
}
