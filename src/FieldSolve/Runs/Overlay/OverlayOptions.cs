using FieldSolve.Measured;

namespace FieldSolve.Runs;

/// <summary>How a map is laid over the computed one.</summary>
public sealed record OverlayOptions
{
    /// <summary>Wiring it was measured in; null: every wiring of the device is tried.</summary>
    public string? Wiring { get; init; }

    /// <summary>Current, A; null for the last of the drive.</summary>
    public double? Current { get; init; }

    /// <summary>The map may be magnified.</summary>
    public bool Scale { get; init; }

    /// <summary>The probe's gain is 1.</summary>
    public bool FixedGain { get; init; }

    /// <summary>The probe's offset is 0.</summary>
    public bool FixedOffset { get; init; }

    /// <summary>Largest shift, as a share of the size of the sheet.</summary>
    public double MostShift { get; init; } = 0.15;

    /// <summary>Largest rotation either way, rad.</summary>
    public double MostTurn { get; init; } = 15 * Math.PI / 180;

    /// <summary>One patch of other conductance is looked for where the residuals have a pattern. Default true.</summary>
    public bool Patch { get; init; } = true;
}
