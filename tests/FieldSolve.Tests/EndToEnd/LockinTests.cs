using System.Globalization;
using System.Text.Json;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>fieldsolve lockin as a user runs it.</summary>
[Collection(SampleRuns.Collection)]
public class LockinTests
{
    private static readonly string Text = SmallDevice.Text.Replace(
        "current = { from = \"0 uA\", to = \"30 uA\", steps = 4 }",
        "current = { from = \"10 uA\", to = \"30 uA\", steps = 2 }\nfrequency = [\"17.77 Hz\", \"3 GHz\"]",
        StringComparison.Ordinal).Replace("[law]", "gate_capacitance = \"12 nF/cm^2\"\n[law]", StringComparison.Ordinal);

    [Fact]
    public void Writes_table_record_pictures_and_report()
    {
        using var folder = new TempFolder();
        CommandResult run = Command.Run("lockin", folder.Write("ac.toml", Text), "--out", folder["out"], "--json");
        Assert.True(run.Exit is 0 or 3, run.Error);
        CsvTable table = CsvTable.Read(folder["out/harmonics.csv"]);
        Assert.Equal(
            ["wiring", "current_rms_A", "frequency_Hz", "pair", "harmonic", "x_V", "y_V", "r_V", "phase_deg", "err_V", "status"], table.Header);
        Assert.Equal(2 * 2 * 4 * 6, table.Rows);   // currents, frequencies, pairs with the source, harmonics
        using JsonDocument record = JsonDocument.Parse(File.ReadAllText(folder["out/run.json"])), summary = JsonDocument.Parse(run.Out);
        Assert.Equal("lockin", record.RootElement.GetProperty("command").GetString());
        Assert.True(record.RootElement.GetProperty("lockin").GetProperty("quasi_static_to_1_percent").GetArrayLength() > 0);
        Assert.True(summary.RootElement.GetProperty("wirings")[0].GetProperty("quasi_static_below_Hz").GetDouble() > 1e6);
        foreach (string name in new[] { "device", "waves", "harmonics-bar", "frequency-bar", "cycle-bar", "mesh", "convergence" })
        {
            Assert.True(new FileInfo(folder[$"out/pictures/{name}.png"]).Length > 5000, name);
            Assert.True(new FileInfo(folder[$"out/pictures/{name}.svg"]).Length > 2000, name);
        }

        string page = File.ReadAllText(folder["out/report.html"]);
        Assert.Contains("data:image/svg+xml,", page, StringComparison.Ordinal);
        Assert.Contains("default-src 'none'", page, StringComparison.Ordinal);
    }

    [Fact]
    public void Without_pictures_only_table_and_record()
    {
        using var folder = new TempFolder();
        CommandResult run = Command.Run("lockin", folder.Write("ac.toml", Text), "--out", folder["out"], "--no-pictures", "--quick", "--quiet");
        Assert.True(run.Exit is 0 or 3, run.Error);
        Assert.Equal(["harmonics.csv", "run.json"], TempFolder.FilesIn(folder["out"]));
        Assert.Empty(run.Out);
    }

    [Theory]
    [InlineData("frequency = [\"17.77 Hz\", \"3 GHz\"]\n", "", "[drive]", "needs a 'frequency'")]
    [InlineData("\"17.77 Hz\"", "\"0 Hz\"", "frequency", "greater than zero")]
    [InlineData("from = \"10 uA\"", "from = \"-10 uA\"", "[drive]", "RMS")]
    [InlineData("\"12 nF/cm^2\"", "\"-12 nF/cm^2\"", "gate_capacitance", "")]
    public void Wrong_input_is_named_with_its_place(string from, string to, string line, string message)
    {
        using var folder = new TempFolder();
        string text = Text.Replace(from, to, StringComparison.Ordinal), path = folder.Write("ac.toml", text);
        CommandResult run = Command.Run("lockin", path, "--out", folder["out"]);
        Assert.Equal(2, run.Exit);
        string fault = Assert.Single(run.ErrorLines);
        Assert.StartsWith(path + ":", fault, StringComparison.Ordinal);
        int at = int.Parse(fault[(path.Length + 1)..].Split(':')[0], CultureInfo.InvariantCulture);
        Assert.Contains(line, text.Split('\n')[at - 1], StringComparison.Ordinal);
        Assert.Contains(message, fault, StringComparison.Ordinal);
        Assert.False(Directory.Exists(folder["out"]));
    }

    [Fact]
    public void A_file_without_a_drive_is_refused()
    {
        using var folder = new TempFolder();
        string text = Text[..Text.IndexOf("[drive]", StringComparison.Ordinal)], path = folder.Write("ac.toml", text);
        CommandResult run = Command.Run("lockin", path, "--out", folder["out"]);
        Assert.Equal(2, run.Exit);
        Assert.Contains("no [drive]", Assert.Single(run.ErrorLines), StringComparison.Ordinal);
    }
}
