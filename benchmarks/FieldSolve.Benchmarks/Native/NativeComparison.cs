using System.Diagnostics;
using System.Globalization;
using FieldSolve.Meshing;
using FieldSolve.Sparse;

namespace FieldSolve.Benchmarks.Native;

/// <summary>
/// The sparse core against SuiteSparse on the same matrices: processor time of one thread, medians, as a Markdown table. Without the libraries their
/// columns say "absent".
/// </summary>
internal static class NativeComparison
{
    private const string Absent = "absent";

    /// <summary>Prints the tables.</summary>
    /// <param name="to">Where.</param>
    /// <param name="most">Largest number of unknowns.</param>
    public static void Print(TextWriter to, int most)
    {
        // The libraries take their number of threads from here when they are loaded.
        if (Environment.GetEnvironmentVariable("OPENBLAS_NUM_THREADS") != "1")
        {
            to.WriteLine("Set OPENBLAS_NUM_THREADS=1 and OMP_THREAD_LIMIT=1 first: the libraries would use all cores.");
            return;
        }

        // Settings that keep the libraries' dense kernels from choosing themselves what suits this machine.
        foreach (string name in new[] { "OPENBLAS_CORETYPE", "OPENBLAS_L2_SIZE" })
        {
            if (Environment.GetEnvironmentVariable(name) is not null)
            {
                to.WriteLine($"Unset {name} first: it slows the libraries down.");
                return;
            }
        }

        to.WriteLine("| matrix | work | wanted | ours | peer | ratio |");
        to.WriteLine("| --- | --- | --- | --- | --- | --- |");
        foreach ((bool quadratic, int size) in new[] { (false, 10_000), (false, 100_000), (true, 100_000), (false, 400_000), (true, 400_000), (false, 1_000_000) })
        {
            if (size > most)
            {
                continue;
            }

            foreach (string row in Compare(quadratic, size))
            {
                to.WriteLine(row);
            }

            to.Flush();
        }
    }

    private static List<string> Compare(bool quadratic, int size)
    {
        TriangleMesh mesh = DiscMatrix.Mesh(quadratic ? size / 2 : 2 * size);
        DiscMatrix matrix = DiscMatrix.Build(mesh, quadratic, odd: true);
        int runs = size > 400_000 ? 5 : size > 100_000 ? 5 : 9;
        string name = string.Create(CultureInfo.InvariantCulture, $"{(quadratic ? "quadratic" : "linear")}, {matrix.Size} unknowns");

        // Until the compiler has settled on its last version of the code.
        SparseAnalysis analysis = SparseAnalysis.Analyse(matrix.Pattern, matrix.X, matrix.Y);
        double[] x = new double[matrix.Size], twice = new double[matrix.Size];
        var factor = new SparseLu(analysis);
        double end = CpuClock.Now() + 2;
        while (CpuClock.Now() < end)
        {
            analysis = SparseAnalysis.Analyse(matrix.Pattern, matrix.X, matrix.Y);
            factor.Factor(matrix.Values);
            factor.Solve(matrix.B, x);
        }

        double analyse = CpuClock.Median(runs, () => analysis = SparseAnalysis.Analyse(matrix.Pattern, matrix.X, matrix.Y));
        factor = new SparseLu(analysis);
        double numeric = CpuClock.Median(runs, () => factor.Factor(matrix.Values));
        double solve = CpuClock.Median(runs, () => factor.Solve(matrix.B, x));
        double plain = matrix.BackwardError(x);
        Refinement.RefinedSolve(matrix.Pattern, matrix.Values, factor, matrix.B, twice);

        DiscMatrix even = DiscMatrix.Build(mesh, quadratic, odd: false);
        int peerRuns = size > 100_000 ? 3 : 5;
        Peer? lu = Umfpack.IsPresent ? Umfpack.Run(matrix, false, peerRuns) : null, luMetis = Umfpack.IsPresent ? Umfpack.Run(matrix, true, peerRuns) : null;
        Peer? amd = Cholmod.IsPresent ? Cholmod.Run(even, false, peerRuns) : null, metis = Cholmod.IsPresent ? Cholmod.Run(even, true, peerRuns) : null;
        Peer? best = lu is null ? null : lu.Factor < luMetis!.Factor ? lu : luMetis;
        string luLimit = size switch { <= 10_000 => "0.8", <= 100_000 => "0.6", _ => "0.5" };
        var rows = new List<string>
        {
            Row(name, "analyse, peer CHOLMOD with AMD", "1.2", analyse, amd?.Analyse, Seconds),
            Row(name, "non-zeros of the order, peer METIS", "1.05", analysis.ExactNonZeros, metis?.NonZeros, Millions),
            Row(name, "numeric LU, peer UMFPACK, its better order", luLimit, numeric, best?.Factor, Seconds),
            Row(name, "symmetric matrix (ours by the same LU), peer CHOLMOD with METIS", "1.1", numeric, metis?.Factor, Seconds),
            Row(name, "solve, peer UMFPACK", "1.0", solve, best?.Solve, Seconds),
            Row(name, "solve, peer CHOLMOD with METIS", "1.0", solve, metis?.Solve, Seconds),
            Row(name, "memory of the factor alone, peer UMFPACK", "0.7", 8.0 * analysis.PanelStart[^1], best?.Bytes, Megabytes),
            Row(name, "memory with work space and analysis, peer UMFPACK's most", "0.7", analysis.MemoryBytes, best?.PeakBytes, Megabytes),
            string.Create(CultureInfo.InvariantCulture, $"| {name} | backward error, without and with refinement | 1e-14 | {plain:E1}, {matrix.BackwardError(twice):E1} | - | - |"),
        };
        if (size >= 400_000)
        {
            rows.Add(Threads(name, factor, matrix));
        }

        return rows;
    }

    // The wall clock is the point here; the least of many runs is the one that other work on the machine disturbed least.
    private static string Threads(string name, SparseLu factor, DiscMatrix matrix)
    {
        double one = double.PositiveInfinity, two = double.PositiveInfinity;
        factor.Factor(matrix.Values, 2);
        for (int k = 0; k < 15; k++)
        {
            one = Math.Min(one, Wall(1));
            two = Math.Min(two, Wall(2));
        }

        return Row(name, "two threads, peer one thread (wall, least of 15)", "0.62", two, one, Seconds);

        double Wall(int degree)
        {
            long from = Stopwatch.GetTimestamp();
            factor.Factor(matrix.Values, degree);
            return Stopwatch.GetElapsedTime(from).TotalSeconds;
        }
    }

    private static string Row(string name, string work, string wanted, double ours, double? peer, Func<double, string> text) => string.Create(
        CultureInfo.InvariantCulture,
        $"| {name} | {work} | {wanted} | {text(ours)} | {(peer is { } p ? text(p) : Absent)} | {(peer is { } q ? (ours / q).ToString("F2", CultureInfo.InvariantCulture) : Absent)} |");

    private static string Seconds(double s) => string.Create(CultureInfo.InvariantCulture, $"{1e3 * s:G3} ms");

    private static string Millions(double n) => string.Create(CultureInfo.InvariantCulture, $"{1e-6 * n:F2} M");

    private static string Megabytes(double b) => string.Create(CultureInfo.InvariantCulture, $"{b / 1048576:F0} MiB");
}
