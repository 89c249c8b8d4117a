using System.CommandLine;
using System.Reflection;
using System.Text.RegularExpressions;
using FieldSolve.Cli.Commands;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>What help, completion and the README say of the commands is so.</summary>
public sealed partial class HelpTests
{
    private static readonly string Readme = File.ReadAllText(Path.Combine(Repository.Root, "README.md")).ReplaceLineEndings("\n");

    public static TheoryData<string> Commands => [.. CommandList.All().Select(c => c.Name)];

    private static System.CommandLine.Command Of(string name) => CommandList.All().Single(c => c.Name == name);

    // An example that is not understood, or that names a file which is not there, is worse than none.
    [Theory]
    [MemberData(nameof(Commands))]
    public async Task Help_has_an_example_that_can_be_typed(string name)
    {
        CommandResult help = await MutationTests.CommandInside.RunAsync([name, "--help"]);
        Assert.Equal((0, ""), (help.Exit, help.Error));
        string example = ExampleLine().Match(Of(name).Description!).Groups[1].Value;
        Assert.Contains("Example: fieldsolve " + name + " ", help.Out, StringComparison.Ordinal);
        var root = new RootCommand();
        foreach (System.CommandLine.Command command in CommandList.All())
        {
            root.Add(command);
        }

        Assert.Empty(root.Parse(example).Errors);
        Assert.All(SampleName().Matches(example).Select(m => m.Value), file => Assert.True(File.Exists(Path.Combine(Repository.Root, file)), file));
    }

    [Fact]
    public void An_unknown_command_is_said_once_with_those_that_there_are()
    {
        CommandResult result = Command.Run("dirve", "disc.toml", "--out", "x");
        Assert.Equal((2, ""), (result.Exit, result.Out));
        Assert.StartsWith("fieldsolve: there is no command 'dirve'; there are check, ", result.ErrorLines[0], StringComparison.Ordinal);
        Assert.Equal(2, result.ErrorLines.Count); // and where help is
    }

    [Theory]
    [MemberData(nameof(Commands))]
    public void Help_and_readme_know_every_option(string name)
    {
        System.CommandLine.Command command = Of(name);
        Assert.All(command.Options, o => Assert.False(string.IsNullOrWhiteSpace(o.Description), o.Name));
        Assert.All(command.Arguments, a => Assert.False(string.IsNullOrWhiteSpace(a.Description), a.Name));
        Assert.Contains($"    fieldsolve {name} ", Readme, StringComparison.Ordinal);
        Assert.All(command.Options.Where(o => o.Name is not ("--help" or "-h" or "--version")), o => Assert.Contains(o.Name, Readme, StringComparison.Ordinal));
    }

    [Theory]
    [InlineData("fieldsolve d", "drive")]
    [InlineData("fieldsolve tol", "tolerance")]
    [InlineData("fieldsolve drive x.toml --ma", "--maps")]
    [InlineData("fieldsolve drive x.toml --maps n", "none")]
    public void Completion_offers_what_can_stand_there(string typed, string offered)
    {
        CommandResult result = Command.Run($"[suggest:{typed.Length}]", typed);
        Assert.Equal((0, ""), (result.Exit, result.Error));
        Assert.Contains(offered, result.Out.Split('\n').Select(l => l.Trim()));
        Assert.DoesNotContain("gather", result.Out, StringComparison.Ordinal);
    }

    // Each status has a test of its own: 0 and 3 in LawEndTests, 2 in BadFileTests, 130 in SurroundingsTests.
    [Fact]
    public void The_readme_lists_the_exit_statuses()
    {
        string section = Readme.Split("## Exit status")[1].Split("\n## ")[0];
        IEnumerable<int> listed = StatusRow().Matches(section).Select(m => int.Parse(m.Groups[1].Value, System.Globalization.CultureInfo.InvariantCulture));
        IEnumerable<int> known = typeof(ExitCode).GetFields(BindingFlags.Public | BindingFlags.Static).Select(f => (int)f.GetRawConstantValue()!);
        Assert.Equal(known.Order(), listed.Order());
    }

    [GeneratedRegex(@"Example: fieldsolve (.+)$")]
    private static partial Regex ExampleLine();

    [GeneratedRegex(@"meshes/[\w/.-]+")]
    private static partial Regex SampleName();

    [GeneratedRegex(@"^\| (\d+) \|", RegexOptions.Multiline)]
    private static partial Regex StatusRow();
}
