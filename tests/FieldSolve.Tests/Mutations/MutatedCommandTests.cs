using System.Diagnostics;
using System.Globalization;
using System.Text;
using System.Text.Json;
using System.Text.RegularExpressions;
using FieldSolve.Files;
using FieldSolve.Sessions;
using FieldSolve.Tests.EndToEndTests;
using Xunit.Abstractions;

namespace FieldSolve.Tests.MutationTests;

/// <summary>
/// Mutated inputs through whole commands, in this process: each ends with 0, 2 or 3 (130 when cut short), what went wrong is placed, nothing half-written is left.
/// FIELDSOLVE_MUTATED_COMMANDS=200000 runs more, and FIELDSOLVE_MUTATIONS_KEEP names a folder for those that fail.
/// </summary>
public sealed partial class MutatedCommandTests(ITestOutputHelper log) : IDisposable
{
    // From here on some input of every command survives.
    private const int EnoughForAll = 4000;
    private const int MostFailures = 40;
    private static readonly TimeSpan Limit = TimeSpan.FromSeconds(5), Hang = TimeSpan.FromMinutes(2);

    private readonly string folder = Directory.CreateTempSubdirectory("mutated-").FullName;

    public void Dispose() => Directory.Delete(folder, true);

    [GeneratedRegex(@"^:[1-9]\d*:[1-9]\d*: .{8}")]
    private static partial Regex PlaceAndReason();

    [Fact]
    public async Task Every_command_ends_with_a_documented_status()
    {
        IReadOnlyList<MutationSeed> seeds = await MutationSeeds.All(folder);
        var counts = new SortedDictionary<string, int>(StringComparer.Ordinal);
        var failures = new List<string>();
        (double slowest, string slow) = (0, "");
        for (int k = MutationSettings.From; k < MutationSettings.From + MutationSettings.Commands && failures.Count < MostFailures; k++)
        {
            MutationSeed seed = seeds[k % seeds.Count];
            string run = Path.Combine(folder, "run");
            Directory.CreateDirectory(run);
            var mutator = new Mutator(new Random(k));

            // Half of the device files that are solved keep their form: most of the others are refused.
            byte[] spoilt = seed.Kind == TextKind.Toml && seed.Command is not ("check" or "open") && k / seeds.Count % 2 == 0
                ? Encoding.UTF8.GetBytes(mutator.Scale(seed.Files[seed.Spoilt]))
                : mutator.Mutate(seed.Files[seed.Spoilt], seed.Kind);
            foreach ((string name, string text) in seed.Files)
            {
                Directory.CreateDirectory(Path.GetDirectoryName(Path.Combine(run, name))!);
                await File.WriteAllBytesAsync(Path.Combine(run, name), name == seed.Spoilt ? spoilt : (name.EndsWith(".vtu", StringComparison.Ordinal) ? Encoding.Latin1 : Encoding.UTF8).GetBytes(text));
            }

            var clock = Stopwatch.StartNew();
            try
            {
                int exit = await Run(seed, run);
                string kind = string.Create(CultureInfo.InvariantCulture, $"{seed.Command} {exit}");
                counts[kind] = counts.GetValueOrDefault(kind) + 1;
            }
            catch (Exception e)
            {
                string text = string.Create(CultureInfo.InvariantCulture, $"{seed.Command}, seed {k}, {seed.Spoilt}: {e}\n---\n{Encoding.UTF8.GetString(spoilt)}");
                failures.Add(text);
                if (MutationSettings.Keep is { } keep)
                {
                    await File.WriteAllTextAsync(Path.Combine(keep, string.Create(CultureInfo.InvariantCulture, $"{k}.txt")), text);
                }
            }

            (slowest, slow) = clock.Elapsed.TotalSeconds > slowest ? (clock.Elapsed.TotalSeconds, string.Create(CultureInfo.InvariantCulture, $"{seed.Command}, seed {k}")) : (slowest, slow);
            Directory.Delete(run, true);
        }

        string summary = string.Create(
            CultureInfo.InvariantCulture,
            $"{string.Join(", ", counts.Select(c => $"{c.Key}: {c.Value}"))}; slowest {slowest:F1} s ({slow}); largest memory of the process {Environment.WorkingSet / 1e6:F0} MB at the end, {Process.GetCurrentProcess().PeakWorkingSet64 / 1e6:F0} MB at most");
        log.WriteLine(summary);
        if (MutationSettings.Keep is { } into)
        {
            await File.WriteAllTextAsync(Path.Combine(into, "summary.txt"), summary + "\n");
        }

        Assert.True(failures.Count == 0, string.Join("\n=====\n", failures));
        Assert.Contains(counts.Keys, c => c.EndsWith(" 0", StringComparison.Ordinal)); // else the mutations are too wild to say anything
        foreach (string command in MutationSettings.Commands < EnoughForAll ? [] : seeds.Select(s => s.Command).Distinct())
        {
            Assert.Contains(counts.Keys, c => c == command + " 0" || c == command + " 3");
        }
    }

    private static async Task<int> Run(MutationSeed seed, string run)
    {
        string[] arguments = [seed.Command, .. seed.Arguments.Select(a => a.StartsWith('@') ? Path.Combine(run, a[1..]) : a)];
        if (seed.Command == "open" && EditSession.Open(arguments[1]).Session is not null)
        {
            return 0; // the page would be served until it is closed
        }

        string[] before = [.. TempFolder.FilesIn(run)];
        using var limit = new CancellationTokenSource(Limit);
        CommandResult result = await CommandInside.RunAsync(arguments, limit.Token).WaitAsync(Hang);
        Assert.Contains(result.Exit, limit.IsCancellationRequested ? (int[])[0, 2, 3, 130] : [0, 2, 3]);
        string[] written = [.. TempFolder.FilesIn(run).Except(before)];
        Assert.DoesNotContain(written, f => f.EndsWith(".part", StringComparison.Ordinal));
        if (result.Exit == 2)
        {
            Assert.Equal("", result.Out);
            Assert.DoesNotContain(written, f => Path.GetFileName(f) != SampleJournal.FileName);
            Assert.NotEmpty(result.ErrorLines);
            Assert.All(result.ErrorLines, line => Assert.True(
                line.StartsWith("fieldsolve: ", StringComparison.Ordinal) ? seed.Command is "tolerance" or "gather"
                    : line.StartsWith("warning: ", StringComparison.Ordinal) || seed.Files.Keys.Any(f => Path.Combine(run, f) is var path && line.StartsWith(path, StringComparison.Ordinal) && PlaceAndReason().IsMatch(line[path.Length..])),
                line));
        }
        else if (result.Exit != 130 && seed.Arguments.Contains("--json"))
        {
            JsonDocument.Parse(result.Out).Dispose();
        }

        foreach (string file in written)
        {
            Assert.False(file.EndsWith(".csv", StringComparison.Ordinal) && await File.ReadAllTextAsync(Path.Combine(run, file)) is var t && (t.Contains("NaN", StringComparison.Ordinal) || t.Contains('∞', StringComparison.Ordinal)), file);
        }

        return result.Exit;
    }
}
