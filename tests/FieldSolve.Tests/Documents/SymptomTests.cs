using System.Text.RegularExpressions;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.DocumentsTests;

/// <summary>Whoever meets a message of the program finds it in meshes/symptoms.md.</summary>
public sealed partial class SymptomTests
{
    private static readonly string Page = File.ReadAllText(Repository.Sample("symptoms.md")).ReplaceLineEndings("\n");

    /// <summary>Files whose longer texts are cautions and warnings; a further one is a line here.</summary>
    private static readonly string[] Speakers =
    [
        "FieldSolve/Readings/Cautions.cs", "FieldSolve/Runs/DriveWarnings.cs", "FieldSolve/Runs/VoltageScale.cs", "FieldSolve/Device/NarrowStrips.cs", "FieldSolve/Lockin/LockinWarnings.cs", "FieldSolve/Runs/Tolerance/ToleranceWarnings.cs",
        "FieldSolve/Runs/Fit/FitWarnings.cs", "FieldSolve/Runs/BandsRun.cs", "FieldSolve/Runs/Overlay/OverlayRun.cs", "FieldSolve/Turning/TurnRun.cs",
        "FieldSolve.Cli/Commands/RunManners.cs", "FieldSolve.Cli/Commands/MeshCommand.cs", "FieldSolve.Cli/Commands/OpenCommand.cs",
    ];

    private static IEnumerable<string> Messages(string speaker) => File.ReadAllLines(Path.Combine(Repository.Root, "src", speaker))
        .Where(line => Sentence().IsMatch(line) && !NoMessage().IsMatch(line));

    private static string[] Phrases(string heading) =>
    [
        .. Page.Split(heading)[1].Split("\n## ")[0].Split('\n').Where(l => l.StartsWith("| \"", StringComparison.Ordinal)).Select(l => Quoted().Match(l).Groups[1].Value),
    ];

    [Fact]
    public void Every_caution_and_warning_is_explained()
    {
        string[] phrases = Phrases("## What the program says");
        Assert.All(Speakers, speaker => Assert.NotEmpty(Messages(speaker)));
        Assert.DoesNotContain(Speakers.SelectMany(Messages), line => !phrases.Any(p => line.Contains(p, StringComparison.Ordinal)));
    }

    // The other way round: what is explained is still said.
    [Theory]
    [InlineData("## What the program says")]
    [InlineData("## The file is refused")]
    public void Every_quoted_message_is_one_of_the_program(string heading)
    {
        string source = string.Concat(Directory.GetFiles(Path.Combine(Repository.Root, "src"), "*.cs", SearchOption.AllDirectories)
            .Where(f => !f.Contains("/obj/", StringComparison.Ordinal) && !f.Contains("\\obj\\", StringComparison.Ordinal)).Select(File.ReadAllText));
        string[] phrases = Phrases(heading);
        Assert.True(phrases.Length > 5);
        Assert.DoesNotContain(phrases, p => !source.Contains(p, StringComparison.Ordinal));
    }

    // No warnings are collected anywhere else.
    [Fact]
    public void Every_file_that_collects_warnings_is_looked_at()
    {
        string root = Path.Combine(Repository.Root, "src");
        IEnumerable<string> collectors = Directory.GetFiles(root, "*.cs", SearchOption.AllDirectories)
            .Where(f => Collects().IsMatch(File.ReadAllText(f))).Select(f => Path.GetRelativePath(root, f).Replace('\\', '/')).Where(f => !f.Contains("/obj/", StringComparison.Ordinal));
        Assert.Subset(Speakers.ToHashSet(), collectors.ToHashSet());
    }

    [Theory]
    [InlineData("outside-law")]
    [InlineData("not-converged")]
    [InlineData("error-above-wanted")]
    [InlineData("no-device")]
    public void Every_status_is_explained(string status) => Assert.Contains($"| `{status}`", Page, StringComparison.Ordinal);

    // A literal of a sentence's length that ends like one.
    [GeneratedRegex(@"""[^""]{25,}.*[.?]""[\])},;: ]*$")]
    private static partial Regex Sentence();

    [GeneratedRegex(@"///|throw |Description|private const string Defer|""A page on this machine|""The page answers|contacts, axis, law and drive are changed|--out '|""The mesh alone|Progress|The file has no")]
    private static partial Regex NoMessage();

    [GeneratedRegex(@"""([^""]+)""")]
    private static partial Regex Quoted();

    [GeneratedRegex(@"warnings\.Add\(""|warnings\.Add\(\$""|[""]warning: [a-z]")]
    private static partial Regex Collects();
}
