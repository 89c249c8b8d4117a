using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Meshing;
using FieldSolve.Readings;

namespace FieldSolve.Lockin;

/// <summary>Choices of an AC run that are not part of the device.</summary>
public sealed record LockinOptions
{
    /// <summary>Keep the maps over a cycle at the largest current of each wiring. Default true.</summary>
    public bool Frames { get; init; } = true;

    /// <summary>A mesh of the device to use as it is, without refinement; null to make one.</summary>
    public TriangleMesh? Mesh { get; init; }
}

/// <summary>Potential and field at one phase of a cycle.</summary>
/// <param name="Wiring">Name.</param>
/// <param name="CurrentRms">A.</param>
/// <param name="Frequency">Hz; null where the response is quasi-static and the frequency does not matter.</param>
/// <param name="Phase">Phase of the drive, degrees.</param>
/// <param name="Map">Potential, field and current at that moment; phases with the same current may share one map.</param>
public sealed record CycleFrame(string Wiring, double CurrentRms, double? Frequency, double Phase, FieldMap Map);

/// <summary>How a harmonic grows with the current: log r against log I_rms.</summary>
/// <param name="Wiring">Name.</param>
/// <param name="Pair">Name.</param>
/// <param name="Harmonic">1 to 3; a weak non-linearity gives this number as the slope.</param>
/// <param name="Frequency">Hz or null.</param>
/// <param name="Slope">Of the least-squares line.</param>
/// <param name="Points">Readings used: those at least ten error bars high.</param>
public sealed record HarmonicSlope(string Wiring, string Pair, int Harmonic, double? Frequency, double Slope, int Points);

/// <summary>Second harmonic across (its part along cos) against the squared first harmonic along, RMS both.</summary>
/// <param name="Wiring">Name.</param>
/// <param name="Frequency">Hz or null.</param>
/// <param name="Line">Least-squares line, slope in 1/V.</param>
public sealed record SecondHarmonicLine(string Wiring, double? Frequency, EvenSlope Line);

/// <summary>Frequency up to which a quasi-static reading holds: the shift of (x, y) by the gate's charge stays below 1 % of r.</summary>
/// <param name="Wiring">Name.</param>
/// <param name="CurrentRms">A.</param>
/// <param name="Pair">Name.</param>
/// <param name="Harmonic">0 to 5.</param>
/// <param name="Frequency">Hz, from the shift to first order in the frequency.</param>
public sealed record FrequencyLimit(string Wiring, double CurrentRms, string Pair, int Harmonic, double Frequency);

/// <summary>What an AC run produced.</summary>
public sealed record LockinResult
{
    /// <summary>The device.</summary>
    public required SheetDevice Device { get; init; }

    /// <summary>By wiring, then current, then frequency.</summary>
    public required IReadOnlyList<LockinPoint> Points { get; init; }

    /// <summary>Growth of the harmonics with the current.</summary>
    public required IReadOnlyList<HarmonicSlope> Slopes { get; init; }

    /// <summary>Second harmonic across against the first along.</summary>
    public required IReadOnlyList<SecondHarmonicLine> Lines { get; init; }

    /// <summary>Where the gate's charge begins to matter; empty without a gate capacitance.</summary>
    public required IReadOnlyList<FrequencyLimit> Limits { get; init; }

    /// <summary>Maps over one cycle at the largest current (and frequency) of each wiring, in order of phase.</summary>
    public required IReadOnlyList<CycleFrame> Frames { get; init; }

    /// <summary>The mesh before the last uniform split.</summary>
    public required TriangleMesh Mesh { get; init; }

    /// <summary>Refinement history.</summary>
    public required IReadOnlyList<RefinementLevel> Levels { get; init; }

    /// <summary>Cautions for the user.</summary>
    public required IReadOnlyList<string> Cautions { get; init; }

    /// <summary>Warnings about the computation.</summary>
    public required IReadOnlyList<string> Warnings { get; init; }

    /// <summary>Counts of the numerical work.</summary>
    public required SolverFigures Figures { get; init; }

    /// <summary>Wall time per stage.</summary>
    public required IReadOnlyList<StageTime> Stages { get; init; }

    /// <summary>True when the run was cancelled; the points are those that were finished.</summary>
    public bool Cancelled { get; init; }

    /// <summary>True when every reading is ok.</summary>
    public bool AllOk => Points.All(p => p.Status == RowStatus.Ok);

    /// <summary>What every run has (device, mesh, work, one row per point without readings) in the form of a drive's result, for records and reports.</summary>
    public DriveResult Common() => new()
    {
        Device = Device,
        Rows = [.. Points.Select(p => new CurveRow(p.Wiring, p.CurrentRms, [], p.Steps, p.Status, p.Exit, p.PeakSheetCurrent, p.PeakPower))],
        ReversedRows = [],
        Summaries = [],
        Maps = [],
        Mesh = Mesh,
        Levels = Levels,
        Cautions = Cautions,
        Warnings = Warnings,
        Figures = Figures,
        Stages = Stages,
        Cancelled = Cancelled,
    };
}
