using System.Text.RegularExpressions;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Faulty device files: status 2, one line per fault with its place, nothing written.</summary>
[Collection(SampleRuns.Collection)]
public class BadFileTests
{
    // A sound device of a few lines; each case spoils one thing in it.
    private const string Good = """
        [sheet]
        disc = { diameter = "8 um" }
        [law]
        kind = "ohmic"
        a = "4 mS"
        b = "1 mS"
        [[contacts]]
        ring = 4
        width = "0.7 um"
        prefix = "c"
        [[contact]]
        name = "w"
        edge = { at = "45 deg", width = "0.5 um" }
        [[point]]
        name = "p"
        at = ["1 um", "0 um"]
        [[wiring]]
        name = "x"
        source = "c3"
        drain = "c1"
        along = ["c3", "p"]
        across = ["c2", "c4"]
        [drive]
        current = { from = "0 uA", to = "10 uA", steps = 2 }
        [mesh]
        error = 1e-2
        """;

    // What is replaced, by what, the text whose line is to be named, what the message must say.
    public static TheoryData<string, string, string, string, string> Cases => new()
    {
        { "unknown key", "diameter = ", "diametre = ", "diametre", "did you mean 'diameter'" },
        { "unknown table", "[drive]", "[drvie]", "[drvie]", "did you mean 'drive'" },
        { "missing key", "source = \"c3\"\n", "", "[[wiring]]", "source" },
        { "missing sheet", "[sheet]\ndisc = { diameter = \"8 um\" }\n", "", "", "[sheet]" },
        { "two shapes", "[law]", "bar = { length = \"3 um\", width = \"1 um\" }\n[law]", "bar =", "one shape" },
        { "no unit", "\"8 um\"", "8", "disc =", "unit" },
        { "wrong unit", "\"8 um\"", "\"8 um2x\"", "disc =", "unit" },
        { "wrong dimension", "\"4 mS\"", "\"4 mA\"", "a = ", "sheet conductance" },
        { "unit in other case", "\"1 mS\"", "\"1 ms\"", "b = ", "time" },
        { "decimal comma", "\"0.7 um\"", "\"0,7 um\"", "width = \"0,7", "decimal point" },
        { "not finite", "\"4 mS\"", "\"nan mS\"", "a = ", "finite" },
        { "negative conductance", "\"1 mS\"", "\"-1 mS\"", "b = ", "greater than zero" },
        { "zero conductance", "\"1 mS\"", "\"0 mS\"", "b = ", "greater than zero" },
        { "unknown law", "\"ohmic\"", "\"ohmik\"", "kind", "did you mean 'ohmic'" },
        { "overlapping contacts", "at = \"45 deg\"", "at = \"2 deg\"", "edge = ", "overlap" },
        { "wider than the rim", "width = \"0.5 um\"", "width = \"30 um\"", "edge = ", "rim" },
        { "ring too wide", "\"0.7 um\"", "\"7 um\"", "ring = ", "fit" },
        { "off the edge", "{ at = \"45 deg\", width = \"0.5 um\" }", "{ from = [\"1 um\", \"1 um\"], to = [\"0 um\", \"4 um\"] }", "edge = ", "off the edge" },
        { "no end on a disc", "{ at = \"45 deg\", width = \"0.5 um\" }", "{ end = \"left\" }", "edge = ", "no ends" },
        { "pad outside", "edge = { at = \"45 deg\", width = \"0.5 um\" }", "pad = [[\"9 um\", \"0 um\"], [\"10 um\", \"0 um\"], [\"9 um\", \"1 um\"]]", "pad = ", "outside" },
        { "pad of two corners", "edge = { at = \"45 deg\", width = \"0.5 um\" }", "pad = [[\"0 um\", \"0 um\"], [\"1 um\", \"0 um\"]]", "pad = ", "three corners" },
        { "pad crosses itself", "edge = { at = \"45 deg\", width = \"0.5 um\" }", "pad = [[\"0 um\", \"0 um\"], [\"2 um\", \"2 um\"], [\"2 um\", \"0 um\"], [\"0 um\", \"1 um\"]]", "pad = ", "crosses" },
        { "tip outside", "[\"1 um\", \"0 um\"]", "[\"5 um\", \"0 um\"]", "at = [", "off the sheet" },
        { "same name twice", "name = \"p\"", "name = \"w\"", "name = \"w\"\nat", "already taken" },
        { "absent contact", "drain = \"c1\"", "drain = \"c11\"", "drain", "unknown contact 'c11'" },
        { "absent name in a pair", "[\"c2\", \"c4\"]", "[\"c2\", \"c44\"]", "across", "did you mean 'c4'" },
        { "source is drain", "drain = \"c1\"", "drain = \"c3\"", "drain", "same contact" },
        { "a tip as source", "source = \"c3\"", "source = \"p\"", "source", "draws no current" },
        { "no steps", "steps = 2", "steps = 0", "current", "steps" },
        { "half a step", "steps = 2", "steps = 2.5", "current", "whole number" },
        { "broken TOML", "[law]", "[law", "[law", "" },
        { "same key twice", "b = \"1 mS\"", "b = \"1 mS\"\nb = \"2 mS\"", "b = \"2", "b" },
        { "missing file", "disc = { diameter = \"8 um\" }", "outline = { file = \"none.wkt\", unit = \"um\" }", "outline", "does not exist" },
    };

    // An outline file and what must be said about it.
    public static TheoryData<string, string, string> Outlines => new()
    {
        { "crosses itself", "POLYGON((0 0, 4 4, 4 0, 0 3, 0 0))", "crosses" },
        { "two corners", "POLYGON((0 0, 4 4, 0 0))", "three corners" },
        { "hole outside", "POLYGON((0 0, 4 0, 4 4, 0 4, 0 0), (5 5, 6 5, 6 6, 5 5))", "outside" },
        { "not closed", "POLYGON((0 0, 4 0, 4 4, 0 4))", "closed" },
        { "no polygon", "{ \"type\": \"FeatureCollection\", \"features\": [] }", "no polygon" },
        { "no geometry at all", "hello", "WKT" },
    };

    [Fact]
    public void The_file_before_it_is_spoilt_is_good()
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run("check", folder.Write("good.toml", Good));
        Assert.Equal((0, ""), (result.Exit, result.Error));
    }

    [Theory]
    [MemberData(nameof(Cases))]
    public void A_fault_is_named_with_its_place(string name, string old, string spoilt, string at, string message)
    {
        string good = Good.ReplaceLineEndings("\n"), marker = at.ReplaceLineEndings("\n");
        string bad = good.Replace(old.ReplaceLineEndings("\n"), spoilt, StringComparison.Ordinal);
        Assert.NotEqual(good, bad);
        int line = bad[..bad.IndexOf(marker, StringComparison.Ordinal)].Count(c => c == '\n') + 1;
        Fails("drive", bad, $"{name}.toml", line, message);
    }

    [Theory]
    [MemberData(nameof(Outlines))]
    public void A_faulty_outline_is_named(string name, string outline, string message)
    {
        using var folder = new TempFolder();
        folder.Write("outline.txt", outline);
        string text = Good.Replace("disc = { diameter = \"8 um\" }", "outline = { file = \"outline.txt\", unit = \"um\" }", StringComparison.Ordinal);
        CommandResult result = Command.Run("check", folder.Write(name + ".toml", text));
        Assert.Equal((2, ""), (result.Exit, result.Out));
        Assert.All(result.ErrorLines, l => Assert.Matches(@"(\.toml|outline\.txt):\d+:\d+: ", l));
        Assert.Contains(result.ErrorLines, l => l.Contains(message, StringComparison.Ordinal));
    }

    [Fact]
    public void Every_fault_of_a_file_is_reported_in_one_go()
    {
        using var folder = new TempFolder();
        string bad = Good.Replace("\"8 um\"", "\"8 mS\"", StringComparison.Ordinal)
            .Replace("\"4 mS\"", "\"-4 mS\"", StringComparison.Ordinal)
            .Replace("steps = 2", "steps = 0", StringComparison.Ordinal)
            .Replace("error = 1e-2", "eror = 1e-2", StringComparison.Ordinal)
            .Replace("drain = \"c1\"", "drain = \"d1\"", StringComparison.Ordinal);
        CommandResult result = Command.Run("check", folder.Write("five.toml", bad));
        Assert.Equal(2, result.Exit);
        Assert.Equal(5, result.ErrorLines.Count);
        int[] lines = [.. result.ErrorLines.Select(l => int.Parse(Regex.Match(l, @"five\.toml:(\d+):\d+: ").Groups[1].Value, System.Globalization.CultureInfo.InvariantCulture))];
        Assert.Equal([2, 5, 20, 24, 26], lines);
    }

    [Fact]
    public void An_empty_file_is_refused() => Fails("drive", "", "empty.toml", 1, "");

    [Fact]
    public void A_file_without_a_drive_checks_but_does_not_drive()
    {
        using var folder = new TempFolder();
        string text = Good.ReplaceLineEndings("\n").Replace("[drive]\ncurrent = { from = \"0 uA\", to = \"10 uA\", steps = 2 }\n", "", StringComparison.Ordinal);
        string device = folder.Write("idle.toml", text);
        Assert.Equal(0, Command.Run("check", device).Exit);
        CommandResult result = Command.Run("drive", device, "--out", folder["out"]);
        Assert.Equal(2, result.Exit);
        Assert.Contains("[drive]", Assert.Single(result.ErrorLines), StringComparison.Ordinal);
        Assert.False(Directory.Exists(folder["out"]));
    }

    [Fact]
    public void A_file_that_is_missing_or_a_folder_is_refused()
    {
        using var folder = new TempFolder();
        foreach (string path in (string[])[folder["none.toml"], folder.Path])
        {
            CommandResult result = Command.Run("check", path);
            Assert.Equal((2, ""), (result.Exit, result.Out));
            Assert.Matches(@":1:1: ", Assert.Single(result.ErrorLines));
        }
    }

    [Fact]
    public void Ten_megabytes_of_noise_are_refused_quickly()
    {
        using var folder = new TempFolder();
        byte[] noise = new byte[10_000_000];
        new Random(7).NextBytes(noise);
        File.WriteAllBytes(folder["noise.toml"], noise);
        CommandResult result = Command.Run("drive", folder["noise.toml"], "--out", folder["out"]);
        Assert.Equal((2, ""), (result.Exit, result.Out));
        Assert.InRange(result.ErrorLines.Count, 1, 30);
        Assert.All(result.ErrorLines, l => Assert.Matches(@"noise\.toml:\d+:\d+: ", l));
        Assert.All(result.ErrorLines, l => Assert.InRange(l.Length, 1, 600));
        Assert.False(Directory.Exists(folder["out"]));

        // The same as text: every line a fault, few of them shown.
        File.WriteAllText(folder["noise.toml"], string.Concat(Enumerable.Range(0, 400_000).Select(k => $"k{k} = [[{{ \"x\"\n")));
        result = Command.Run("check", folder["noise.toml"]);
        Assert.Equal((2, ""), (result.Exit, result.Out));
        Assert.InRange(result.ErrorLines.Count, 1, 30);
    }

    private static void Fails(string command, string text, string name, int line, string message)
    {
        using var folder = new TempFolder();
        CommandResult result = Command.Run(command, folder.Write(name, text), "--out", folder["out"]);
        Assert.Equal((2, ""), (result.Exit, result.Out));
        Assert.All(result.ErrorLines, l => Assert.Matches($@"^{Regex.Escape(folder[name])}:\d+:\d+: \S", l));
        Assert.Contains(result.ErrorLines, l => l.StartsWith($"{folder[name]}:{line}:", StringComparison.Ordinal) && l.Contains(message, StringComparison.Ordinal));
        Assert.Equal([name], folder.Files);
    }
}
