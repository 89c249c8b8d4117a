using System.Collections.Concurrent;

namespace FieldSolve.Tests.EndToEndTests;

/// <summary>Runs each sample device once for all tests that look at it.</summary>
public sealed class SampleRuns : IDisposable
{
    public const string Collection = "commands, one at a time";

    private readonly ConcurrentDictionary<string, SampleRun> runs = new();
    private readonly TempFolder folder = new();

    internal SampleRun Of(string sample) => runs.GetOrAdd(sample, name =>
    {
        string into = folder[name];
        CommandResult result = Command.Run("drive", Repository.Sample(name + ".toml"), "--out", into);
        return new(into, result);
    });

    public void Dispose() => folder.Dispose();
}

/// <summary>The drive of a sample.</summary>
/// <param name="Folder">Where its files are.</param>
/// <param name="Result">What the command said.</param>
internal sealed record SampleRun(string Folder, CommandResult Result)
{
    public CsvTable Curves => CsvTable.Read(Path.Combine(Folder, "curves.csv"));
}

/// <summary>Keeps the processes from running side by side, and the sample runs alive for all of them.</summary>
[CollectionDefinition(SampleRuns.Collection)]
public class SampleRunsCollection : ICollectionFixture<SampleRuns>;
