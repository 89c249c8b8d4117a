using FieldSolve.Tests.MutationTests;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Runs that should worry their user say so, and end with 3 where a row is not ok.</summary>
public class WarningTests
{
    private static string Lockin(string from, string to) => SmallDevice.Text.ReplaceLineEndings("\n").Replace("steps = 4", "steps = 2", StringComparison.Ordinal)
        .Replace("both_signs = true", "frequency = \"20 Hz\"", StringComparison.Ordinal).Replace(from, to, StringComparison.Ordinal);

    // In a bar of 4 um 30 uA make 7500 V/m at 1 mS; with d11 = 1e-6 A m/V^2 the conductance would vanish at 500 V/m.
    [Fact]
    public async Task A_lockin_beyond_its_law_says_so()
    {
        using var folder = new TempFolder();
        string device = folder.Write("bar.toml", Lockin("kind = \"ohmic\"", "kind = \"quadratic\"\nd11 = \"1e-6 A m/V^2\"").Replace("even_error = 0.1", "even_error = 0.1\nmax_unknowns = 1500", StringComparison.Ordinal));
        CommandResult result = await CommandInside.RunAsync(["lockin", device, "--out", folder["out"], "--no-pictures"]);
        Assert.Equal(3, result.Exit);
        Assert.Contains(result.ErrorLines, l => l.Contains("warning: Wiring 'bar' leaves its law from", StringComparison.Ordinal) || l.Contains("warning: Wiring 'bar' has no solution from", StringComparison.Ordinal));
    }

    [Fact]
    public async Task A_lockin_short_of_unknowns_says_so()
    {
        using var folder = new TempFolder();
        string device = folder.Write("bar.toml", Lockin("error = 1e-2\neven_error = 0.1", "error = 1e-9\nmax_unknowns = 1500"));
        CommandResult result = await CommandInside.RunAsync(["lockin", device, "--out", folder["out"], "--no-pictures"]);
        Assert.Equal(3, result.Exit);
        Assert.Contains(result.ErrorLines, l => l.Contains("misses the wanted numerical error", StringComparison.Ordinal));
        Assert.Contains("error-above-wanted", File.ReadAllText(folder["out/harmonics.csv"]), StringComparison.Ordinal);
    }

    // Contacts of 1.5 um on a rim of 25 um, four of them, each moved by 4 um: some samples overlap.
    [Fact]
    public async Task Tolerances_wider_than_the_device_are_counted_and_said()
    {
        using var folder = new TempFolder();
        string text = ToleranceTests.Device.ReplaceLineEndings("\n").Replace("error = 1e-2\neven_error = 0.1", "error = 1e-8\nmax_unknowns = 1500", StringComparison.Ordinal)
            .Replace("[tolerance.contacts]\nposition = \"50 nm\"", "[[tolerance.layer]]\nname = \"gold\"\nwidth = \"100 nm\"\nx = \"40 nm\"\nrotation = \"0.05 deg\"\n[tolerance.contacts]\nposition = \"4 um\"", StringComparison.Ordinal);
        CommandResult result = await CommandInside.RunAsync(["tolerance", folder.Write("disc.toml", text), "--samples", "8", "--out", folder["out"], "--no-pictures"]);
        Assert.True(result.Exit is 0 or 3, result.Error);
        Assert.Contains(result.ErrorLines, l => l.Contains("make no device (contacts overlap", StringComparison.Ordinal));
        Assert.Contains(result.ErrorLines, l => l.Contains("as designed is above its wanted numerical error", StringComparison.Ordinal));
        Assert.Contains("no-device", File.ReadAllText(folder["out/samples.csv"]), StringComparison.Ordinal);
        Assert.Contains(",gold,", File.ReadAllText(folder["out/budget.csv"]), StringComparison.Ordinal);
    }

    // The data say 2 mS (FitTests); the fit may not go there, and one datum is wrong by a factor of two.
    [Fact]
    public async Task A_fit_that_cannot_be_right_says_so()
    {
        using var folder = new TempFolder();
        string device = folder.Write("bar.toml", FitTests.Device.Replace("a = { interval = true }", "a = { max = \"1.5 mS\" }", StringComparison.Ordinal));
        CommandResult bound = await CommandInside.RunAsync(["fit", device, folder.Write("data.csv", FitTests.Data), "--out", folder["out"], "--no-pictures"]);
        Assert.Contains(bound.ErrorLines, l => l.Contains("'a' ended at a bound", StringComparison.Ordinal));
        Assert.Contains(bound.ErrorLines, l => l.Contains("the model misses something, or the sigmas are too small", StringComparison.Ordinal));

        string rows = string.Concat(Enumerable.Range(1, 30).Select(k => FormattableString.Invariant($"x,along,{k},{0.8333 * k * (k == 20 ? 2 : 1):F4},{8 * k}\n")));
        string free = folder.Write("free.toml", FitTests.Device);
        CommandResult outlier = await CommandInside.RunAsync(["fit", free, folder.Write("outlier.csv", "wiring,pair,current_uA,value_mV,sigma_uV\n" + rows), "--out", folder["two"], "--no-pictures"]);
        Assert.Contains(outlier.ErrorLines, l => l.Contains("Line 21 of the data is", StringComparison.Ordinal) && l.Contains("an outlier?", StringComparison.Ordinal));
    }

    [Theory]
    [InlineData("wiring,pair,current_uA,value_mV,sigma_uV\nx,along,0,0,1\n", "All currents of the data are zero; there is nothing to fit.")]
    public async Task Data_that_say_nothing_are_refused(string data, string expected)
    {
        using var folder = new TempFolder();
        CommandResult result = await CommandInside.RunAsync(["fit", folder.Write("bar.toml", FitTests.Device), folder.Write("data.csv", data), "--out", folder["out"]]);
        Assert.Equal(2, result.Exit);
        Assert.Contains(expected, Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        Assert.False(Directory.Exists(folder["out"]));
    }
}
