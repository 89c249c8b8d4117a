using System.Diagnostics;
using System.Globalization;
using System.Text;
using System.Text.Json;
using FieldSolve.Bands;
using FieldSolve.Cli.Open;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Measured;
using FieldSolve.Meshing;
using FieldSolve.Sessions;
using FieldSolve.Tests.DeviceTests;
using FieldSolve.Tests.EndToEndTests;
using Xunit.Abstractions;

namespace FieldSolve.Tests.MutationTests;

/// <summary>
/// Ten thousand mutated inputs, seeded, for everything that is read: each is answered with what was read or with placed faults. FIELDSOLVE_MUTATIONS=n reads more;
/// FIELDSOLVE_MUTATIONS_FROM=n starts at another seed.
/// </summary>
public sealed class MutatedFileTests(ITestOutputHelper log) : IDisposable
{
    private const int MostFailures = 20;

    private static readonly string[] Samples = ["disc-12.toml", "hall-bar.toml", "ring.toml", "gated-bar.toml", "flake.toml"];

    private readonly string folder = Directory.CreateTempSubdirectory("mutated-").FullName;

    // What is read: a good text to spoil, the file beside it that names it, and the reader.
    private sealed record Reading(string Good, TextKind Kind, Func<string, (bool Read, IReadOnlyList<Fault> Faults)> Answer, string? Beside = null);

    public void Dispose() => Directory.Delete(folder, true);

    [Fact]
    public async Task Reading_ends_with_what_was_read_or_with_placed_faults()
    {
        string main = Path.Combine(folder, "d.toml"), grid = Path.Combine(folder, "good.vtu");
        await File.WriteAllTextAsync(main, MutationSeeds.Small(0));
        SheetDevice bar = DeviceFile.Read(main).Device!;
        Assert.Equal(0, (await CommandInside.RunAsync(["mesh", main, "--out", grid])).Exit);
        string journal = (await MutationSeeds.All(folder)).First(s => s.Kind == TextKind.Journal) is { } seed ? seed.Files[seed.Spoilt] : "";
        (bool, IReadOnlyList<Fault>) Device(string path) => DeviceFile.Read(path) is var r ? (r.Device is not null, r.Faults) : default;
        (bool, IReadOnlyList<Fault>) Bands(string path) => BandFile.Read(path) is var r ? (r.Input is not null, r.Faults) : default;
        (bool, IReadOnlyList<Fault>) Voltages(string path) => VoltageTable.Read(path, bar, null) is var r ? (r.Data is not null, r.Faults) : default;
        (bool, IReadOnlyList<Fault>) Map(string path) => MapTable.Read(path, MapQuantity.Potential, null) is var r ? (r.Map is not null, r.Faults) : default;
        (bool, IReadOnlyList<Fault>) Grid(string path) => Fitted(path, bar);
        Reading[] readings =
        [
            .. ((string[])[DeviceTexts.Disc, DeviceTexts.Bar, SmallDevice.Text, .. Samples.Select(n => File.ReadAllText(Repository.Sample(n)))]).Select(t => new Reading(t, TextKind.Toml, Device)),
            .. new[] { await File.ReadAllTextAsync(Repository.Sample("bands/tilted-cones.toml")), MutationSeeds.Cones }.Select(t => new Reading(t, TextKind.Toml, Bands)),
            new(MutationSeeds.GeoJson, TextKind.GeoJson, Device, MutationSeeds.OutlineSheet),
            new(MutationSeeds.Wkt, TextKind.Wkt, Device, MutationSeeds.OutlineSheet),
            new(MutationSeeds.Table, TextKind.Csv, Device, MutationSeeds.TableDevice),
            new(MutationSeeds.Profile, TextKind.Csv, Bands, MutationSeeds.ProfileBands),
            new(MutationSeeds.Voltages, TextKind.Csv, Voltages),
            new(MutationSeeds.Map, TextKind.Csv, Map),
            new(Encoding.Latin1.GetString(await File.ReadAllBytesAsync(grid)), TextKind.Vtu, Grid),
            new(MutationSeeds.PlainGrid(grid), TextKind.Vtu, Grid),
            new(journal, TextKind.Journal, Journal),
            new(MutationSeeds.Edit, TextKind.GeoJson, path => Edited(path, main), SmallDevice.Text),
        ];
        int good = 0, count = MutationSettings.Count, from = MutationSettings.From;
        double slowest = 0;
        double[] spent = new double[readings.Length];
        long most = 0;
        var failures = new List<string>();
        foreach (int k in Enumerable.Range(from, count))
        {
            Reading reading = readings[k % readings.Length];
            string spoilt = reading.Beside is null && reading.Kind == TextKind.Toml ? main : Path.Combine(folder, "named.txt");
            if (reading.Beside is not null)
            {
                await File.WriteAllTextAsync(main, reading.Beside);
            }

            await File.WriteAllBytesAsync(spoilt, new Mutator(new Random(k)).Mutate(reading.Good, reading.Kind));
            var clock = Stopwatch.StartNew();
            long before = GC.GetAllocatedBytesForCurrentThread();
            try
            {
                // An outline is read through the device that names it.
                (bool read, IReadOnlyList<Fault> faults) = reading.Answer(reading.Beside is not null && reading.Good != MutationSeeds.Edit ? main : spoilt);
                Sound(read, faults);
                good += read ? 1 : 0;
            }
            catch (Exception e)
            {
                failures.Add(string.Create(CultureInfo.InvariantCulture, $"seed {k}: {e}\n---\n{Encoding.UTF8.GetString(File.ReadAllBytes(spoilt))}"));
            }

            slowest = Math.Max(slowest, clock.Elapsed.TotalSeconds);
            spent[k % readings.Length] += clock.Elapsed.TotalSeconds;
            most = Math.Max(most, GC.GetAllocatedBytesForCurrentThread() - before);
        }

        log.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{count} inputs, {good} still good; slowest {slowest:F2} s; most allocated {most / 1e6:F1} MB; s per kind: {string.Join(' ', spent.Select(t => $"{t:F1}"))}"));
        Assert.True(failures.Count == 0, string.Join("\n=====\n", failures.Take(MostFailures)));
        Assert.InRange(good, count / 50, count - (count / 50)); // else the mutations are too wild, or too tame, to say anything
        Assert.InRange(most, 0, 500_000_000);
    }

    private static void Sound(bool read, IReadOnlyList<Fault> faults)
    {
        Assert.Equal(!read, faults.Count > 0);
        Assert.InRange(faults.Count, 0, 21);
        foreach (Fault f in faults)
        {
            Assert.True(f.Line >= 1 && f.Column >= 1, f.ToString());
            Assert.DoesNotContain(f.Message, char.IsControl);
            Assert.InRange(f.Message.Length, 8, 700);
            Assert.True(File.Exists(f.File), f.File);
        }
    }

    private static (bool Read, IReadOnlyList<Fault> Faults) Fitted(string path, SheetDevice device)
    {
        (double[] x, double[] y, int[] corners, Fault? fault) = VtuTriangles.Read(path);
        try
        {
            return fault is not null ? (false, [fault]) : (SavedMesh.Fit(device.Domain, x, y, corners) is not null, []);
        }
        catch (MeshException e)
        {
            return (false, [new(path, 1, 1, e.Message)]);
        }
    }

    private (bool Read, IReadOnlyList<Fault> Faults) Journal(string path)
    {
        File.Copy(path, Path.Combine(folder, SampleJournal.FileName), overwrite: true);
        try
        {
            return (GatheredSamples.Read([folder]) is not null, []);
        }
        catch (JournalException e)
        {
            // One of two shards: at best the other is missing.
            return e.Message.StartsWith("shard 2 of 2 is missing; ", StringComparison.Ordinal) ? (true, []) : (false, [new(path, 1, 1, e.Message)]);
        }
    }

    // As the page's server answers a request.
    private static (bool Read, IReadOnlyList<Fault> Faults) Edited(string request, string device)
    {
        try
        {
            EditRequest edit = JsonSerializer.Deserialize<EditRequest>(File.ReadAllText(request), EditJson.Options) ?? throw new JsonException("nothing");
            EditSession session = EditSession.Open(device).Session!;
            Fault[] faults = [.. edit.Apply(session).Select(f => f.Fault)];
            return (faults.Length == 0, faults);
        }
        catch (JsonException)
        {
            return (false, [new(request, 1, 1, "the request is not what this page sends")]);
        }
        catch (LayoutEditException e)
        {
            return (false, [new(request, 1, 1, e.Message)]);
        }
    }
}
