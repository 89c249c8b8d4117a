using System.Runtime.InteropServices;

namespace FieldSolve.Benchmarks.Native;

/// <summary>Non-symmetric LU of SuiteSparse, where its shared library is installed.</summary>
internal static unsafe partial class Umfpack
{
    private const string Library = "libumfpack.so.5";

    public static bool IsPresent => NativeLibrary.TryLoad(Library, out _);

    /// <summary>Runs the symmetric strategy with the minimum-degree or the METIS ordering.</summary>
    public static Peer Run(DiscMatrix matrix, bool metis, int runs)
    {
        // Places in the control and information arrays are those of version 5.
        const int Ordering = 10, Strategy = 5, Steps = 7, Unit = 3, Size = 40, Peak = 41, L = 43, U = 44;
        double* control = stackalloc double[20], info = stackalloc double[90];
        umfpack_di_defaults(control);
        (control[Strategy], control[Ordering], control[Steps]) = (3, metis ? 3 : 1, 0);
        int n = matrix.Size;
        double[] factor = new double[runs], solve = new double[runs], x = new double[n];
        double analyse, nonZeros = 0, bytes = 0, peak = 0;
        fixed (int* start = matrix.Pattern.Start, column = matrix.Pattern.Column)
        fixed (double* values = matrix.Values, b = matrix.B, px = x)
        {
            void* symbolic = null;
            double at = CpuClock.Now();
            Check(umfpack_di_symbolic(n, n, start, column, values, &symbolic, control, info));
            analyse = CpuClock.Now() - at;
            for (int r = 0; r < runs; r++)
            {
                void* numeric = null;
                at = CpuClock.Now();
                Check(umfpack_di_numeric(start, column, values, symbolic, &numeric, control, info));
                factor[r] = CpuClock.Now() - at;
                nonZeros = info[L] + info[U];
                bytes = info[Size] * info[Unit];
                peak = info[Peak] * info[Unit];
                at = CpuClock.Now();
                Check(umfpack_di_solve(0, start, column, values, px, b, numeric, control, info));
                solve[r] = CpuClock.Now() - at;
                umfpack_di_free_numeric(&numeric);
            }

            umfpack_di_free_symbolic(&symbolic);
        }

        return new(analyse, CpuClock.Median(factor), CpuClock.Median(solve), nonZeros, bytes, peak);
    }

    private static void Check(int status)
    {
        if (status < 0)
        {
            throw new InvalidOperationException($"The library ended with status {status}.");
        }
    }

    [LibraryImport(Library)]
    private static partial void umfpack_di_defaults(double* control);

    [LibraryImport(Library)]
    private static partial int umfpack_di_symbolic(int rows, int columns, int* start, int* row, double* values, void** symbolic, double* control, double* info);

    [LibraryImport(Library)]
    private static partial int umfpack_di_numeric(int* start, int* row, double* values, void* symbolic, void** numeric, double* control, double* info);

    [LibraryImport(Library)]
    private static partial int umfpack_di_solve(int system, int* start, int* row, double* values, double* x, double* b, void* numeric, double* control, double* info);

    [LibraryImport(Library)]
    private static partial void umfpack_di_free_symbolic(void** symbolic);

    [LibraryImport(Library)]
    private static partial void umfpack_di_free_numeric(void** numeric);
}
