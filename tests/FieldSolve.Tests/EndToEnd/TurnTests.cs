using System.Text.Json;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Files, messages and exit statuses of fieldsolve turn.</summary>
[Collection(SampleRuns.Collection)]
public class TurnTests
{
    private const string Ring = """
        title = "Small ring"

        [sheet]
        disc = { diameter = "8 um" }

        [law]
        kind = "quadratic"
        axis = "20 deg"
        a = "2 mS"
        b = "1 mS"
        d12 = "1e-9 A m/V^2"
        field_limit = "200 kV/m"

        [[contacts]]
        ring = 4
        width = "1 um"
        prefix = "c"

        [[wiring]]
        name = "first"
        source = "c3"
        drain = "c1"
        across = ["c2", "c4"]
        pairs = { whole = ["c3", "c1"] }

        [turn]
        around = "c"

        [drive]
        current = { from = "20 uA", to = "60 uA", steps = 2 }
        both_signs = true

        [mesh]
        error = 1e-2
        even_error = 0.1
        """;

    [Fact]
    public void A_ring_gives_its_files()
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run("turn", folder.Write("ring.toml", Ring), "--out", folder["out"], "--ratio", "1,4");
        Assert.True(result.Exit == 0, result.Error);
        IReadOnlyList<string> files = TempFolder.FilesIn(folder["out"]);
        string[] pictures = ["angles", "convergence", "device", "mesh", "polar", "potential", "ratios"];
        string[] expected =
        [
            "angle-fit.json", "angles.csv", .. pictures.SelectMany(p => new[] { $"pictures/{p}.png", $"pictures/{p}.svg" }), "ratios.csv", "report.html", "run.json",
        ];
        Assert.Equal(expected.Order(StringComparer.Ordinal), files.Order(StringComparer.Ordinal));

        CsvTable angles = CsvTable.Read(folder["out/angles.csv"]);
        Assert.Equal(8, angles.Rows);
        Assert.Equal(["direction_deg", "wiring", "current_A", "v_along_V"], angles.Header[..4]);
        Assert.Equal([0, 0, 90, 90, 180, 180, 270, 270], Enumerable.Range(0, 8).Select(row => angles.Number(row, "direction_deg")));
        Assert.Equal("c4 to c2", angles.Text(2, "wiring"));
        Assert.Equal("", angles.Text(0, "v_along_V"));
        Assert.Equal(290, angles.Number(6, "angle_from_a_deg") + 40, 6);
        Assert.All(Enumerable.Range(0, 8), row => Assert.Equal("ok", angles.Text(row, "status")));
        Assert.All(Enumerable.Range(0, 8), row => Assert.Equal(angles.Number(row, "v_source_V"), angles.Number(row, "pair_whole_V"), 1e-9));

        JsonElement run = JsonDocument.Parse(File.ReadAllText(folder["out/run.json"])).RootElement;
        Assert.Equal("turn", run.GetProperty("command").GetString());
        Assert.Equal(16, run.GetProperty("figures").GetProperty("solved_points").GetInt32());
        Assert.True(run.GetProperty("figures").GetProperty("wall_s_per_point").GetDouble() > 0);

        // Only the across pair: the strip formulas have no mean resistivity to find, the device's own response has.
        JsonElement fit = JsonDocument.Parse(File.ReadAllText(folder["out/angle-fit.json"])).RootElement.GetProperty("linear");
        Assert.Equal(JsonValueKind.Null, fit.GetProperty("strip").ValueKind);
        Assert.Equal(2, fit.GetProperty("law").GetProperty("anisotropy_ratio").GetDouble(), 1e-12);

        string page = File.ReadAllText(folder["out/report.html"]);
        Assert.Contains("default-src 'none'", page, StringComparison.Ordinal);
        Assert.DoesNotContain("http://", page.Replace("http://www.w3.org", "", StringComparison.Ordinal), StringComparison.Ordinal);
        Assert.Equal(7, page.Split("<img ").Length - 1);
    }

    [Fact]
    public void The_axis_turns_under_any_device_and_bytes_do_not_depend_on_the_processors()
    {
        using var folder = new TempFolder();
        string device = folder.Write("bar.toml", SmallDevice.Text);
        string[] arguments = ["turn", device, "--turn-axis", "5", "--no-pictures", "--json", "--out"];
        CommandResult two = Command.Run([.. arguments, folder["two"]], null);
        CommandResult one = Command.Run([.. arguments, folder["one"]], new Dictionary<string, string> { ["DOTNET_PROCESSOR_COUNT"] = "1" });
        Assert.True(two.Exit == 0 && one.Exit == 0, two.Error + one.Error);
        Assert.Equal(["angle-fit.json", "angles.csv", "run.json"], TempFolder.FilesIn(folder["two"]));
        foreach (string file in new[] { "angles.csv", "angle-fit.json" })
        {
            Assert.Equal(File.ReadAllBytes(folder["two/" + file]), File.ReadAllBytes(folder["one/" + file]));
        }

        CsvTable angles = CsvTable.Read(folder["two/angles.csv"]);
        Assert.Equal(20, angles.Rows);
        Assert.Equal([0, 72, 144, 216, 288], Enumerable.Range(0, 5).Select(k => angles.Number(4 * k, "axis_deg")));
        Assert.Equal(288, angles.Number(4, "angle_from_a_deg"));
        JsonElement json = JsonDocument.Parse(two.Out).RootElement;
        Assert.Equal(5, json.GetProperty("directions").GetInt32());
        Assert.Equal(1, json.GetProperty("device_geometry").GetProperty("anisotropy_ratio").GetDouble(), 1e-3);
    }

    [Theory]
    [InlineData("--turn-axis", "1", "whole number of steps from 2")]
    [InlineData("--turn-axis", "many", "whole number of steps from 2")]
    [InlineData("--ratio", "1;2", "numbers from 1 to 1000")]
    [InlineData("--ratio", "0.5", "numbers from 1 to 1000")]
    public void Bad_options_are_told_before_anything_is_done(string option, string value, string message)
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run("turn", folder.Write("ring.toml", Ring), option, value, "--out", folder["out"]);
        Assert.Equal(2, result.Exit);
        Assert.Contains(message, result.Error, StringComparison.Ordinal);
        Assert.False(Directory.Exists(folder["out"]));
    }

    [Fact]
    public void One_direction_is_one_line_and_nothing_written()
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run("turn", folder.Write("bar.toml", SmallDevice.Text), "--out", folder["out"]);
        Assert.Equal(2, result.Exit);
        Assert.Contains("bar.toml:1:1: one wiring is one direction", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        Assert.False(Directory.Exists(folder["out"]));
    }
}
