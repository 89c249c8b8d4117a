namespace FieldSolve.Tests.EndToEndTests;

/// <summary>A drive that leaves its law ends with status 3 and keeps the rows up to there.</summary>
[Collection(SampleRuns.Collection)]
public class LawEndTests
{
    // K = 1 mS E + 1e-8 E²: along -a the slope 1 mS - 2e-8 |E| ends at 50 kV/m, and K there peaks at 25 A/m: 0.1 mA in a bar of 4 um.
    private const string Quadratic = """
        kind = "quadratic"
        a = "1 mS"
        b = "1 mS"
        d11 = "1e-8 A m/V^2"
        """;

    [Fact]
    public void A_quadratic_law_without_a_limit_is_left_at_high_drive()
    {
        using var folder = new TempFolder();
        CommandResult result = Drive(folder, Quadratic, "300 uA", 7);
        Assert.Equal(3, result.Exit);
        Assert.Contains("leaves its law", result.Error, StringComparison.Ordinal);
        Assert.Contains("field_limit", result.Error, StringComparison.Ordinal);
        CsvTable curves = CsvTable.Read(folder["out/curves.csv"]);
        Assert.Equal(7, curves.Rows);
        Assert.Equal("ok", curves.Text(0, "status"));
        Assert.Equal("outside-law", curves.Text(6, "status"));
        Assert.True(curves.Number(1, "v_along_V") > 0);
    }

    [Fact]
    public void A_current_that_the_sheet_cannot_carry_has_no_solution()
    {
        using var folder = new TempFolder();
        const string Saturating = """
            kind = "saturating"
            a = "1 mS"
            b = "1 mS"
            field_a = "20 kV/m"
            field_b = "20 kV/m"
            sharpness = 2
            """;

        // At most a field_a = 20 A/m over 4 um: 80 uA.
        CommandResult result = Drive(folder, Saturating, "120 uA", 3);
        Assert.Equal(3, result.Exit);
        Assert.Contains("no solution", result.Error, StringComparison.Ordinal);
        CsvTable curves = CsvTable.Read(folder["out/curves.csv"]);
        Assert.Equal(3, curves.Rows);
        Assert.Equal("ok", curves.Text(1, "status"));
        Assert.True(curves.Number(1, "v_source_V") > 0);
        Assert.Equal("not-converged", curves.Text(2, "status"));
        Assert.Equal("", curves.Text(2, "v_source_V"));
        Assert.True(File.Exists(folder["out/run.json"]));
    }

    [Fact]
    public void A_table_refuses_fields_beyond_its_grid_and_names_the_place()
    {
        using var folder = new TempFolder();
        File.Copy(Repository.Sample("bar-table.csv"), folder["bar-table.csv"]);
        CommandResult result = Drive(folder, "kind = \"table\"\nfile = \"bar-table.csv\"", "800 uA", 3);
        Assert.Equal(3, result.Exit);
        Assert.Contains("V/m", result.Error, StringComparison.Ordinal);
        CsvTable curves = CsvTable.Read(folder["out/curves.csv"]);
        Assert.Equal("ok", curves.Text(0, "status"));
        Assert.Equal("not-converged", curves.Text(2, "status"));
    }

    private static CommandResult Drive(TempFolder folder, string law, string current, int steps)
    {
        string text = SmallDevice.Text.ReplaceLineEndings("\n")
            .Replace(SmallDevice.Law.ReplaceLineEndings("\n"), law, StringComparison.Ordinal)
            .Replace("to = \"30 uA\", steps = 4", $"to = \"{current}\", steps = {steps}", StringComparison.Ordinal);
        Assert.DoesNotContain("hall", text, StringComparison.Ordinal);
        return Command.Run("drive", folder.Write("bar.toml", text), "--out", folder["out"], "--no-pictures", "--maps", "none");
    }
}
