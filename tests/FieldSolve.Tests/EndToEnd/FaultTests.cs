using System.Diagnostics;
using System.Globalization;
using System.Text.Json;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Kills, full disks, folders that vanish or may not be written, and unusual homes, terminals and paths: no finished file is harmed.</summary>
[Collection(SampleRuns.Collection)]
public class FaultTests
{
    /// <summary>Moments at which a run is killed.</summary>
    internal static readonly int Kills = int.TryParse(Environment.GetEnvironmentVariable("FIELDSOLVE_KILLS"), NumberStyles.None, CultureInfo.InvariantCulture, out int n) ? n : 3;

    private const string Coarse = "[mesh]\nerror = 1e-2\neven_error = 0.1\n";

    /// <summary>
    /// Kills a drive with pictures at several moments, over the results of another: every file with a proper name is whole, old or new.
    /// FIELDSOLVE_KILLS sets the number of moments; a temporary file may be left behind, and none has a name that anything reads.
    /// </summary>
    [LinuxFact]
    public void A_kill_leaves_every_file_whole()
    {
        using var folder = new TempFolder();
        string device = folder.Write("bar.toml", SmallDevice.Text);
        var clock = Stopwatch.StartNew();
        Assert.Equal(0, Command.Run("drive", device, "--out", folder["out"]).Exit);
        double whole = clock.Elapsed.TotalSeconds;
        string[] names = [.. TempFolder.FilesIn(folder["out"])];
        var random = new Random(3);
        for (int k = 0; k < Kills; k++)
        {
            using Process process = Command.Start(["drive", device, "--out", folder["out"]]);
            process.StandardOutput.Close();
            process.StandardError.Close();

            // Most writing happens towards the end.
            process.WaitForExit(TimeSpan.FromSeconds(whole * Math.Sqrt(random.NextDouble())));
            process.Kill();
            process.WaitForExit();
            IReadOnlyList<string> left = TempFolder.FilesIn(folder["out"]);
            Assert.All(left, f => Assert.True(names.Contains(f) || (Path.GetFileName(f).StartsWith('.') && f.EndsWith(".part", StringComparison.Ordinal)), f));
            Assert.All(names, name => Whole(folder["out/" + name]));
        }

        // The next run is not hindered by what was left.
        Assert.Equal(0, Command.Run("drive", device, "--out", folder["out"], "--no-pictures").Exit);
    }

    [Fact]
    public void Two_runs_into_one_folder_leave_whole_files()
    {
        using var folder = new TempFolder();
        string device = folder.Write("bar.toml", SmallDevice.Text);
        using Process one = Command.Start(["drive", device, "--out", folder["out"]]), two = Command.Start(["drive", device, "--out", folder["out"]]);
        Assert.Equal((0, 0), (Command.Finish(one).Exit, Command.Finish(two).Exit));
        Assert.DoesNotContain(folder.Files, f => f.EndsWith(".part", StringComparison.Ordinal));
        Assert.All(TempFolder.FilesIn(folder["out"]), f => Whole(folder["out/" + f]));
        Assert.Equal(0, Command.Run("drive", device, "--out", folder["alone"], "--no-pictures").Exit);
        Assert.Equal(File.ReadAllText(folder["alone/curves.csv"]), File.ReadAllText(folder["out/curves.csv"]));
    }

    [BoundUserFact]
    [System.Runtime.Versioning.UnsupportedOSPlatform("windows")]
    public void A_folder_that_may_not_be_written_is_named()
    {
        using var folder = new TempFolder();
        Directory.CreateDirectory(folder["fixed"], UnixFileMode.UserRead | UnixFileMode.UserExecute);
        CommandResult result = Command.Run("drive", folder.Write("bar.toml", SmallDevice.Text), "--out", folder["fixed"], "--no-pictures");
        Assert.Equal(2, result.Exit);
        Assert.Contains("fixed", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        File.SetUnixFileMode(folder["fixed"], UnixFileMode.UserRead | UnixFileMode.UserWrite | UnixFileMode.UserExecute);
    }

    [LinuxFact]
    public void A_place_where_no_folder_can_be_made_is_named_without_a_stack_trace()
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run("drive", folder.Write("bar.toml", SmallDevice.Text), "--out", "/proc/none", "--no-pictures");
        Assert.Equal((2, ""), (result.Exit, result.Out));
        Assert.StartsWith("fieldsolve: ", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        Assert.Contains("/proc/none", result.ErrorLines[0], StringComparison.Ordinal);
    }

    [Fact]
    public void A_folder_that_vanishes_during_the_run_is_made_again()
    {
        using var folder = new TempFolder();
        Directory.CreateDirectory(folder["out"]);
        using Process process = Command.Start(["drive", folder.Write("bar.toml", SmallDevice.Text), "--out", folder["out"], "--no-pictures"]);
        Directory.Delete(folder["out"], true);
        Assert.Equal(0, Command.Finish(process).Exit);
        Assert.Contains("out/curves.csv", folder.Files);
    }

    [Fact]
    public void An_input_that_changes_during_the_run_was_read_once()
    {
        using var folder = new TempFolder();
        string device = folder.Write("disc.toml", File.ReadAllText(Repository.Sample("disc-12.toml")).Replace("steps = 11", "steps = 3", StringComparison.Ordinal) + Coarse);
        string sha = Convert.ToHexStringLower(System.Security.Cryptography.SHA256.HashData(File.ReadAllBytes(device)));
        using Process process = Command.Start(["drive", device, "--out", folder["out"], "--no-pictures", "--maps", "none"]);
        Thread.Sleep(50);
        string other = File.ReadAllText(device).Replace("steps = 3", "steps = 5", StringComparison.Ordinal);
        File.WriteAllText(folder["new"], other);
        File.Move(folder["new"], device, overwrite: true); // as an editor saves
        CommandResult result = Command.Finish(process);
        Assert.InRange(result.Exit, 0, 3);
        using JsonDocument run = JsonDocument.Parse(File.ReadAllText(folder["out/run.json"]));
        string said = run.RootElement.GetProperty("device").GetProperty("sha256").GetString()!;
        string after = Convert.ToHexStringLower(System.Security.Cryptography.SHA256.HashData(System.Text.Encoding.UTF8.GetBytes(other)));
        Assert.Contains(said, (string[])[sha, after]);

        // The rows are those of the file whose hash stands in the record: three wirings.
        Assert.Equal(3 * (said == sha ? 3 : 5), CsvTable.Read(folder["out/curves.csv"]).Rows);
    }

    [Theory]
    [InlineData("tr_TR.UTF-8", "xterm")]
    [InlineData("de_DE.UTF-8", "dumb")]
    public void A_foreign_locale_no_home_and_a_dumb_terminal_change_nothing(string locale, string terminal)
    {
        using var folder = new TempFolder();
        string device = folder.Write("bar.toml", SmallDevice.Text);
        var odd = new Dictionary<string, string>
        {
            ["LC_ALL"] = locale,
            ["LANG"] = locale,
            ["DOTNET_SYSTEM_GLOBALIZATION_INVARIANT"] = "0",
            ["TERM"] = terminal,
            ["HOME"] = folder["no home"],
            ["XDG_DATA_HOME"] = "",
            ["XDG_CACHE_HOME"] = "",
            ["DOTNET_CLI_HOME"] = folder["no home"],
            ["FONTCONFIG_FILE"] = "/dev/null", // no fonts either
            ["FONTCONFIG_PATH"] = folder["no fonts"],
        };
        CommandResult one = Command.Run(["drive", device, "--out", folder["out"]], odd);
        CommandResult two = Command.Run(["check", device, "--json"], odd), plain = Command.Run("check", device, "--json");
        Assert.Equal((0, 0), (one.Exit, two.Exit));
        Assert.Equal(plain.Out, two.Out);
        Assert.Contains(folder.Files, f => f.EndsWith(".png", StringComparison.Ordinal));
        Assert.False(Directory.Exists(folder["no home"]));
        Assert.Contains("title", File.ReadAllText(folder["out/curves.csv"]).Length > 0 ? File.ReadAllText(folder["out/run.json"]) : "", StringComparison.Ordinal);
    }

    [Fact]
    public void A_path_of_250_characters_with_blanks_and_umlauts()
    {
        using var folder = new TempFolder();
        string deep = folder.Path;
        while (deep.Length < 250)
        {
            deep = Path.Combine(deep, "tiefer Ordner " + new string('ä', Math.Clamp(250 - deep.Length - 15, 1, 60)));
        }

        Directory.CreateDirectory(deep);
        string device = Path.Combine(deep, "gerät µ.toml");
        File.WriteAllText(device, SmallDevice.Text);
        CommandResult result = Command.Run("drive", device, "--out", Path.Combine(deep, "ergebnis ß"));
        Assert.Equal((0, ""), (result.Exit, result.Error));
        Assert.True(File.Exists(Path.Combine(deep, "ergebnis ß", "report.html")));
        File.WriteAllText(device, SmallDevice.Text.Replace("\"1 mS\"", "\"1 mA\"", StringComparison.Ordinal));
        Assert.StartsWith(device + ":", Command.Run("check", device).ErrorLines[0], StringComparison.Ordinal);
    }

    [PosixFact]
    public void A_pipe_in_place_of_a_file_does_not_block()
    {
        using var folder = new TempFolder();
        Assert.True(SmallDisk.Quietly("mkfifo", folder["pipe"]), "no pipe could be made");
        string device = folder.Write("bar.toml", SmallDevice.Text);
        foreach (string[] command in (string[][])[["check", folder["pipe"]], ["drive", device, "--mesh", folder["pipe"]], ["overlay", device, folder["pipe"]]])
        {
            CommandResult result = Command.Run(command);
            Assert.Equal((2, ""), (result.Exit, result.Out));
            Assert.StartsWith(folder["pipe"] + ":1:1: ", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
            Assert.Contains("no plain file", result.Error, StringComparison.Ordinal);
        }
    }

    // Cut short, each of these fails to be read to its end.
    internal static void Whole(string path)
    {
        byte[] bytes = File.ReadAllBytes(path);
        switch (Path.GetExtension(path))
        {
            case ".json":
                JsonDocument.Parse(bytes).Dispose();
                break;
            case ".csv":
                Assert.Equal("\r\n"u8.ToArray(), bytes[^2..]);
                break;
            case ".png": // the last chunk, IEND, is empty and has this check sum
                Assert.Equal([0x49, 0x45, 0x4E, 0x44, 0xAE, 0x42, 0x60, 0x82], bytes[^8..]);
                break;
            case ".svg":
                Assert.EndsWith("</svg>", System.Text.Encoding.UTF8.GetString(bytes).TrimEnd(), StringComparison.Ordinal);
                break;
            case ".vtu":
                Assert.EndsWith("</VTKFile>", System.Text.Encoding.UTF8.GetString(bytes[^40..]).TrimEnd(), StringComparison.Ordinal);
                break;
            default:
                Assert.EndsWith("</html>", System.Text.Encoding.UTF8.GetString(bytes).TrimEnd(), StringComparison.Ordinal);
                break;
        }
    }
}
