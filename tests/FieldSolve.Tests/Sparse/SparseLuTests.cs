using FieldSolve.Sparse;
using FsCheck.Xunit;
using MathNet.Numerics.LinearAlgebra;

namespace FieldSolve.Tests.SparseTests;

public class SparseLuTests
{
    private const double DenseTolerance = 1e-10;

    [Property(MaxTest = 200)]
    public void Agrees_with_a_dense_factorisation(int seed)
    {
        var random = new Random(seed);
        int n = 1 + random.Next(120);
        Sample sample = Samples.Random(n, 4 * random.NextDouble(), seed, denseRows: random.Next(3));
        AgreesWithDense(sample, seed);
    }

    [Theory]
    [InlineData(300, 0.5, 0)]   // many components
    [InlineData(400, 3, 2)]
    [InlineData(500, 2, 5)]
    [InlineData(500, 30, 0)]    // no good cut
    [InlineData(260, 260, 0)]   // almost complete
    [InlineData(500, 0, 0)]     // diagonal
    public void Agrees_with_a_dense_factorisation_when_larger(int n, double pairsPerRow, int denseRows) =>
        AgreesWithDense(Samples.Random(n, pairsPerRow, 5, denseRows), 17);

    private static void AgreesWithDense(Sample sample, int seed)
    {
        int n = sample.Size;
        double[] b = Samples.Vector(n, seed), x = new double[n];
        Matrix<double> dense = sample.Dense();
        Vector<double> right = Vector<double>.Build.Dense(b);
        double[] wanted = dense.Solve(right).ToArray(), wantedTransposed = dense.Transpose().Solve(right).ToArray();
        foreach (bool places in new[] { true, false })
        {
            SparseLu lu = sample.Factored(places);
            lu.Solve(b, x);
            AssertClose(wanted, x);
            lu.SolveTransposed(b, x);
            AssertClose(wantedTransposed, x);
        }
        SparseLu symmetric = sample.Symmetrised().Factored(symmetric: true);
        double[] wantedSymmetric = (0.5 * (dense + dense.Transpose())).Solve(right).ToArray();
        symmetric.Solve(b, x);
        AssertClose(wantedSymmetric, x);
        symmetric.SolveTransposed(b, x);
        AssertClose(wantedSymmetric, x);
    }

    private static void AssertClose(double[] wanted, double[] found)
    {
        double scale = wanted.Max(Math.Abs);
        for (int i = 0; i < wanted.Length; i++)
        {
            Assert.True(Math.Abs(wanted[i] - found[i]) <= DenseTolerance * scale, $"{i}: {wanted[i]} and {found[i]}");
        }
    }

    [Property(MaxTest = 50)]
    public void Renumbered_unknowns_give_the_renumbered_solution(int seed)
    {
        var random = new Random(seed);
        Sample sample = Samples.Random(1 + random.Next(300), 2, seed);
        int n = sample.Size;
        int[] to = [.. Enumerable.Range(0, n)];
        random.Shuffle(to);
        var pairs = new List<(int, int)>();
        ForEach(sample.Pattern, (i, j, _) => pairs.Add((to[i], to[j])));
        SymmetricPattern pattern = Samples.Pattern(n, pairs);
        double[] values = new double[pattern.Count], b = Samples.Vector(n, 3), moved = new double[n], x = new double[n], y = new double[n];
        ForEach(sample.Pattern, (i, j, k) => values[Samples.Place(pattern, to[i], to[j])] = sample.Values[k]);
        for (int i = 0; i < n; i++)
        {
            moved[to[i]] = b[i];
        }
        sample.Factored().Solve(b, x);
        new Sample(pattern, values, [], []).Factored().Solve(moved, y);
        AssertClose(x, [.. Enumerable.Range(0, n).Select(i => y[to[i]])]);
    }

    private static void ForEach(SymmetricPattern pattern, Action<int, int, int> action)
    {
        for (int i = 0; i < pattern.Size; i++)
        {
            for (int k = pattern.Start[i]; k < pattern.Start[i + 1]; k++)
            {
                action(i, pattern.Column[k], k);
            }
        }
    }

    [Theory]
    [InlineData(75, 1.0, true, false, false)]      // 22801 unknowns
    [InlineData(75, 1.0, false, false, false)]
    [InlineData(60, 0.74, true, false, false)]     // cells from 1 down to 2e-8
    [InlineData(60, 1.0, true, true, false)]       // one unknown coupled to a whole rim
    [InlineData(75, 1.0, true, false, true)]
    [InlineData(60, 0.74, true, true, true)]
    public void Solves_meshes_to_rounding(int cells, double grading, bool places, bool hub, bool symmetric)
    {
        Sample mesh = Samples.Mesh(cells, grading, hub: hub);
        mesh = symmetric ? mesh.Symmetrised() : mesh;
        SparseLu lu = mesh.Factored(places, symmetric);
        double[] b = Samples.Vector(mesh.Size, 1), x = new double[mesh.Size];
        lu.Solve(b, x);
        Assert.InRange(mesh.BackwardError(b, x), 0, 1e-14);
        lu.SolveTransposed(b, x);
        Assert.InRange(mesh.BackwardError(b, x, transposed: true), 0, 1e-14);
    }

    [Fact]
    public void Symmetric_factor_takes_half_the_room_and_refuses_other_matrices()
    {
        Sample mesh = Samples.Mesh(30);
        SparseLu lu = mesh.Factored(), half = mesh.Symmetrised().Factored(symmetric: true);
        Assert.Equal(lu.NonZeros, 2 * half.NonZeros);
        Assert.True(half.IsSymmetric && !lu.IsSymmetric);
        Assert.Contains("not symmetric", Assert.Throws<ArgumentException>(() => half.Factor(mesh.Values)).Message, StringComparison.Ordinal);
        Assert.Throws<InvalidOperationException>(() => half.Solve(new double[mesh.Size], new double[mesh.Size]));
    }

    [Theory]
    [InlineData(1, false)]
    [InlineData(3, false)]
    [InlineData(8, false)]
    [InlineData(19, false)]
    [InlineData(11, true)]
    public void Many_right_hand_sides_are_solved_like_single_ones(int count, bool symmetric)
    {
        Sample mesh = Samples.Mesh(12, hub: true);
        mesh = symmetric ? mesh.Symmetrised() : mesh;
        int n = mesh.Size;
        SparseLu lu = mesh.Factored(symmetric: symmetric);
        double[] b = Samples.Vector(n * count, 4), x = new double[n * count], single = new double[n];
        foreach (bool transposed in new[] { false, true })
        {
            if (transposed)
            {
                lu.SolveTransposedMany(b, x, count);
            }
            else
            {
                lu.SolveMany(b, x, count);
            }
            for (int c = 0; c < count; c++)
            {
                Span<double> right = b.AsSpan(c * n, n);
                if (transposed)
                {
                    lu.SolveTransposed(right, single);
                }
                else
                {
                    lu.Solve(right, single);
                }
                Assert.InRange(mesh.BackwardError(right, x.AsSpan(c * n, n), transposed), 0, 1e-14);
                AssertClose(single, x[(c * n)..((c + 1) * n)]);
            }
        }
    }

    [Fact]
    public void Right_hand_side_and_solution_may_share_memory()
    {
        Sample mesh = Samples.Mesh(9);
        SparseLu lu = mesh.Factored();
        double[] b = Samples.Vector(3 * mesh.Size, 2), x = new double[mesh.Size], many = new double[3 * mesh.Size];
        double[] same = b[..mesh.Size];
        lu.Solve(same, x);
        lu.Solve(same, same);
        Assert.Equal(x, same);
        lu.SolveMany(b, many, 3);
        lu.SolveMany(b, b, 3);
        Assert.Equal(many, b);
    }

    [Fact]
    public void New_values_are_factored_in_the_old_storage()
    {
        Sample mesh = Samples.Mesh(60);
        SparseLu lu = mesh.Factored();
        double[] other = Samples.Values(mesh.Pattern, new Random(9)), b = Samples.Vector(mesh.Size, 1), x = new double[mesh.Size];
        lu.Factor(other);
        lu.Solve(b, x);
        Assert.InRange((mesh with { Values = other }).BackwardError(b, x), 0, 1e-14);

        // The least of a few: the runtime and tests beside this one may make the pool of work space hand out a new piece now and then.
        long least = long.MaxValue;
        for (int k = 0; k < 5; k++)
        {
            long before = GC.GetAllocatedBytesForCurrentThread();
            lu.Factor(mesh.Values);
            lu.Solve(b, x);
            least = Math.Min(least, GC.GetAllocatedBytesForCurrentThread() - before);
        }

        Assert.InRange(least, 0, 4096);
        Assert.InRange(mesh.BackwardError(b, x), 0, 1e-14);
    }

    [Fact]
    public void Factor_is_the_same_bits_each_time()
    {
        Sample mesh = Samples.Mesh(40);
        double[] b = Samples.Vector(mesh.Size, 1), x = new double[mesh.Size], y = new double[mesh.Size];
        mesh.Factored().Solve(b, x);
        mesh.Factored().Solve(b, y);
        Assert.Equal(x, y);
    }

    [Fact]
    public async Task Threads_solve_at_once_with_the_same_bits()
    {
        Sample mesh = Samples.Mesh(40);
        SparseLu lu = mesh.Factored();
        double[] b = Samples.Vector(mesh.Size, 1), x = new double[mesh.Size], xt = new double[mesh.Size];
        lu.Solve(b, x);
        lu.SolveTransposed(b, xt);
        await Task.WhenAll(Enumerable.Range(0, 4).Select(worker => Task.Run(() =>
        {
            double[] own = new double[mesh.Size];
            for (int i = 0; i < 20; i++)
            {
                if ((worker + i) % 2 == 0)
                {
                    lu.Solve(b, own);
                    Assert.Equal(x, own);
                }
                else
                {
                    lu.SolveTransposed(b, own);
                    Assert.Equal(xt, own);
                }
            }
        })));
    }

    [Theory]
    [InlineData(1e9)]
    [InlineData(1e-9)]
    [InlineData(1e-200)]
    public void Scale_of_the_matrix_does_not_matter(double scale)
    {
        Sample mesh = Samples.Mesh(20);
        double[] b = Samples.Vector(mesh.Size, 1), x = new double[mesh.Size];
        Sample scaled = mesh with { Values = [.. mesh.Values.Select(v => scale * v)] };
        scaled.Factored().Solve([.. b.Select(v => scale * v)], x);
        Assert.InRange(mesh.BackwardError(b, x), 0, 1e-14);
    }

    // Rows and columns times 1e-9 to 1e9, alike, so that the symmetric part stays positive definite.
    [Theory]
    [InlineData(false)]
    [InlineData(true)]
    public void Rows_of_very_different_scale_are_solved(bool symmetric)
    {
        Sample mesh = Samples.Mesh(20);
        mesh = symmetric ? mesh.Symmetrised() : mesh;
        double[] scale = [.. Samples.Vector(mesh.Size, 8).Select(v => Math.Pow(10, 9 * v))], values = new double[mesh.Pattern.Count];
        ForEach(mesh.Pattern, (i, j, k) => values[k] = scale[i] * mesh.Values[k] * scale[j]);
        double[] b = Samples.Vector(mesh.Size, 1), x = new double[mesh.Size];
        (mesh with { Values = values }).Factored(symmetric: symmetric).Solve([.. b.Select((v, i) => scale[i] * v)], x);
        Assert.InRange(mesh.BackwardError(b, [.. x.Select((v, i) => scale[i] * v)]), 0, 1e-13);
    }

    [Fact]
    public void Refined_solution_tells_its_residual()
    {
        Sample mesh = Samples.Mesh(30);
        SparseLu lu = mesh.Factored();
        double[] b = Samples.Vector(mesh.Size, 1), x = new double[mesh.Size];
        // A factor of a matrix nearby: one step must gain about the factor of the disturbance.
        lu.Factor([.. mesh.Values.Select((v, k) => v * (1 + 1e-9 * (k % 3)))]);
        lu.Solve(b, x);
        double rough = Residual(x, false);
        double told = Refinement.RefinedSolve(mesh.Pattern, mesh.Values, lu, b, x);
        Assert.Equal(Residual(x, false), told, 1e-3 * told);
        Assert.True(told < 1e-3 * rough, $"{told} after {rough}");
        told = Refinement.RefinedSolveTransposed(mesh.Pattern, mesh.Values, lu, b, x);
        Assert.Equal(Residual(x, true), told, 1e-3 * told);
        Assert.Equal(0, Refinement.RefinedSolve(mesh.Pattern, mesh.Values, lu, new double[mesh.Size], x));
        Assert.All(x, v => Assert.Equal(0, v));

        double Residual(double[] solution, bool transposed)
        {
            double[] r = new double[mesh.Size];
            if (transposed)
            {
                SparseProduct.MultiplyTransposed(mesh.Pattern, mesh.Values, solution, r);
            }
            else
            {
                SparseProduct.Multiply(mesh.Pattern, mesh.Values, solution, r);
            }
            return Math.Sqrt(r.Select((v, i) => (b[i] - v) * (b[i] - v)).Sum() / b.Sum(v => v * v));
        }
    }
}
