using FieldSolve.Sparse;

namespace FieldSolve.Tests.SparseTests;

public class SparseAnalysisTests
{
    // Nested dissection of an m x m grid leaves 31/4 n log2 n + O(n) non-zeros in one factor, n = m²
    // (A. George, SIAM J. Numer. Anal. 10 (1973) 345-363, from memory); minimum degree at the leaves does better. Both factors here.
    [Theory]
    [InlineData(30, true)]
    [InlineData(100, true)]
    [InlineData(250, true)]
    [InlineData(100, false)]
    [InlineData(250, false)]
    public void Fill_of_a_grid_is_of_order_n_log_n(int side, bool places)
    {
        int n = side * side;
        var pairs = new List<(int, int)>();
        double[] x = new double[n], y = new double[n];
        for (int i = 0; i < n; i++)
        {
            x[i] = i % side;
            y[i] = i / side;
            if (i % side > 0)
            {
                pairs.Add((i, i - 1));
            }
            if (i >= side)
            {
                pairs.Add((i, i - side));
            }
        }
        SymmetricPattern pattern = Samples.Pattern(n, pairs);
        SparseAnalysis analysis = SparseAnalysis.Analyse(pattern, places ? x : [], places ? y : []);
        Assert.InRange(analysis.FactorNonZeros, n, (long)((places ? 5 : 6) * n * Math.Log2(n)));
        Assert.InRange(analysis.Flops, n, (places ? 40 : 80) * Math.Pow(n, 1.5));
        Assert.True(new SparseLu(analysis).MemoryBytes > 8 * analysis.FactorNonZeros);
        Assert.Same(pattern, analysis.Pattern);
    }

    [Fact]
    public void Row_coupled_to_all_others_costs_little_fill()
    {
        Sample mesh = Samples.Mesh(40);
        int n = mesh.Size;
        var pairs = new List<(int, int)>();
        for (int i = 0; i < n; i++)
        {
            pairs.Add((n, i));
            for (int k = mesh.Pattern.Start[i]; k < mesh.Pattern.Start[i + 1]; k++)
            {
                pairs.Add((i, mesh.Pattern.Column[k]));
            }
        }
        long without = SparseAnalysis.Analyse(mesh.Pattern, mesh.X, mesh.Y).FactorNonZeros;
        long with = SparseAnalysis.Analyse(Samples.Pattern(n + 1, pairs), [.. mesh.X, 0], [.. mesh.Y, 0]).FactorNonZeros;
        Assert.InRange(with, without, without + 4L * n);
    }

    [Fact]
    public void Equal_coordinates_and_chains_and_stars_are_ordered()
    {
        const int N = 3000;
        double[] same = new double[N];
        SymmetricPattern chain = Samples.Pattern(N, Enumerable.Range(1, N - 1).Select(i => (i - 1, i)));
        Assert.InRange(SparseAnalysis.Analyse(chain, same, same).FactorNonZeros, N, 40 * N);
        SymmetricPattern star = Samples.Pattern(N, Enumerable.Range(1, N - 1).Select(i => (0, i)));
        Assert.InRange(SparseAnalysis.Analyse(star, same, same).FactorNonZeros, N, 40 * N);
        Assert.Equal(0, SparseAnalysis.Analyse(Samples.Pattern(0, []), [], []).FactorNonZeros);
    }

    [Fact]
    public void Empty_matrix_is_factored_and_solved()
    {
        var lu = new SparseLu(SparseAnalysis.Analyse(Samples.Pattern(0, []), [], []));
        lu.Factor([]);
        lu.Solve([], []);
        lu.SolveMany([], [], 5);
    }

    [Fact]
    public void Wrong_patterns_and_lengths_are_refused()
    {
        Assert.Throws<ArgumentException>(() => SparseAnalysis.Analyse(new([0, 2, 3], [0, 1, 1]), [], []));      // not symmetric
        Assert.Throws<ArgumentException>(() => SparseAnalysis.Analyse(new([0, 1, 2], [1, 0]), [], []));         // no diagonal
        Assert.Throws<ArgumentException>(() => SparseAnalysis.Analyse(new([0, 2, 4], [1, 0, 0, 1]), [], []));   // not sorted
        Assert.Throws<ArgumentException>(() => SparseAnalysis.Analyse(new([0, 1, 2], [0, 7]), [], []));         // outside
        Sample mesh = Samples.Mesh(3);
        Assert.Throws<ArgumentException>(() => SparseAnalysis.Analyse(mesh.Pattern, mesh.X, []));
        SparseLu lu = mesh.Factored();
        double[] b = new double[mesh.Size];
        Assert.Throws<ArgumentException>(() => lu.Factor(b));
        Assert.Throws<ArgumentException>(() => lu.Solve(b, b.AsSpan(1)));
        Assert.Throws<ArgumentException>(() => lu.SolveMany(b, b, 2));
        Assert.Throws<ArgumentException>(() => SparseProduct.Multiply(mesh.Pattern, b, b, new double[mesh.Size]));
        Assert.Throws<ArgumentException>(() => SparseProduct.Multiply(mesh.Pattern, mesh.Values, b, b));
    }

    [Fact]
    public void Work_stops_when_cancelled()
    {
        Sample mesh = Samples.Mesh(20);
        SparseLu lu = mesh.Factored();
        var cancelled = new CancellationToken(canceled: true);
        Assert.Throws<OperationCanceledException>(() => SparseAnalysis.Analyse(mesh.Pattern, mesh.X, mesh.Y, cancelled));
        Assert.Throws<OperationCanceledException>(() => lu.Factor(mesh.Values, cancelled));
        Assert.Throws<InvalidOperationException>(() => lu.Solve(new double[mesh.Size], new double[mesh.Size]));
    }
}
