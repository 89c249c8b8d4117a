using System.Diagnostics;
using System.Globalization;
using System.Text;
using FieldSolve.Bands;
using FieldSolve.Device;
using FieldSolve.Tests.DeviceTests;
using FieldSolve.Tests.EndToEndTests;
using Xunit.Abstractions;

namespace FieldSolve.Tests.MutationTests;

/// <summary>
/// Ten thousand mutated inputs, seeded: each is answered with a device or with placed faults, and no command ends otherwise than 0, 2, 3 (or 130
/// when cut short). FIELDSOLVE_MUTATIONS=200000 runs more; FIELDSOLVE_MUTATIONS_FROM=n starts at another seed.
/// </summary>
public sealed class MutatedFileTests(ITestOutputHelper log) : IDisposable
{
    private const string Outline = """
        [sheet]
        outline = { file = "named.txt", unit = "um" }
        dead_edge = "20 nm"
        [[contact]]
        name = "s"
        edge = { from = ["0 um", "0.5 um"], to = ["0 um", "1.5 um"] }
        [[contact]]
        name = "d"
        pad = { file = "named.txt", name = "flake" }

        """ + DeviceTexts.Rest;

    private static readonly string TableDevice = DeviceTexts.Bar.Replace(
        "kind = \"ohmic\"\na = \"4 mS\"\nb = \"1 mS\"", "kind = \"table\"\nfile = \"named.txt\"", StringComparison.Ordinal);

    private const string Ring = """
        { "type": "FeatureCollection", "features": [ { "type": "Feature", "properties": { "name": "flake" }, "geometry": { "type": "Polygon", "coordinates": [
          [[0,0],[10,0],[10,2],[5,2.5],[0,2],[0,0]], [[4,1],[6,1],[5,1.5],[4,1]] ] } } ] }
        """;

    private const string Wkt = "MULTIPOLYGON (((0 0, 20 0, 20 2, 0 2, 0 0), (4 1, 6 1, 5 1.5, 4 1)), ((30 0, 31 0, 31 1, 30 0)))";

    // Every second field of the sample's: a quarter of the rows.
    private static readonly string Table = string.Join('\n', File.ReadAllLines(Repository.Sample("bar-table.csv"))
        .Where(l => l.Split(',') is not [var a, var b, ..] || !(Skipped(a) || Skipped(b))));

    private const string Cones = """
        chemical_potential = "50 meV"
        temperature = "0 K"
        relaxation_time = "1 ps"
        [[cone]]
        v_a = "3e5 m/s"
        v_b = "1e5 m/s"
        tilt_a = 0.3
        gap = "20 meV"
        """;

    private static readonly string[] Samples = ["disc-12.toml", "hall-bar.toml", "ring.toml", "gated-bar.toml"];

    private static readonly int Count = Setting("FIELDSOLVE_MUTATIONS", 10_000), From = Setting("FIELDSOLVE_MUTATIONS_FROM", 0);

    private readonly string folder = Directory.CreateTempSubdirectory("mutated-").FullName;

    public void Dispose() => Directory.Delete(folder, true);

    [Fact]
    public void Reading_ends_with_a_device_or_with_placed_faults()
    {
        (string Device, string? Named, TextKind Kind, bool Bands)[] seeds =
        [
            (DeviceTexts.Disc, null, TextKind.Toml, false),
            (DeviceTexts.Bar, null, TextKind.Toml, false),
            (SmallDevice.Text, null, TextKind.Toml, false),
            .. Samples.Select(n => (File.ReadAllText(Repository.Sample(n)), (string?)null, TextKind.Toml, false)),
            (File.ReadAllText(Repository.Sample("bands/tilted-cones.toml")), null, TextKind.Toml, true),
            (Cones, null, TextKind.Toml, true),
            (Outline, Ring, TextKind.GeoJson, false),
            (Outline, Wkt, TextKind.Wkt, false),
            (TableDevice, Table, TextKind.Csv, false),
            ("[profile]\nfile = \"named.txt\"\n", File.ReadAllText(Repository.Sample("bands/measured-profile.csv")), TextKind.Csv, true),
        ];
        string named = Path.Combine(folder, "named.txt"), main = Path.Combine(folder, "d.toml");
        int good = 0;
        double slowest = 0;
        long most = 0;
        for (int k = From; k < From + Count; k++)
        {
            var mutator = new Mutator(new Random(k));
            (string device, string? other, TextKind kind, bool bands) = seeds[k % seeds.Length];
            if (other is not null)
            {
                File.WriteAllBytes(named, mutator.Mutate(other, kind));
            }

            byte[] bytes = other is null ? mutator.Mutate(device, kind) : Encoding.UTF8.GetBytes(device);
            File.WriteAllBytes(main, bytes);
            var clock = Stopwatch.StartNew();
            long before = GC.GetAllocatedBytesForCurrentThread();
            try
            {
                good += Answered(main, bands) ? 1 : 0;
            }
            catch (Exception e)
            {
                throw new InvalidOperationException(string.Create(CultureInfo.InvariantCulture, $"seed {k}: {e}\n---\n{Encoding.UTF8.GetString(File.ReadAllBytes(other is null ? main : named))}"), e);
            }

            slowest = Math.Max(slowest, clock.Elapsed.TotalSeconds);
            most = Math.Max(most, GC.GetAllocatedBytesForCurrentThread() - before);
        }

        log.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{Count} inputs, {good} still good; slowest {slowest:F2} s; most allocated {most / 1e6:F1} MB"));
        Assert.InRange(good, Count / 50, Count - (Count / 50)); // else the mutations are too wild, or too tame, to say anything
        Assert.InRange(most, 0, 500_000_000);
    }

    [Theory]
    [InlineData("drive")]
    [InlineData("turn")]
    [InlineData("lockin")]
    [InlineData("bands")]
    public async Task Solving_ends_with_a_documented_status(string command)
    {
        const int ShareSolved = 1000;
        string main = Path.Combine(folder, "d.toml"), into = Path.Combine(folder, "out");
        var counts = new SortedDictionary<int, int>();
        for (int k = From; k < From + Math.Max(4, Count / ShareSolved); k++)
        {
            var random = new Random(k);
            string seed = command == "bands" ? Cones : Solved(random, command);
            string text = k % 8 == 7 ? Encoding.UTF8.GetString(new Mutator(random).Mutate(seed, TextKind.Toml)) : new Mutator(random).Scale(seed);
            File.WriteAllText(main, text);
            using var limit = new CancellationTokenSource(TimeSpan.FromSeconds(5));
            CommandResult result;
            try
            {
                result = await CommandInside.RunAsync([command, main, "--out", into, "--no-pictures", "--json", .. command == "turn" ? (string[])["--turn-axis", "4"] : []], limit.Token);
                Assert.Contains(result.Exit, (int[])[0, 2, 3, 130]);
                Assert.DoesNotContain("NaN", result.Out, StringComparison.Ordinal);
                if (result.Exit == 2)
                {
                    Assert.Equal("", result.Out);
                    Assert.False(Directory.Exists(into));
                    Assert.All(result.ErrorLines, l => Assert.True(l.StartsWith(main + ":", StringComparison.Ordinal) || l.StartsWith("fieldsolve: ", StringComparison.Ordinal), l));
                }

                if (Directory.Exists(into))
                {
                    foreach (string file in Directory.EnumerateFiles(into, "*", SearchOption.AllDirectories))
                    {
                        Assert.DoesNotContain(".part", file, StringComparison.Ordinal);
                        Assert.False(file.EndsWith(".csv", StringComparison.Ordinal) && File.ReadAllText(file) is var t && (t.Contains("NaN", StringComparison.Ordinal) || t.Contains('∞', StringComparison.Ordinal)), file);
                    }

                    Directory.Delete(into, true);
                }
            }
            catch (Exception e)
            {
                throw new InvalidOperationException(string.Create(CultureInfo.InvariantCulture, $"{command}, seed {k}: {e}\n---\n{text}"), e);
            }

            counts[result.Exit] = counts.GetValueOrDefault(result.Exit) + 1;
        }

        log.WriteLine(command + ": " + string.Join(", ", counts.Select(c => string.Create(CultureInfo.InvariantCulture, $"{c.Value} ended with {c.Key}"))));
        Assert.True(counts.Keys.Any(e => e != 2), "every input was refused");
    }

    private static bool Skipped(string field) => field.TrimStart('-') is "25000" or "6000";

    // A coarse bar with one of the laws.
    private static string Solved(Random random, string command)
    {
        string law = random.Next(3) switch
        {
            0 => SmallDevice.Law,
            1 => "kind = \"quadratic\"\naxis = \"20 deg\"\na = \"1 mS\"\nb = \"3 mS\"\nd11 = \"1e-9 A m/V^2\"\nd12 = \"1e-9 A m/V^2\"\nfield_limit = \"100 kV/m\"",
            _ => "kind = \"saturating\"\na = \"1 mS\"\nb = \"2 mS\"\nfield_a = \"100 kV/m\"\nfield_b = \"50 kV/m\"\nsharpness = 2",
        };
        return SmallDevice.Text.ReplaceLineEndings("\n").Replace(SmallDevice.Law.ReplaceLineEndings("\n"), law, StringComparison.Ordinal)
            .Replace("steps = 4", "steps = 2", StringComparison.Ordinal)
            .Replace("both_signs = true", command == "lockin" ? "frequency = \"20 Hz\"" : "both_signs = true", StringComparison.Ordinal)
            .Replace("error = 1e-2\neven_error = 0.1", "error = 5e-2\neven_error = 0.3\nmax_unknowns = 4000", StringComparison.Ordinal);
    }

    private static bool Answered(string path, bool bands)
    {
        IReadOnlyList<Fault> faults;
        bool read;
        if (bands)
        {
            BandReading reading = BandFile.Read(path);
            (faults, read) = (reading.Faults, reading.Input is not null);
        }
        else
        {
            DeviceReading reading = DeviceFile.Read(path);
            (faults, read) = (reading.Faults, reading.Device is not null);
        }

        Assert.Equal(!read, faults.Count > 0);
        Assert.InRange(faults.Count, 0, 21);
        foreach (Fault f in faults)
        {
            Assert.True(f.Line >= 1 && f.Column >= 1, f.ToString());
            Assert.DoesNotContain(f.Message, char.IsControl);
            Assert.InRange(f.Message.Length, 8, 700);
            Assert.True(File.Exists(f.File), f.File);
        }

        return read;
    }

    private static int Setting(string name, int otherwise) =>
        int.TryParse(Environment.GetEnvironmentVariable(name), NumberStyles.None, CultureInfo.InvariantCulture, out int n) ? n : otherwise;
}
