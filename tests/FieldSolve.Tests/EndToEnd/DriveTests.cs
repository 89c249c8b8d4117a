using System.Text.Json;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Signs, options and files of fieldsolve drive on a small device.</summary>
[Collection(SampleRuns.Collection)]
public class DriveTests
{
    private static readonly string[] Plain = ["--no-pictures", "--maps", "none"];

    [Fact]
    public void Signs_follow_the_contract()
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run(["drive", folder.Write("bar.toml", SmallDevice.Text), "--out", folder["out"], .. Plain], null);
        Assert.Equal(0, result.Exit);
        CsvTable curves = CsvTable.Read(folder["out/curves.csv"]);
        Assert.Equal(4, curves.Rows);
        for (int row = 1; row < 4; row++)
        {
            // Isotropic, hall > 0, I > 0: along positive, across (left probe first) negative. In the middle of a long bar with point
            // probes V_along = rho_xx I L/W and V_across = -rho_yx I with rho = sigma^-1, here a/(a²+h²) and h/(a²+h²); L = W here.
            // The metal ends and the width of the probes short-circuit part of both.
            double current = curves.Number(row, "current_A"), det = 1e-6 + 0.09e-6;
            Assert.InRange(curves.Number(row, "v_across_V") / (-0.3e-3 / det * current), 0.8, 1);
            Assert.InRange(curves.Number(row, "v_along_V") / (1e-3 / det * current), 0.8, 1.05);
            Assert.True(curves.Number(row, "pair_half_V") > 0);
            Assert.Equal(0, curves.Number(row, "v_across_even_V"), 1e-9 * current);
        }

        Assert.Equal("0", curves.Text(0, "v_along_V"));
        Assert.Equal("0", curves.Text(0, "v_source_V"));
        Assert.Equal(["curves.csv", "run.json"], TempFolder.FilesIn(folder["out"]));
    }

    [Fact]
    public void All_signs_adds_the_rows_at_the_reversed_currents()
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run(
            ["drive", folder.Write("bar.toml", SmallDevice.Text), "--out", folder["out"], "--all-signs", .. Plain], null);
        Assert.Equal(0, result.Exit);
        CsvTable curves = CsvTable.Read(folder["out/curves.csv"]);
        Assert.Equal(7, curves.Rows);
        Assert.Equal(3, Enumerable.Range(0, 7).Count(row => curves.Number(row, "current_A") < 0));
        Assert.All(
            Enumerable.Range(0, 7), row => Assert.Equal(Math.Sign(curves.Number(row, "current_A")), Math.Sign(curves.Number(row, "v_along_V"))));
    }

    [Theory]
    [InlineData("all", 4)]
    [InlineData("last", 1)]
    [InlineData("none", 0)]
    public void Maps_are_written_as_asked(string maps, int count)
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run(
            "drive", folder.Write("bar.toml", SmallDevice.Text), "--out", folder["out"], "--no-pictures", "--maps", maps);
        Assert.Equal(0, result.Exit);
        IReadOnlyList<string> files = TempFolder.FilesIn(folder["out"]);
        Assert.Equal(count, files.Count(f => f.StartsWith("maps/", StringComparison.Ordinal) && f.EndsWith(".vtu", StringComparison.Ordinal)));
        Assert.Equal(count + 2, files.Count);
    }

    [Fact]
    public void Json_prints_the_summary_alone()
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run(
            ["drive", folder.Write("bar.toml", SmallDevice.Text), "--out", folder["out"], "--json", .. Plain], null);
        JsonElement json = JsonDocument.Parse(result.Out).RootElement;
        Assert.Equal(4, json.GetProperty("rows").GetInt32());
        Assert.Equal(4, json.GetProperty("ok").GetInt32());
        Assert.Equal("bar", json.GetProperty("wirings")[0].GetProperty("name").GetString());
        Assert.True(json.GetProperty("wirings")[0].GetProperty("along_ohm").GetDouble() > 0);
    }

    [Fact]
    public void Quiet_prints_nothing()
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run(
            ["drive", folder.Write("bar.toml", SmallDevice.Text), "--out", folder["out"], "--quiet", .. Plain], null);
        Assert.Equal((0, "", ""), (result.Exit, result.Out, result.Error));
        Assert.True(File.Exists(folder["out/curves.csv"]));
    }

    [Fact]
    public void A_single_zero_current_reads_zero()
    {
        using var folder = new TempFolder();
        string text = SmallDevice.Text.Replace("from = \"0 uA\", to = \"30 uA\", steps = 4", "from = \"0 uA\", to = \"0 uA\", steps = 1", StringComparison.Ordinal);
        CommandResult result = Command.Run(["drive", folder.Write("bar.toml", text), "--out", folder["out"], .. Plain], null);
        Assert.Equal(0, result.Exit);
        CsvTable curves = CsvTable.Read(folder["out/curves.csv"]);
        Assert.Equal(1, curves.Rows);
        Assert.Equal(("0", "0", "ok"), (curves.Text(0, "v_along_V"), curves.Text(0, "v_across_V"), curves.Text(0, "status")));
    }

    [Fact]
    public void Without_pairs_and_with_one_sign_the_columns_stay_empty()
    {
        using var folder = new TempFolder();
        string text = SmallDevice.Text
            .Replace("along = [\"top 1\", \"top 2\"]", "", StringComparison.Ordinal)
            .Replace("across = [\"top 1\", \"bottom 1\"]", "", StringComparison.Ordinal)
            .Replace("both_signs = true", "", StringComparison.Ordinal);
        CommandResult result = Command.Run(["drive", folder.Write("bar.toml", text), "--out", folder["out"], .. Plain], null);
        Assert.Equal(0, result.Exit);
        CsvTable curves = CsvTable.Read(folder["out/curves.csv"]);
        Assert.All(
            ["v_along_V", "v_along_err_V", "v_across_V", "v_along_odd_V", "v_across_even_V", "v_across_even_err_V"],
            column => Assert.Equal("", curves.Text(3, column)));
        Assert.True(curves.Number(3, "v_source_V") > 0);
    }

    [Fact]
    public void High_voltages_and_thin_feet_are_cautioned()
    {
        using var folder = new TempFolder();
        string text = SmallDevice.Text
            .Replace("to = \"30 uA\"", "to = \"40 mA\"", StringComparison.Ordinal)
            .Replace("bar = { length", "mean_free_path = \"200 nm\"\nbar = { length", StringComparison.Ordinal);
        CommandResult result = Command.Run(["drive", folder.Write("bar.toml", text), "--out", folder["out"], .. Plain], null);
        Assert.Equal(0, result.Exit);
        Assert.Contains("60 V DC", result.Error, StringComparison.Ordinal);
        Assert.Contains("IEC 61010-1", result.Error, StringComparison.Ordinal);
        Assert.Contains("licensed", result.Error, StringComparison.Ordinal);
        Assert.Contains("sheet current density", result.Error, StringComparison.Ordinal);
        Assert.Contains("power density", result.Error, StringComparison.Ordinal);
        Assert.Contains("mean free path", result.Error, StringComparison.Ordinal);
        JsonElement json = JsonDocument.Parse(File.ReadAllText(folder["out/run.json"])).RootElement;
        Assert.Equal(4, json.GetProperty("cautions").GetArrayLength());
    }
}
