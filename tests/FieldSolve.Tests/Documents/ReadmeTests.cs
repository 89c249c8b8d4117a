using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.DocumentsTests;

/// <summary>What the README shows is what the program does.</summary>
public class ReadmeTests
{
    private static readonly string Readme = File.ReadAllText(Path.Combine(Repository.Root, "README.md"));

    [Fact]
    public void The_library_example_stands_in_the_readme_as_it_is_compiled()
    {
        string source = File.ReadAllText(Path.Combine(Repository.Root, "tests", "FieldSolve.Tests", "Documents", "ReadmeExample.cs"));
        string[] lines = [.. source.ReplaceLineEndings("\n").Split("// begin\n")[1].Split("// end")[0].Split('\n').Select(l => l.Length > 8 ? l[8..] : l.Trim())];
        string example = string.Join('\n', lines).Trim().Replace("Read(path)", "Read(\"meshes/disc-12.toml\")", StringComparison.Ordinal);
        Assert.Contains("DriveRun.Execute", example, StringComparison.Ordinal);
        Assert.Contains(example, Readme.ReplaceLineEndings("\n"), StringComparison.Ordinal);
    }

    [Fact]
    public void The_library_example_reads_a_voltage()
    {
        using var folder = new TempFolder();
        string coarse = File.ReadAllText(Repository.Sample("disc-12.toml")).Replace("steps = 11", "steps = 2", StringComparison.Ordinal)
            + "[mesh]\nerror = 1e-2\neven_error = 0.1\n";
        CurveRow row = ReadmeExample.Run(folder.Write("disc-12.toml", coarse));
        Assert.Equal(RowStatus.Ok, row.Status);
        Assert.NotEqual(0, row.Of("across")!.Value);
    }

    [Fact]
    public void The_law_of_the_readme_stands_there_as_it_is_compiled()
    {
        string source = File.ReadAllText(Path.Combine(Repository.Root, "tests", "FieldSolve.Tests", "Documents", "ReadmeLaw.cs"));
        string example = source.ReplaceLineEndings("\n").Split("// begin\n")[1].Split("// end")[0].Trim();
        Assert.Contains("ISheetLaw", example, StringComparison.Ordinal);
        Assert.Contains(example, Readme.ReplaceLineEndings("\n"), StringComparison.Ordinal);
    }

    // In a bar between full ends the field is the same everywhere: I = w s E (1 + E²/F²), V = E l.
    [Fact]
    public void The_law_of_the_readme_is_solved()
    {
        const double S = 1e-3, F = 2e3, Field = 3e3, Length = 12e-6, Width = 4e-6;
        double current = Width * S * Field * (1 + (Field * Field / (F * F)));
        string text = SmallDevice.Text.Replace("from = \"0 uA\"", FormattableString.Invariant($"from = \"{-current:R} A\""), StringComparison.Ordinal)
            .Replace("to = \"30 uA\"", FormattableString.Invariant($"to = \"{current:R} A\""), StringComparison.Ordinal);

        // Contacts on the sides would short-circuit a piece of the edge.
        string[] blocks = text.ReplaceLineEndings("\n").Split("\n\n");
        string bare = string.Join("\n\n", blocks.Where(b => !b.Contains("\"top 1\"\nedge", StringComparison.Ordinal) && !b.Contains("\"top 2\"\nedge", StringComparison.Ordinal) && !b.Contains("\"bottom 1\"\nedge", StringComparison.Ordinal)))
            .Replace("along = [\"top 1\", \"top 2\"]\nacross = [\"top 1\", \"bottom 1\"]\n", "along = [\"left\", \"right\"]\n", StringComparison.Ordinal);
        SheetDevice device = DeviceTests.DeviceTexts.Good(bare) with { Law = new RisingLaw(S, F), Axis = 0.4 };
        DriveResult result = DriveRun.Execute(device, new DriveOptions { Maps = MapChoice.None, ForPictures = false }, null, CancellationToken.None);
        Reading along = result.Rows[^1].Of("along")!;
        Assert.Equal(Field * Length, along.Value, Math.Max(along.Error, 1e-9 * Field * Length));
        Assert.Equal(RowStatus.Ok, result.Rows[^1].Status);
    }

    [Fact]
    public void Links_and_the_picture_exist() => Assert.All(
        System.Text.RegularExpressions.Regex.Matches(Readme, @"\]\(([^)#:]+)\)").Select(m => m.Groups[1].Value),
        link => Assert.True(Path.Exists(Path.Combine(Repository.Root, link)), link));

    [Fact]
    public void The_device_of_the_readme_is_a_good_one()
    {
        string[] lines = Readme.ReplaceLineEndings("\n").Split("## The device file by example")[1].Split("Every key")[0].Split('\n');
        using var folder = new TempFolder();
        DeviceReading reading = DeviceFile.Read(folder.Write("readme.toml", string.Join('\n', lines.Select(l => l.Length > 4 ? l[4..] : ""))));
        Assert.Empty(reading.Faults);
        Assert.Equal(12, reading.Device!.Contacts.Count);
    }
}
