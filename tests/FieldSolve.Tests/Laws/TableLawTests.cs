using FieldSolve.Laws;

namespace FieldSolve.Tests.LawsTests;

public class TableLawTests
{
    private static readonly QuadraticLaw Quadratic = new(4e-3, 1e-3, 5e-4, new(1e-9, 2e-9, 3e-9, -1e-9, 2e-9, 1e-9));
    private const string Header = "ea_V_per_m,eb_V_per_m,ka_A_per_m,kb_A_per_m\n";

    [Fact]
    public void Table_of_a_quadratic_law_gives_it_back_to_rounding()
    {
        TableLaw table = Good(LawSamples.Table(Quadratic, 1e5, 6));
        for (int i = 0; i < 200; i++)
        {
            double a = 1e5 * Math.Sin(i), b = 1e5 * Math.Cos(1.7 * i);
            Response want = LawSamples.At(Quadratic, a, b), got = LawSamples.At(table, a, b);
            Assert.Equal(want.Ka, got.Ka, 1e-9);
            Assert.Equal(want.Kb, got.Kb, 1e-9);
            Assert.Equal(want.Slope.Aa, got.Slope.Aa, 1e-12);
            Assert.Equal(want.Slope.Ab, got.Slope.Ab, 1e-12);
            Assert.Equal(want.Slope.Ba, got.Slope.Ba, 1e-12);
            Assert.Equal(want.Slope.Bb, got.Slope.Bb, 1e-12);
        }
    }

    [Fact]
    public void Error_in_a_smooth_law_falls_with_the_step()
    {
        SaturatingLaw law = new(4e-3, 4e-3, 0, 1e5, 1e5, 2);
        double Error(int n)
        {
            TableLaw table = Good(LawSamples.Table(law, 1e5, n));
            return Enumerable.Range(0, 400).Max(i =>
            {
                double a = 7e4 * Math.Sin(i), b = 7e4 * Math.Cos(1.7 * i);
                return Math.Abs(LawSamples.At(law, a, b).Ka - LawSamples.At(table, a, b).Ka);
            });
        }

        // Fourth order inside; the parabolic ends, of lower order, cost the coarse grid more.
        Assert.InRange(Math.Log2(Error(11) / Error(21)), 3, 6);
    }

    [Fact]
    public void Derivative_is_exact_and_continuous_across_cells()
    {
        TableLaw table = Good(LawSamples.Table(new SaturatingLaw(4e-3, 1e-3, 1e-4, 1e5, 1e5, 2), 2e5, 9));
        for (int node = 1; node < 8; node++)
        {
            double at = 2e5 * ((2.0 * node / 8) - 1), across = 3.3e4;
            Response below = LawSamples.At(table, at - 1e-4, across), above = LawSamples.At(table, at + 1e-4, across);
            Assert.Equal(below.Slope.Aa, above.Slope.Aa, 1e-10);
            Assert.Equal(below.Slope.Ab, above.Slope.Ab, 1e-10);
            below = LawSamples.At(table, across, at - 1e-4);
            above = LawSamples.At(table, across, at + 1e-4);
            Assert.Equal(below.Slope.Bb, above.Slope.Bb, 1e-10);
            Assert.Equal(below.Slope.Ba, above.Slope.Ba, 1e-10);
        }

        for (int i = 0; i < 100; i++)
        {
            double a = 1.9e5 * Math.Sin(i), b = 1.9e5 * Math.Cos(1.7 * i);
            const double H = 10;
            Tensor2 d = LawSamples.At(table, a, b).Slope;
            Response pa = LawSamples.At(table, a + H, b), ma = LawSamples.At(table, a - H, b);
            Response pb = LawSamples.At(table, a, b + H), mb = LawSamples.At(table, a, b - H);
            Assert.Equal((pa.Ka - ma.Ka) / (2 * H), d.Aa, 1e-9);
            Assert.Equal((pa.Kb - ma.Kb) / (2 * H), d.Ba, 1e-9);
            Assert.Equal((pb.Ka - mb.Ka) / (2 * H), d.Ab, 1e-9);
            Assert.Equal((pb.Kb - mb.Kb) / (2 * H), d.Bb, 1e-9);
        }
    }

    [Fact]
    public void Fields_outside_the_grid_are_refused_with_index_and_field()
    {
        // The table of a law that loses definiteness inside the grid: guarded, yet bound to the true field.
        ISheetLaw guarded = GuardedLaw.Around(Good(LawSamples.Table(Quadratic, 1e6, 21)));
        Assert.NotNull(guarded.Guard);
        Assert.InRange(guarded.Guard.Limit, 1e4, 1e6);
        double[] ea = new double[700], eb = new double[700], k = new double[700], d = new double[700];
        ea[600] = 1e6;
        ea[650] = 1.001e6;
        eb[650] = -3;
        FieldOutsideTableException e = Assert.Throws<FieldOutsideTableException>(() => guarded.Evaluate(ea, eb, k, d));
        Assert.Equal((650, 1.001e6, -3), (e.Index, e.FieldA, e.FieldB));
        e = Assert.Throws<FieldOutsideTableException>(() => new LabLaw(guarded, 0).Evaluate(ea, eb, k, d, d, d, d, d));
        Assert.Equal((650, 1.001e6, -3), (e.Index, e.FieldA, e.FieldB));
        Assert.Throws<FieldOutsideTableException>(() => guarded.EvaluatePure([double.NaN], [0], k.AsSpan(0, 1), d.AsSpan(0, 1)));
    }

    [Fact]
    public void Guarded_table_keeps_a_tenth_of_the_eigenvalue_inside_its_grid()
    {
        ISheetLaw guarded = GuardedLaw.Around(Good(LawSamples.Table(Quadratic, 1e6, 21)));
        double zero = guarded.AtZeroField.SmallestSymmetricEigenvalue;
        for (int i = -100; i <= 100; i++)
        {
            for (int j = -100; j <= 100; j++)
            {
                double least = LawSamples.At(guarded, 1e4 * i, 1e4 * j).Slope.SmallestSymmetricEigenvalue;
                Assert.True(least >= 0.1 * zero, FormattableString.Invariant($"at {i}, {j}: {least / zero}"));
            }
        }
    }

    [Fact]
    public void Definite_table_needs_no_guard()
    {
        Assert.Null(GuardedLaw.Around(Good(LawSamples.Table(new SaturatingLaw(4e-3, 4e-3, 0, 1e5, 1e5, 2), 2e5, 11))).Guard);
    }

    [Fact]
    public void Rows_and_columns_may_come_in_any_order()
    {
        string[] lines = LawSamples.Table(Quadratic, 1e5, 5).Split('\n', StringSplitOptions.RemoveEmptyEntries);
        IEnumerable<string> swapped = lines.Skip(2).Reverse().Select(l =>
        {
            string[] c = l.Trim().Split(',');
            return $" {c[3]}, {c[1]} ,{c[0]},{c[2]}\r";
        });
        TableLaw table = Good("\uFEFF# note\nkb_A_per_m,eb_V_per_m,ea_V_per_m,ka_A_per_m\n\n" + string.Join('\n', swapped));
        TableLaw plain = Good(string.Join('\n', lines));
        Assert.Equal(LawSamples.At(plain, 1234, -4321), LawSamples.At(table, 1234, -4321));
    }

    [Theory]
    [InlineData("", 1, 1, "empty")]
    [InlineData("# only a note\n", 1, 1, "empty")]
    [InlineData("ea_V_per_m,eb,ka_A_per_m,kb_A_per_m\n1,2,3,4\n", 1, 12, "header")]
    [InlineData("ea_V_per_m,eb_V_per_m,ka_A_per_m,ka_A_per_m\n", 1, 34, "header")]
    [InlineData("ea_V_per_m,eb_V_per_m,ka_A_per_m\n", 1, 23, "header")]
    [InlineData("#\n" + Header + "0,0,0,0\n0, x1,0,0\n", 4, 4, "'x1' is not a finite number")]
    [InlineData(Header + "0,0,0,NaN\n", 2, 7, "not a finite number")]
    [InlineData(Header + "0,0,0,1e999\n", 2, 7, "not a finite number")]
    [InlineData(Header + "0,0,0\n", 2, 6, "this one has 3")]
    [InlineData(Header + "0,0,0,0,5\n", 2, 9, "more")]
    [InlineData(Header + "0,0,0,0\n1,1,1,1\n", 1, 1, "at least 4")]
    public void Faults_say_where_and_what(string text, int line, int column, string part)
    {
        TableLawReading reading = TableLaw.Read(text);
        Assert.Null(reading.Law);
        Assert.Equal((line, column), (reading.Faults[0].Line, reading.Faults[0].Column));
        Assert.Contains(part, reading.Faults[0].Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Missing_and_repeated_points_are_faults()
    {
        List<string> lines = [.. LawSamples.Table(Quadratic, 1e5, 5).Split('\n', StringSplitOptions.RemoveEmptyEntries)];
        string first = lines[2];
        lines[2] = lines[3];
        TableLawReading reading = TableLaw.Read(string.Join('\n', lines));
        Assert.Null(reading.Law);
        Assert.Contains(reading.Faults, f => f.Message.Contains("missing", StringComparison.Ordinal) && f.Line == 2);
        Assert.Contains(reading.Faults, f => f.Message.Contains("stands in line 3", StringComparison.Ordinal) && f.Line == 4);
        lines[2] = first;
        Assert.NotNull(TableLaw.Read(string.Join('\n', lines)).Law);
    }

    [Fact]
    public void Tables_that_no_sheet_can_have_are_faults()
    {
        Assert.Contains("zero must lie inside", Fault((a, b) => (a + 4, b, a, b)), StringComparison.Ordinal);
        Assert.Contains("At zero field the table gives", Fault((a, b) => (a, b, a + 1, b)), StringComparison.Ordinal);
        Assert.Contains("not positive definite", Fault((a, b) => (a, b, a, -b)), StringComparison.Ordinal);
        Assert.Contains("rectangular grid", Fault((a, b) => (a + (0.01 * b), b + (0.01 * a), a, b)), StringComparison.Ordinal);

        static string Fault(Func<int, int, (double, double, double, double)> row)
        {
            string text = Header;
            for (int a = -3; a <= 3; a++)
            {
                for (int b = -3; b <= 3; b++)
                {
                    text += FormattableString.Invariant($"{row(a, b)}\n").Trim('(').Replace(")", string.Empty, StringComparison.Ordinal);
                }
            }

            TableLawReading reading = TableLaw.Read(text);
            Assert.Null(reading.Law);
            return reading.Faults[0].Message;
        }
    }

    [Fact]
    public void Noise_is_refused_quickly_with_a_bounded_list()
    {
        Random random = new(1);
        string rows = string.Concat(Enumerable.Range(0, 50_000).Select(_ =>
            FormattableString.Invariant($"{random.NextDouble() - 0.5},{random.NextDouble() - 0.5},1,1\n")));
        Assert.Single(TableLaw.Read(Header + rows).Faults);
        Assert.InRange(TableLaw.Read(Header + string.Concat(Enumerable.Repeat("?,?\n", 10_000))).Faults.Count, 1, 60);
    }

    private static TableLaw Good(string text)
    {
        TableLawReading reading = TableLaw.Read(text);
        Assert.Empty(reading.Faults);
        return reading.Law!;
    }
}
