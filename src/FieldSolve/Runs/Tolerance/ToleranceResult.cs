using FieldSolve.Device;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>What a tolerance run produced.</summary>
public sealed record ToleranceResult
{
    /// <summary>The device as designed, with its causes.</summary>
    public required SheetDevice Device { get; init; }

    /// <summary>Current of everything, with both signs; A.</summary>
    public required double Current { get; init; }

    /// <summary>One row per wiring as designed.</summary>
    public required IReadOnlyList<CurveRow> Rows { get; init; }

    /// <summary>What budget and samples are about.</summary>
    public required IReadOnlyList<ToleranceQuantity> Quantities { get; init; }

    /// <summary>By quantity, the largest contribution first.</summary>
    public required IReadOnlyList<BudgetEntry> Budget { get; init; }

    /// <summary>Samples by number.</summary>
    public required IReadOnlyList<SampleResult> Samples { get; init; }

    /// <summary>Value of every cause of a sample, SI.</summary>
    public required Func<int, double[]> Draw { get; init; }

    /// <summary>One per quantity.</summary>
    public required IReadOnlyList<SampleStatistics> Statistics { get; init; }

    /// <summary>Answers in words, each one sentence or two.</summary>
    public required IReadOnlyList<string> Answers { get; init; }

    /// <summary>Warnings, each one sentence or two.</summary>
    public required IReadOnlyList<string> Warnings { get; init; }

    /// <summary>Cautions for the user.</summary>
    public required IReadOnlyList<string> Cautions { get; init; }

    /// <summary>Unknowns of the finest mesh and of the mesh the samples are solved on.</summary>
    public required (int Fine, int Coarse) Unknowns { get; init; }

    /// <summary>Wall time per stage.</summary>
    public required IReadOnlyList<StageTime> Stages { get; init; }

    /// <summary>Samples solved in this run and not earlier.</summary>
    public required int Solved { get; init; }

    /// <summary>True when sampling was cancelled.</summary>
    public bool Cancelled { get; init; }

    /// <summary>True when every wiring as designed meets its wanted error and every spread is well above its numerical error.</summary>
    public bool AllOk => Rows.All(r => r.Status == RowStatus.Ok) && Statistics.All(s => s.Count <= 1 || s.SpreadError <= 0.1 * s.Deviation.Value);
}
