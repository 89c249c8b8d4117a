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
