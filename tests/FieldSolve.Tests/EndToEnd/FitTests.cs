using System.Text.Json;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>The commands fit and overlay in processes of their own.</summary>
[Collection(SampleRuns.Collection)]
public class FitTests
{
    internal const string Device = """
        title = "Bar to fit"
        [sheet]
        bar = { length = "30 um", width = "6 um" }
        [law]
        kind = "ohmic"
        a = "1 mS"   # along the bar
        b = "1 mS"
        [[contact]]
        name = "l"
        edge = { end = "left" }
        [[contact]]
        name = "r"
        edge = { end = "right" }
        [[point]]
        name = "p"
        at = ["-5 um", "0 um"]
        [[point]]
        name = "q"
        at = ["5 um", "0 um"]
        [[wiring]]
        name = "x"
        source = "l"
        drain = "r"
        along = ["p", "q"]
        [fit]
        a = { interval = true }
        """;

    // A uniform strip: V = I length / (a width), so that 2 mS, 6 um and 10 um make 833.3 ohm: 8.3333 mV at 10 uA.
    internal const string Data = "# made up\nwiring,pair,current_uA,value_mV,sigma_uV\nx,along,10,8.333,1\nx,along,20,16.667,1\nx,along,-20,-16.6665,1\n";

    [Fact]
    public void Fit_writes_its_files_whole_and_the_same_twice()
    {
        using var folder = new TempFolder();
        string device = folder.Write("bar.toml", Device), data = folder.Write("data.csv", Data);
        CommandResult one = Command.Run("fit", device, data, "--out", folder["one"]);
        Assert.Equal(0, one.Exit);
        Assert.Contains("results in", one.Out, StringComparison.Ordinal);
        Assert.Equal(
            [
                "fit-curves.csv", "fit.json", "fitted.toml", "pictures/device.png", "pictures/device.svg", "pictures/fit-curves.png", "pictures/fit-curves.svg", "pictures/fit-residuals.png", "pictures/fit-residuals.svg",
                "report.html", "run.json",
            ],
            TempFolder.FilesIn(folder["one"]));
        using JsonDocument json = JsonDocument.Parse(File.ReadAllText(Path.Combine(folder["one"], "fit.json")));
        JsonElement a = json.RootElement.GetProperty("parameters")[0];
        Assert.Equal("a", a.GetProperty("key").GetString());
        Assert.Equal(2e-3, a.GetProperty("value").GetDouble(), 2e-7);

        // Sigma of a/a is sigma_V/V, combined over the three rows.
        double information = (8.333e-3 * 8.333e-3) + (2 * 16.667e-3 * 16.667e-3);
        Assert.Equal(2e-3 * 1e-6 / Math.Sqrt(information), a.GetProperty("standard_error").GetDouble(), 1e-9);
        Assert.Equal(2, a.GetProperty("interval_95").GetArrayLength());
        Assert.Equal(0, Command.Run("check", Path.Combine(folder["one"], "fitted.toml")).Exit);
        Assert.Contains("a = \"0.00", File.ReadAllText(Path.Combine(folder["one"], "fitted.toml")), StringComparison.Ordinal);

        CommandResult two = Command.Run(["fit", device, data, "--out", folder["two"], "--quiet", "--no-pictures"], new Dictionary<string, string> { ["DOTNET_PROCESSOR_COUNT"] = "1" });
        Assert.Equal((0, ""), (two.Exit, two.Out));
        foreach (string name in new[] { "fit.json", "fit-curves.csv", "fitted.toml" })
        {
            Assert.Equal(File.ReadAllBytes(Path.Combine(folder["one"], name)), File.ReadAllBytes(Path.Combine(folder["two"], name)));
        }
    }

    [Theory]
    [InlineData("a = { interval = true }", "a = 3", "data.csv", "bar.toml:26:5: 'a' is a number; write true to leave it free, or a table such as { start = \"4 mS\", sigma = \"4 mS\" }")]
    [InlineData("a = { interval = true }", "d11 = true", "data.csv", "bar.toml:26:1: 'd11' is no parameter with a value of the law 'ohmic'; it has a, b, hall")]
    [InlineData("a = { interval = true }", "a = { min = \"2 mS\" }", "data.csv", "bar.toml:26:1: 'a': the fit must start between 'min' and 'max'")]
    [InlineData("[fit]\na = { interval = true }", "", "data.csv", "bar.toml:1:1: The file leaves nothing free; add a table [fit]")]
    [InlineData("title", "title", "gone.csv", "gone.csv:1:1: the file does not exist")]
    public void Wrong_input_is_named_by_place_and_nothing_is_written(string from, string to, string data, string expected)
    {
        using var folder = new TempFolder();
        Assert.Contains(from, Device, StringComparison.Ordinal);
        folder.Write("bar.toml", Device.ReplaceLineEndings("\n").Replace(from, to, StringComparison.Ordinal));
        folder.Write("data.csv", Data);
        CommandResult result = Command.Run(["fit", "bar.toml", data, "--out", "out"], null, folder.Path);
        Assert.Equal((2, ""), (result.Exit, result.Out));
        Assert.StartsWith(expected, Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        Assert.False(Directory.Exists(folder["out"]));
    }

    [Fact]
    public void Overlay_of_the_sample_finds_the_hidden_patch()
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run("overlay", Repository.Sample("fit/bar.toml"), Repository.Sample("fit/bar-map.csv"), "--out", folder["out"]);
        Assert.Equal(0, result.Exit);
        Assert.Equal(
            [
                "overlay.csv", "overlay.json", "pictures/overlay-maps.png", "pictures/overlay-maps.svg", "pictures/overlay-residual.png", "pictures/overlay-residual.svg", "report.html",
                "run.json",
            ],
            TempFolder.FilesIn(folder["out"]));
        using JsonDocument json = JsonDocument.Parse(File.ReadAllText(Path.Combine(folder["out"], "overlay.json")));
        Assert.Equal("along", json.RootElement.GetProperty("wiring").GetString());
        JsonElement worst = json.RootElement.GetProperty("beyond_noise")[0];

        // The patch that the map was made with: 5 to 7.4 um by 0.5 to 2.5 um. The gain of the probe is 1.15; without the patch in the fit it would be 1.20.
        Assert.InRange(worst.GetProperty("x_m").GetDouble(), 3e-6, 9e-6);
        Assert.InRange(worst.GetProperty("y_m").GetDouble(), -1e-6, 4e-6);
        JsonElement patch = json.RootElement.GetProperty("patch");
        Assert.InRange(patch.GetProperty("x_m").GetProperty("value").GetDouble(), 5.9e-6, 6.5e-6);
        Assert.InRange(patch.GetProperty("y_m").GetProperty("value").GetDouble(), 1.2e-6, 1.8e-6);
        Assert.Equal(1.15, json.RootElement.GetProperty("gain").GetProperty("value").GetDouble(), 0.005);
        Assert.Equal(4, json.RootElement.GetProperty("turn_deg").GetProperty("value").GetDouble(), 0.15);
    }

    [Fact]
    public void Fault_of_a_map_is_named_by_place()
    {
        using var folder = new TempFolder();
        folder.Write("map.csv", "x_um,y_um,value_mA\n1,2,3\n");
        CommandResult result = Command.Run("overlay", Repository.Sample("fit/bar.toml"), folder["map.csv"], "--out", folder["out"]);
        Assert.Equal(2, result.Exit);
        Assert.Contains("map.csv:1:11: 'value_mA': 'mA' is the unit of a current; a voltage is wanted, for example value_V", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        Assert.False(Directory.Exists(folder["out"]));
    }
}
