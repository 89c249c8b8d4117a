using System.Diagnostics;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Meshing;
using FieldSolve.Sparse;

namespace FieldSolve.Benchmarks.Native;

/// <summary>
/// The numerical core against SuiteSparse on the same matrices, and against itself: processor time of one thread, medians, with what is wanted. Without
/// the libraries their columns say "absent".
/// </summary>
internal static class NativeComparison
{
    private const int Small = 10_000, Large = 1_000_000;

    /// <summary>Prints the table, row by row.</summary>
    /// <param name="to">Where.</param>
    /// <param name="most">Largest number of unknowns.</param>
    public static void Print(TextWriter to, int most)
    {
        var table = new ComparisonTable(to);
        var growth = new Growth();
        foreach ((bool quadratic, int size) in new[] { (false, Small), (false, 100_000), (true, 100_000), (false, 400_000), (true, 400_000), (false, Large) })
        {
            if (size <= most)
            {
                Matrices(table, growth, quadratic, size);
            }
        }

        foreach (int size in new[] { Small, 100_000, 400_000, Large })
        {
            if (size <= most)
            {
                Assembly(table, growth, size);
            }
        }

        foreach (int triangles in new[] { 2 * Small, 100_000, Large })
        {
            if (triangles <= most)
            {
                Mesh(table, growth, triangles);
            }
        }

        growth.Tell(table);
    }

    private static void Matrices(ComparisonTable table, Growth growth, bool quadratic, int size)
    {
        TriangleMesh mesh = DiscMatrix.Mesh(quadratic ? size / 2 : 2 * size);
        DiscMatrix matrix = DiscMatrix.Build(mesh, quadratic, odd: true), even = DiscMatrix.Build(mesh, quadratic, odd: false);
        const int Runs = 5;
        string name = ComparisonTable.Text($"{(quadratic ? "quadratic" : "linear")}, {matrix.Size} unknowns");
        Dictionary<string, Peer> peers = PeerProcess.Ask(matrix, even, Runs);
        Peer? amd = peers.GetValueOrDefault("cholmod-amd"), metis = peers.GetValueOrDefault("cholmod-metis");
        Peer? lu = peers.GetValueOrDefault("umfpack-amd"), luMetis = peers.GetValueOrDefault("umfpack-metis");
        Peer? better = lu is not null && luMetis is not null && luMetis.Factor < lu.Factor ? luMetis : lu;

        double[] x = new double[matrix.Size], refined = new double[matrix.Size];
        SparseAnalysis analysis = SparseAnalysis.Analyse(matrix.Pattern, matrix.X, matrix.Y);
        var factor = new SparseLu(analysis);
        var half = new SparseLu(analysis, symmetric: true);

        // Until the compiler has settled on its last version of the code.
        double end = CpuClock.Now() + 2;
        do
        {
            SparseAnalysis.Analyse(matrix.Pattern, matrix.X, matrix.Y);
            factor.Factor(matrix.Values);
            factor.Solve(matrix.B, x);
            half.Factor(even.Values);
            half.Solve(even.B, x);
        }
        while (CpuClock.Now() < end);

        double analyse = CpuClock.Median(Runs, () => SparseAnalysis.Analyse(matrix.Pattern, matrix.X, matrix.Y));
        double symmetric = CpuClock.Median(Runs, () => half.Factor(even.Values));
        double symmetricSolve = CpuClock.Median(2 * Runs, () => half.Solve(even.B, x));
        double symmetricError = even.BackwardError(x);
        double numeric = CpuClock.Median(Runs, () => factor.Factor(matrix.Values));
        double solve = CpuClock.Median(2 * Runs, () => factor.Solve(matrix.B, x));
        double error = matrix.BackwardError(x);
        Refinement.RefinedSolve(matrix.Pattern, matrix.Values, factor, matrix.B, refined);
        long memory = factor.MemoryBytes, halfMemory = half.MemoryBytes;
        if (!quadratic)
        {
            growth.Add("numeric LU", matrix.Size, numeric, 1.25);
            growth.Add("numeric LDL^T", matrix.Size, symmetric, 1.25);
            growth.Add("analyse", matrix.Size, analyse, null);
        }

        table.Seconds(name, "analyse", "CHOLMOD, AMD", size > Small ? 1.2 : null, analyse, amd?.Analyse);
        table.Millions(name, "non-zeros of the order", "METIS", size > Small ? 1.05 : null, analysis.ExactNonZeros, metis?.NonZeros);
        table.Seconds(name, "numeric LU", "UMFPACK, its better order", size switch { <= 10_000 => 0.8, <= 100_000 => 0.6, _ => 0.5 }, numeric, better?.Factor);
        table.Seconds(name, "numeric LDL^T", "CHOLMOD, METIS", size is > Small and < Large ? 1.1 : null, symmetric, metis?.Factor);
        table.Seconds(name, "solve, LU", "UMFPACK", 1, solve, better?.Solve);
        table.Seconds(name, "solve, LDL^T", "CHOLMOD, METIS", 1, symmetricSolve, metis?.Solve);
        double? wantedMemory = size == Large ? 0.7 : null;
        table.Megabytes(name, "memory of LU alone", "UMFPACK", wantedMemory, 8.0 * factor.NonZeros, better?.Bytes);
        table.Megabytes(name, "memory of LU, work space and analysis", "UMFPACK, its most", wantedMemory, memory, better?.PeakBytes);
        table.Megabytes(name, "memory of LDL^T alone", "CHOLMOD, METIS", null, 8.0 * half.NonZeros, metis?.Bytes);
        table.Megabytes(name, "memory of LDL^T, work space and analysis", "UMFPACK, its most", wantedMemory, halfMemory, better?.PeakBytes);
        table.Plain(name, "backward error of LU, LU refined, LDL^T", "1e-14", ComparisonTable.Text($"{error:E1}, {matrix.BackwardError(refined):E1}, {symmetricError:E1}"));
        if (size >= 400_000)
        {
            Threads(table, name, "LU", factor, matrix.Values);
            Threads(table, name, "LDL^T", half, even.Values);
            Cancel(table, name, "analysis", analyse, token => SparseAnalysis.Analyse(matrix.Pattern, matrix.X, matrix.Y, token));
            Cancel(table, name, "numeric LU", numeric, token => factor.Factor(matrix.Values, token));
            Cancel(table, name, "numeric LU, two threads", numeric / 2, token => factor.Factor(matrix.Values, 2, token));
        }
    }

    // The wall clock is the point here; the least of many runs is the one that other work on the machine disturbed least.
    private static void Threads(ComparisonTable table, string name, string kind, SparseLu factor, double[] values)
    {
        double one = double.PositiveInfinity, two = double.PositiveInfinity;
        factor.Factor(values, 2);
        for (int k = 0; k < 8; k++)
        {
            one = Math.Min(one, Wall(1));
            two = Math.Min(two, Wall(2));
        }

        table.Seconds(name, $"numeric {kind}, two threads (wall, least of 8)", "one thread", 0.62, two, one);

        double Wall(int degree)
        {
            long from = Stopwatch.GetTimestamp();
            factor.Factor(values, degree);
            return Stopwatch.GetElapsedTime(from).TotalSeconds;
        }
    }

    // From the moment a token is set, at several moments of the work, until the work has ended.
    private static void Cancel(ComparisonTable table, string name, string work, double seconds, Action<CancellationToken> action)
    {
        var times = new List<double>();
        for (double share = 0.05; share < 1; share += 0.15)
        {
            using var source = new CancellationTokenSource();
            var clock = new Stopwatch();
            using CancellationTokenRegistration noted = source.Token.Register(clock.Start);
            source.CancelAfter(TimeSpan.FromSeconds(share * seconds));
            try
            {
                action(source.Token);
            }
            catch (OperationCanceledException)
            {
                times.Add(clock.Elapsed.TotalMilliseconds);
            }
        }

        times.Sort();
        table.Plain(
            name, $"{work}, from cancelling to the end, median and worst (wall)", "100 ms",
            times.Count == 0 ? "-" : ComparisonTable.Text($"{times[times.Count / 2]:F0} ms, {times[^1]:F0} ms of {times.Count}"));
    }

    // Residual and Jacobian of the sample's law, which has a second-order part and a field limit, against one LU of the same matrix.
    private static void Assembly(ComparisonTable table, Growth growth, int size)
    {
        SheetDevice device = Sample.Device();
        FieldSpace space = FieldSpace.Build(device, Mesher.Generate(device.Domain, Sample.Size(device, (int)(size / 2.25))));
        var equations = new SheetEquations(space, Sample.Law(device));
        double[] u = new double[equations.Length], residual = new double[u.Length], values = new double[space.Pattern.Count + 1];
        (double[] x, double[] y) = space.Places();
        double scale = device.Domain.Size;
        for (int i = 0; i < space.Size; i++)
        {
            u[i] = 0.01 * (x[i] + (0.3 * y[i])) / scale;
        }

        void Assemble()
        {
            equations.Residual(u, 6, 0, 1e-4, residual);
            equations.Jacobian(u, values);
        }

        var factor = new SparseLu(SparseAnalysis.Analyse(space.Pattern, x, y));
        double end = CpuClock.Now() + 1;
        do
        {
            Assemble();
            factor.Factor(values.AsSpan(0, space.Pattern.Count));
        }
        while (CpuClock.Now() < end);
        double assembly = CpuClock.Median(9, Assemble), numeric = CpuClock.Median(5, () => factor.Factor(values.AsSpan(0, space.Pattern.Count)));
        growth.Add("assembly", space.Size, assembly, 1.05);
        table.Seconds(
            ComparisonTable.Text($"disc-12, quadratic, {space.Size} unknowns"), "residual and Jacobian", "our LU of this matrix", size > Small ? 0.35 : null,
            assembly, numeric);
    }

    // The peer is a program of its own: there is no library to call.
    private static void Mesh(ComparisonTable table, Growth growth, int triangles)
    {
        TriangleMesh mesh = DiscMatrix.Mesh(triangles);
        double seconds = CpuClock.Median(5, () => mesh = DiscMatrix.Mesh(triangles));
        growth.Add("mesh", mesh.TriangleCount, seconds, 1.05);
        string degrees = ComparisonTable.Text($"least angle {MeshQuality.Of(mesh).MinimumAngle:F1} degrees");
        table.Seconds(
            ComparisonTable.Text($"disc, {mesh.TriangleCount} triangles, {degrees}"), "mesh", "CGAL", triangles switch { 100_000 => 0.35, Large => 0.2, _ => null },
            seconds, null);
    }
}
