using System.Text.Json;
using System.Text.RegularExpressions;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.ArchitectureTests;

/// <summary>Notices for everything shipped, and reasons for every warning that is switched off.</summary>
public sealed partial class HouseKeepingTests
{
    private static readonly string Notices = File.ReadAllText(Path.Combine(Repository.Root, "THIRD-PARTY-NOTICES.md")).ReplaceLineEndings("\n");

    private static readonly string[] Tops = ["src", "tests", "benchmarks"];

    private static IEnumerable<string> Files(params string[] patterns) => Tops
        .SelectMany(top => patterns.SelectMany(p => Directory.GetFiles(Path.Combine(Repository.Root, top), p, SearchOption.AllDirectories)))
        .Concat(patterns.SelectMany(p => Directory.GetFiles(Repository.Root, p)))
        .Where(f => !Built().IsMatch(Path.GetRelativePath(Repository.Root, f)));

    // What the command needs to run is what the tool's package carries.
    [Fact]
    public void Every_shipped_package_has_its_notice_with_its_version()
    {
        using JsonDocument file = JsonDocument.Parse(File.ReadAllText(Path.Combine(AppContext.BaseDirectory, "FieldSolve.Cli.deps.json")));
        string[] packages = [.. file.RootElement.GetProperty("libraries").EnumerateObject().Where(l => l.Value.GetProperty("type").GetString() == "package").Select(l => l.Name)];
        Assert.Contains(packages, p => p.StartsWith("Tomlyn/", StringComparison.Ordinal));
        Assert.All(packages, package =>
        {
            string[] parts = package.Split('/');
            Assert.True(NoticeRow().Matches(Notices).Any(row => Covers(row.Groups[1].Value, parts[0]) && row.Groups[2].Value == parts[1]), package);
        });
    }

    // "SkiaSharp with its native parts" stands for SkiaSharp.NativeAssets.Linux.NoDependencies as well.
    private static bool Covers(string work, string package) =>
        work == package || (work.Split(' ')[0] is var first && work != first && (package == first || package.StartsWith(first + ".", StringComparison.Ordinal)));

    [Fact]
    public void Every_package_named_by_the_sources_and_every_embedded_file_has_its_notice()
    {
        string versions = File.ReadAllText(Path.Combine(Repository.Root, "Directory.Packages.props"));
        Assert.All(PackageName().Matches(versions).Select(m => m.Groups[1].Value), package => Assert.True(
            package.Split('.').Where(p => p.Length > 3).Append(package).Any(p => Notices.Contains(p + " (", StringComparison.Ordinal) || Notices.Contains($"| {p} |", StringComparison.Ordinal)), package));
        Assert.All(
            Directory.GetFiles(Path.Combine(Repository.Root, "src", "FieldSolve.Pictures", "Fonts"), "*.ttf"),
            font => Assert.Contains("LICENCE-" + Path.GetFileNameWithoutExtension(font) + ".txt", Notices, StringComparison.Ordinal));

        // Scripts of others would carry their licence in their head; ours do not.
        Assert.All(Directory.GetFiles(Path.Combine(Repository.Root, "src", "FieldSolve.Pictures", "Page")), f => Assert.DoesNotContain("copyright", File.ReadAllText(f), StringComparison.OrdinalIgnoreCase));
    }

    // An analyser may only be silenced where the line says why.
    [Fact]
    public void No_warning_is_switched_off_without_a_reason_on_its_line()
    {
        string[] files = [.. Files("*.cs", "*.csproj", "*.props", "*.targets", ".editorconfig", ".globalconfig")];
        Assert.Contains(files, f => Path.GetFileName(f) == ".editorconfig");
        Assert.DoesNotContain(
            files.SelectMany(f => File.ReadAllLines(f).Select((text, k) => (File: Path.GetRelativePath(Repository.Root, f), Line: k + 1, Text: text))),
            l => Silenced().IsMatch(l.Text) && !Reason().IsMatch(l.Text));
    }

    [GeneratedRegex(@"(^|[\\/])(bin|obj)[\\/]")]
    private static partial Regex Built();

    [GeneratedRegex(@"^\| ([\w.]+(?: with [\w ]+)?) \| ([\d.]+) \|", RegexOptions.Multiline)]
    private static partial Regex NoticeRow();

    [GeneratedRegex(@"PackageVersion Include=""([^""]+)""")]
    private static partial Regex PackageName();

    [GeneratedRegex(@"#pragma\s+warning\s+disable|\[(assembly: ?|module: ?)?(Unconditional)?SuppressMessage|<NoWarn[>]|<WarningsNotAsErrors[>]|severity\s*=\s*(none|silent)|#nullable\s+disable|<Nullable[>]disable")]
    private static partial Regex Silenced();

    [GeneratedRegex(@"//\s*\w{2,} \w|#\s+\w{2,} \w|<!--\s*\w{2,} \w|Justification\s*=\s*""\w{2,} \w")]
    private static partial Regex Reason();
}
