using System.Security.Cryptography;
using System.Text.Json;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Every sample device from the file to the answer, by the built command.</summary>
[Collection(SampleRuns.Collection)]
public class SampleTests(SampleRuns runs)
{
    private static readonly Dictionary<string, (int Wirings, int Currents, string[] Pairs)> Known = new()
    {
        ["bar-table"] = (1, 5, []),
        ["disc-12"] = (3, 11, []),
        ["gated-bar"] = (1, 3, []),
        ["flake"] = (1, 5, ["right", "tip"]),
        ["hall-bar"] = (1, 5, ["across 2", "along bottom"]),
        ["ring"] = (1, 7, ["along b", "a to b"]),
        ["strip"] = (1, 4, []),
    };

    public static TheoryData<string> Samples => [.. Known.Keys];

    [Fact]
    public void Every_device_file_in_the_folder_is_tested() => Assert.Equal(
        Directory.GetFiles(Repository.Sample(""), "*.toml").Select(Path.GetFileNameWithoutExtension).Order(StringComparer.Ordinal),
        Known.Keys.Order(StringComparer.Ordinal));

    [Theory]
    [MemberData(nameof(Samples))]
    public void Check_understands_it(string sample)
    {
        (int wirings, int currents, string[] pairs) = Known[sample];
        CommandResult result = Command.Run("check", Repository.Sample(sample + ".toml"), "--json");
        Assert.Equal("", result.Error);
        Assert.Equal(0, result.Exit);
        JsonElement json = JsonDocument.Parse(result.Out).RootElement;
        Assert.Equal(wirings, json.GetProperty("wirings").GetArrayLength());
        Assert.Equal(currents, json.GetProperty("currents_A").GetArrayLength());
        JsonElement named = json.GetProperty("wirings")[0].GetProperty("pairs");
        Assert.All(pairs, p => Assert.True(named.TryGetProperty(p, out _)));
    }

    [Theory]
    [MemberData(nameof(Samples))]
    public void Drive_succeeds_and_every_row_is_ok(string sample)
    {
        (int wirings, int currents, string[] pairs) = Known[sample];
        SampleRun run = runs.Of(sample);
        Assert.Equal("", run.Result.Error);
        Assert.Equal(0, run.Result.Exit);
        CsvTable curves = run.Curves;
        Assert.Equal(
            [
                "wiring", "current_A", "v_along_V", "v_along_err_V", "v_across_V", "v_across_err_V",
                "v_along_odd_V", "v_along_even_V", "v_along_even_err_V", "v_across_odd_V", "v_across_even_V", "v_across_even_err_V",
                .. pairs.SelectMany(p => new[] { $"pair_{p}_V", $"pair_{p}_err_V" }),
                "v_source_V", "v_source_err_V", "newton_steps", "status",
            ],
            curves.Header);
        Assert.Equal(wirings * currents, curves.Rows);
        for (int row = 0; row < curves.Rows; row++)
        {
            Assert.Equal("ok", curves.Text(row, "status"));
            double current = curves.Number(row, "current_A"), along = curves.Number(row, "v_along_V"), source = curves.Number(row, "v_source_V");
            Assert.Equal(Math.Sign(current), Math.Sign(along));
            Assert.Equal(Math.Sign(current), Math.Sign(source));
            Assert.True(Math.Abs(along) <= Math.Abs(source));
            Assert.True(curves.Number(row, "v_along_err_V") <= 1e-3 * Math.Abs(source));
        }
    }

    [Theory]
    [MemberData(nameof(Samples))]
    public void Drive_writes_every_file(string sample)
    {
        IReadOnlyList<string> files = TempFolder.FilesIn(runs.Of(sample).Folder);
        Assert.Contains("curves.csv", files);
        Assert.Contains("run.json", files);
        Assert.Contains("report.html", files);
        Assert.Equal(Known[sample].Wirings, files.Count(f => f.StartsWith("maps/", StringComparison.Ordinal)));
        Assert.All(files.Where(f => f.StartsWith("maps/", StringComparison.Ordinal)), f => Assert.EndsWith(".vtu", f));
        Assert.All(files, f => Assert.DoesNotContain(".part", f));
        string[] png = [.. files.Where(f => f.EndsWith(".png", StringComparison.Ordinal))], svg = [.. files.Where(f => f.EndsWith(".svg", StringComparison.Ordinal))];
        Assert.True(png.Length >= 5, $"{png.Length} pictures");
        Assert.Equal(png.Select(Stem), svg.Select(Stem));
        Assert.All(png, f => Assert.Equal([0x89, (byte)'P', (byte)'N', (byte)'G'], File.ReadAllBytes(Path.Combine(runs.Of(sample).Folder, f))[..4]));
    }

    [Theory]
    [MemberData(nameof(Samples))]
    public void The_run_record_names_the_device_by_its_bytes(string sample)
    {
        (int wirings, int currents, _) = Known[sample];
        JsonElement json = JsonDocument.Parse(File.ReadAllText(Path.Combine(runs.Of(sample).Folder, "run.json"))).RootElement;
        byte[] bytes = File.ReadAllBytes(Repository.Sample(sample + ".toml"));
        Assert.Equal(Convert.ToHexStringLower(SHA256.HashData(bytes)), json.GetProperty("device").GetProperty("sha256").GetString());
        Assert.Equal(wirings * currents, json.GetProperty("rows").GetProperty("written").GetInt32());
        Assert.True(json.GetProperty("mesh").GetProperty("unknowns").GetInt32() > 1000);
        string[] stages = [.. json.GetProperty("stages").EnumerateArray().Select(s => s.GetProperty("name").GetString()!)];
        Assert.Equal(["mesh", "factor", "estimate", "solve", "maps", "pictures"], stages);
        Assert.All(json.GetProperty("stages").EnumerateArray(), s => Assert.True(s.GetProperty("wall_s").GetDouble() >= 0));
    }

    [Fact]
    public void The_even_across_voltage_of_the_disc_grows_with_the_square_of_the_along_voltage()
    {
        // Common practice, no source: linear in the square at small drive. From 40 to 200 uA the square grows 25-fold.
        CsvTable curves = runs.Of("disc-12").Curves;
        for (int wiring = 0; wiring < 3; wiring++)
        {
            int low = (11 * wiring) + 2, high = (11 * wiring) + 10;
            double Slope(int row) => curves.Number(row, "v_across_even_V") / Math.Pow(curves.Number(row, "v_along_odd_V"), 2);
            Assert.Equal(1, Slope(low) / Slope(high), 0.05);
            double share = Math.Abs(curves.Number(high, "v_across_even_V") / curves.Number(high, "v_along_V"));
            Assert.InRange(share, 1e-3, 2e-2);
        }
    }

    [Fact]
    public void The_summary_tells_the_resistances_and_the_slope()
    {
        string text = runs.Of("disc-12").Result.Out;
        Assert.Contains("two-terminal resistance", text, StringComparison.Ordinal);
        Assert.Contains("33 rows: 33 ok", text, StringComparison.Ordinal);
        Assert.Contains("R\u00b2", text, StringComparison.Ordinal);
    }

    [Fact]
    public void The_report_needs_no_network()
    {
        string html = File.ReadAllText(Path.Combine(runs.Of("disc-12").Folder, "report.html"));
        Assert.DoesNotMatch("(src|href)=\"?(https?:|//)", html);
        Assert.Contains("Disc with twelve arms", html, StringComparison.Ordinal);
    }

    private static string Stem(string file) => file[..file.LastIndexOf('.')];
}
