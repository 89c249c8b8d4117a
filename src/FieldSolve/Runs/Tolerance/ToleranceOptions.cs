namespace FieldSolve.Runs;

/// <summary>Choices of a tolerance run that are not part of the device.</summary>
public sealed record ToleranceOptions
{
    /// <summary>No run draws more samples.</summary>
    public const int MostSamples = 10_000_000;

    /// <summary>Most samples; 0 for the budget alone.</summary>
    public int Samples { get; init; } = 256;

    /// <summary>
    /// Ends sampling once the 95 % interval of every standard deviation is within this part of it; null to draw all samples. Looked at after
    /// each full hypercube, so that the end does not depend on threads.
    /// </summary>
    public double? Confidence { get; init; }

    /// <summary>Seed of the samples.</summary>
    public ulong Seed { get; init; } = 1;

    /// <summary>Which shard is solved, from 1.</summary>
    public int Shard { get; init; } = 1;

    /// <summary>Number of shards; shard k solves the samples k - 1, k - 1 + n, …</summary>
    public int Shards { get; init; } = 1;

    /// <summary>An across voltage to explain, V; null for none.</summary>
    public double? Explain { get; init; }

    /// <summary>A scatter of the across voltage that the placement should keep to, V; null for one per cent of the along voltage.</summary>
    public double? Wanted { get; init; }
}
