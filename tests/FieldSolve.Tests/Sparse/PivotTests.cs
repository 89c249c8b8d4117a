using FieldSolve.Sparse;

namespace FieldSolve.Tests.SparseTests;

public class PivotTests
{
    [Theory]
    [InlineData(2)]
    [InlineData(10)]
    [InlineData(17)]
    [InlineData(36)]
    [InlineData(75)]
    public void Unsupported_mesh_is_singular(int cells)
    {
        Sample mesh = Samples.Mesh(cells, support: 0);
        Assert.Throws<PivotException>(() => mesh.Factored());
        Assert.Throws<PivotException>(() => mesh.Factored(places: false));
        Assert.Throws<PivotException>(() => mesh.Symmetrised().Factored(symmetric: true));
    }

    [Fact]
    public void Two_components_with_one_support_are_singular()
    {
        Sample a = Samples.Mesh(6), b = Samples.Mesh(5, support: 0);
        int n = a.Size;
        int[] start = [.. a.Pattern.Start, .. b.Pattern.Start.Skip(1).Select(s => s + a.Pattern.Count)];
        var both = new SymmetricPattern(start, [.. a.Pattern.Column, .. b.Pattern.Column.Select(c => c + n)]);
        var lu = new SparseLu(SparseAnalysis.Analyse(both, [], []));
        PivotException found = Assert.Throws<PivotException>(() => lu.Factor([.. a.Values, .. b.Values]));
        Assert.InRange(found.Unknown, n, n + b.Size - 1);
    }

    [Theory]
    [InlineData(4)]
    [InlineData(30)]
    public void Indefinite_matrix_is_refused_and_leaves_no_factor(int cells)
    {
        Sample mesh = Samples.Mesh(cells);
        SparseLu lu = mesh.Factored();
        // Symmetric, with one stiff diagonal entry turned: Sylvester's law of inertia demands a negative pivot.
        double[] values = new double[mesh.Pattern.Count];
        for (int i = 0; i < mesh.Size; i++)
        {
            for (int k = mesh.Pattern.Start[i]; k < mesh.Pattern.Start[i + 1]; k++)
            {
                values[k] = mesh.Values[k] + mesh.Values[Samples.Place(mesh.Pattern, mesh.Pattern.Column[k], i)];
            }
        }
        int turned = mesh.Size / 3;
        values[Samples.Place(mesh.Pattern, turned, turned)] *= 0.2;
        PivotException found = Assert.Throws<PivotException>(() => lu.Factor(values));
        Assert.True(found.Pivot <= 0 || !double.IsFinite(found.Pivot));
        Assert.Contains("unknown", found.Message, StringComparison.Ordinal);
        PivotException half = Assert.Throws<PivotException>(() => (mesh with { Values = values }).Factored(symmetric: true));
        Assert.Equal(found.Unknown, half.Unknown);
        double[] x = new double[mesh.Size];
        Assert.Throws<InvalidOperationException>(() => lu.Solve(x, x));
        lu.Factor(mesh.Values);
        lu.Solve(x, x);
    }

    [Theory]
    [InlineData(double.NaN)]
    [InlineData(double.PositiveInfinity)]
    [InlineData(double.NegativeInfinity)]
    public void Value_that_is_not_finite_is_refused(double bad)
    {
        Sample mesh = Samples.Mesh(10);
        SparseLu lu = mesh.Factored();
        for (int k = 0; k < mesh.Pattern.Count; k += 97)
        {
            double[] values = [.. mesh.Values];
            values[k] = bad;
            Assert.Throws<PivotException>(() => lu.Factor(values));
        }
    }

    [Fact]
    public void Negative_and_zero_diagonals_are_refused()
    {
        SymmetricPattern one = Samples.Pattern(1, []);
        var lu = new SparseLu(SparseAnalysis.Analyse(one, [], []));
        foreach (double bad in new[] { 0.0, -1, 1e-310 })
        {
            PivotException found = Assert.Throws<PivotException>(() => lu.Factor([bad]));
            Assert.Equal(0, found.Unknown);
            Assert.Equal(bad, found.Pivot);
        }
    }
}
