using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Readings;

namespace FieldSolve.Tests.FilesTests;

public class CurvesCsvTests
{
    private const string Head =
        "wiring,current_A,v_along_V,v_along_err_V,v_across_V,v_across_err_V,v_along_odd_V,v_along_even_V,v_along_even_err_V," +
        "v_across_odd_V,v_across_even_V,v_across_even_err_V,";

    private const string Tail = "v_source_V,v_source_err_V,newton_steps,status\r\n";

    private static readonly Terminal Any = new(false, 0);

    private static Wiring Wire(string name, params string[] extra) =>
        new(name, 0, 1, null, null, [.. extra.Select(e => new Pair(e, Any, Any))]);

    private static CurveRow Row(string wiring, double current, RowStatus status, params Reading[] readings) =>
        new(wiring, current, readings, 3, status, null, 0, 0);

    [Fact]
    public void The_table_has_exactly_the_columns_and_digits_promised()
    {
        CurveRow row = Row(
            "0 deg", 0.0005, RowStatus.Ok,
            new("along", 0.1, 1e-7, 0.1 + 0.2, -2.5e-9, 1e-12, 0, 0),
            new("across", -0.25, 2e-7, null, null, null, 0, 0),
            new("extra", 1.0 / 3, 3e-7, null, null, null, 0, 0),
            new("source", 12, 0, null, null, null, 0, 0));
        string text = CurvesCsv.Text([Wire("0 deg", "extra")], [row]);
        Assert.Equal(
            Head + "pair_extra_V,pair_extra_err_V," + Tail +
            "0 deg,0.0005,0.1,1E-07,-0.25,2E-07,0.30000000000000004,-2.5E-09,1E-12,,,,0.3333333333333333,3E-07,12,0,3,ok\r\n",
            text);
    }

    [Fact]
    public void What_is_absent_is_empty_and_pairs_are_joined_in_order_of_appearance()
    {
        string text = CurvesCsv.Text(
            [Wire("a", "z", "m"), Wire("b", "k", "m")],
            [Row("a", 0, RowStatus.NotConverged), Row("b", -0.0, RowStatus.ErrorAboveWanted, new Reading("k", 2, double.NaN, null, null, null, 0, 0))]);
        string[] lines = text.Split("\r\n");
        Assert.Equal(Head + "pair_z_V,pair_z_err_V,pair_m_V,pair_m_err_V,pair_k_V,pair_k_err_V," + Tail, lines[0] + "\r\n");
        Assert.Equal("a,0,,,,,,,,,,,,,,,,,,,3,not-converged", lines[1]);
        Assert.Equal("b,0,,,,,,,,,,,,,,,2,,,,3,error-above-wanted", lines[2]);
        Assert.Equal("", lines[3]);
        Assert.Equal(4, lines.Length);
    }

    [Fact]
    public void Names_are_quoted_as_rfc_4180_says()
    {
        string text = CurvesCsv.Text([Wire("say \"30\", then", "p,q")], [Row("say \"30\", then", 1, RowStatus.OutsideLaw)]);
        Assert.Contains(",\"pair_p,q_V\",\"pair_p,q_err_V\",", text, StringComparison.Ordinal);
        Assert.Contains("\r\n\"say \"\"30\"\", then\",1,", text, StringComparison.Ordinal);
        Assert.EndsWith(",3,outside-law\r\n", text, StringComparison.Ordinal);
    }

    [Fact]
    public void Reversed_rows_follow_those_of_their_wiring_and_zero_is_not_repeated()
    {
        CurveRow[] rows = [Row("a", 0, RowStatus.Ok), Row("a", 1, RowStatus.Ok), Row("b", 0, RowStatus.Ok), Row("b", 1, RowStatus.Ok)];
        CurveRow[] reversed = [Row("a", -0.0, RowStatus.Ok), Row("a", -1, RowStatus.Ok), Row("b", -0.0, RowStatus.Ok), Row("b", -1, RowStatus.Ok)];
        string[] lines = CurvesCsv.Text([Wire("a"), Wire("b")], rows, reversed).Split("\r\n", StringSplitOptions.RemoveEmptyEntries);
        Assert.Equal(["a,0", "a,1", "a,-1", "b,0", "b,1", "b,-1"], lines[1..].Select(l => string.Join(',', l.Split(',')[..2])));
    }

    [Fact]
    public void A_culture_with_decimal_commas_changes_nothing()
    {
        CurveRow row = Row("a", -1234.5, RowStatus.Ok, new Reading("along", 1e-300, 0.5, null, null, null, 0, 0));
        string plain = CurvesCsv.Text([Wire("a")], [row]);
        CultureInfo before = CultureInfo.CurrentCulture;
        try
        {
            // The number format of German, written out because the invariant mode of the runtime has no German.
            CultureInfo german = (CultureInfo)CultureInfo.InvariantCulture.Clone();
            german.NumberFormat.NumberDecimalSeparator = ",";
            german.NumberFormat.NumberGroupSeparator = ".";
            german.NumberFormat.NegativeSign = "−";
            CultureInfo.CurrentCulture = german;
            Assert.Equal("-1,5".Replace('-', '−'), (-1.5).ToString(CultureInfo.CurrentCulture));
            Assert.Equal(plain, CurvesCsv.Text([Wire("a")], [row]));
        }
        finally
        {
            CultureInfo.CurrentCulture = before;
        }
    }
}
