using System.Diagnostics;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Interrupts, closed pipes, locales, folders that cannot be written.</summary>
[Collection(SampleRuns.Collection)]
public class SurroundingsTests
{
    // A thousand and more currents of disc-12, coarsely: rows come early, the end comes late.
    private static readonly string Long = File.ReadAllText(Repository.Sample("disc-12.toml")).Replace("steps = 11", "steps = 4001", StringComparison.Ordinal) + Coarse;

    private const string Coarse = "[mesh]\nerror = 1e-2\neven_error = 0.1\n";

    [LinuxFact]
    public void An_interrupt_at_the_start_ends_with_130_and_leaves_no_part_of_a_file()
    {
        using var folder = new TempFolder();
        CommandResult result = Interrupted(folder, seconds: 0.4);
        Assert.Equal(130, result.Exit);

        // On a machine under load the interrupt comes before the program listens, and then nothing is said.
        Assert.True((result.Out + result.Error).Trim() is "" || (result.Out + result.Error).Contains("cancelled", StringComparison.Ordinal), result.Error);
        Assert.All(folder.Files, f => Assert.Contains(f, (string[])["long.toml", "out/curves.csv", "out/run.json"]));
    }

    [LinuxFact]
    public void An_interrupt_on_the_way_keeps_the_finished_rows()
    {
        using var folder = new TempFolder();
        CsvTable? curves = null;
        for (double seconds = 2; curves is not { Rows: > 0 }; seconds *= 2)
        {
            // A machine under load may not have finished a row by then: the file holds its heading alone, or is not there yet.
            Assert.InRange(seconds, 0, 40);
            Assert.Equal(130, Interrupted(folder, seconds).Exit);
            curves = File.Exists(folder["out/curves.csv"]) ? CsvTable.Read(folder["out/curves.csv"]) : null;
        }

        Assert.InRange(curves.Rows, 1, (3 * 4001) - 1);
        Assert.All(Enumerable.Range(0, curves.Rows), row => Assert.NotEqual("", curves.Text(row, "v_along_V")));
        Assert.Contains("\"cancelled\": true", File.ReadAllText(folder["out/run.json"]), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("blocked")]
    [InlineData("blocked/out")]
    [InlineData("")]
    public void An_output_folder_that_cannot_be_made_is_named_before_the_solve(string name)
    {
        using var folder = new TempFolder();
        folder.Write("blocked", "a file, not a folder");
        CommandResult result = Command.Run(
            "drive", folder.Write("bar.toml", SmallDevice.Text), "--out", name.Length == 0 ? "" : folder[name], "--no-pictures");
        Assert.Equal(2, result.Exit);
        Assert.StartsWith("fieldsolve: --out", result.ErrorLines[0], StringComparison.Ordinal);
        Assert.Contains("name a folder", result.ErrorLines[0], StringComparison.Ordinal);
        Assert.DoesNotContain("   at ", result.Error, StringComparison.Ordinal);
    }

    [PosixTheory]
    [InlineData(">&-")]
    [InlineData("| true")]
    public void A_closed_standard_output_is_no_fault(string closed)
    {
        using var folder = new TempFolder();
        string device = folder.Write("bar.toml", SmallDevice.Text);
        var start = new ProcessStartInfo("sh", ["-c", $"(dotnet \"$0\" drive \"$1\" --out \"$2\" --no-pictures; echo $? >&2) {closed}", Command.Assembly, device, folder["out"]])
        {
            RedirectStandardError = true,
            RedirectStandardOutput = true,
        };
        using Process process = Process.Start(start)!;
        CommandResult result = Command.Finish(process);
        Assert.Equal("0", result.Error.Trim());
        Assert.True(File.Exists(folder["out/curves.csv"]));
    }

    [Fact]
    public void A_locale_with_decimal_commas_changes_no_byte()
    {
        using var folder = new TempFolder();
        string device = folder.Write("bar.toml", SmallDevice.Text);
        var german = new Dictionary<string, string> { ["LC_ALL"] = "de_DE.UTF-8", ["LANG"] = "de_DE.UTF-8", ["DOTNET_SYSTEM_GLOBALIZATION_INVARIANT"] = "0" };
        CommandResult one = Command.Run(["drive", device, "--out", folder["one"], "--no-pictures"], german);
        CommandResult two = Command.Run(["drive", device, "--out", folder["two"], "--no-pictures"], null);
        Assert.Equal((0, 0), (one.Exit, two.Exit));
        Assert.Equal(two.Out.Replace(folder["two"], "", StringComparison.Ordinal), one.Out.Replace(folder["one"], "", StringComparison.Ordinal));
        Same(folder["one"], folder["two"]);
    }

    [Fact]
    public void Two_runs_give_the_same_bytes_on_any_number_of_processors_with_any_vectors()
    {
        using var folder = new TempFolder();

        // Two wirings are enough for work side by side, and each costs its pictures twice.
        string sample = File.ReadAllText(Repository.Sample("disc-12.toml"));
        string text = sample.Remove(sample.LastIndexOf("[[wiring]]", StringComparison.Ordinal), sample.IndexOf("[turn]", StringComparison.Ordinal) - sample.LastIndexOf("[[wiring]]", StringComparison.Ordinal))
            .Replace("steps = 11", "steps = 2", StringComparison.Ordinal);
        string device = folder.Write("disc.toml", text + Coarse), bar = folder.Write("bar.toml", MutationTests.MutationSeeds.Small(1).Replace("error = 5e-2\neven_error = 0.3\nmax_unknowns = 4000", "error = 1e-3", StringComparison.Ordinal));
        CommandResult all = Command.Run("drive", device, "--out", folder["all"]);
        CommandResult one = Command.Run(["drive", device, "--out", folder["one"]], new Dictionary<string, string> { ["DOTNET_PROCESSOR_COUNT"] = "1" });
        Assert.Equal((0, 0), (all.Exit, one.Exit));
        Same(folder["all"], folder["one"]);

        // Neither the width of the vectors nor fused operations show: with 256 bits, and with no such instructions at all.
        string[] curves = [.. ((string[])["DOTNET_None", "DOTNET_EnableAVX512", "DOTNET_EnableHWIntrinsic"]).Select(without =>
        {
            CommandResult plain = Command.Run(["drive", bar, "--out", folder[without], "--no-pictures", "--maps", "none"], new Dictionary<string, string> { [without] = "0" });
            Assert.True(plain.Exit == 0, plain.Error);
            return File.ReadAllText(folder[without + "/curves.csv"]);
        })];
        Assert.Equal(curves[0], curves[1]);
        Assert.Equal(curves[0], curves[2]);
        Assert.Contains(TempFolder.FilesIn(folder["all"]), f => f.EndsWith(".png", StringComparison.Ordinal));
    }

    [Fact]
    public void The_default_folder_is_named_after_the_device_and_the_command()
    {
        using var folder = new TempFolder();
        folder.Write("bar.toml", SmallDevice.Text);
        CommandResult result = Command.Run(["drive", "bar.toml", "--no-pictures", "--maps", "none"], null, folder.Path);
        Assert.Equal(0, result.Exit);
        Assert.Equal(["bar-drive/curves.csv", "bar-drive/run.json", "bar.toml"], folder.Files);
    }

    [Theory]
    [InlineData("--help")]
    [InlineData("check", "--help")]
    [InlineData("drive", "--help")]
    public void Help_shows_an_example(params string[] arguments)
    {
        CommandResult result = Command.Run(arguments);
        Assert.Equal((0, ""), (result.Exit, result.Error));
        Assert.Contains("Example: fieldsolve ", result.Out, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("drvie", "disc.toml")]
    [InlineData("drive")]
    [InlineData("drive", "disc.toml", "--maps", "some")]
    [InlineData("drive", "disc.toml", "--otu", "x")]
    public void Wrong_arguments_end_with_2(params string[] arguments)
    {
        CommandResult result = Command.Run(arguments);
        Assert.Equal((2, ""), (result.Exit, result.Out));
        Assert.NotEmpty(result.ErrorLines);
    }

    private static CommandResult Interrupted(TempFolder folder, double seconds)
    {
        using Process process = Command.Start(["drive", folder.Write("long.toml", Long), "--out", folder["out"], "--no-pictures", "--maps", "none"]);
        Thread.Sleep(TimeSpan.FromSeconds(seconds));
        using Process kill = Process.Start("kill", ["-INT", process.Id.ToString(System.Globalization.CultureInfo.InvariantCulture)]);
        kill.WaitForExit();
        return Command.Finish(process);
    }

    // The wall times in run.json differ, and the paths in it; nothing else.
    private static void Same(string one, string two)
    {
        IReadOnlyList<string> files = TempFolder.FilesIn(one);
        Assert.Equal(files, TempFolder.FilesIn(two));
        foreach (string file in files)
        {
            if (file is "run.json" or "report.html")
            {
                Assert.Equal(WithoutTimes(Path.Combine(one, file)), WithoutTimes(Path.Combine(two, file)));
            }
            else
            {
                Assert.True(File.ReadAllBytes(Path.Combine(one, file)).AsSpan().SequenceEqual(File.ReadAllBytes(Path.Combine(two, file))), file);
            }
        }
    }

    private static string WithoutTimes(string path) => System.Text.RegularExpressions.Regex.Replace(
        File.ReadAllText(path), "(\"wall_s\": |<td class=\"seconds\">)[-+0-9.eE]+", "$1?");
}
