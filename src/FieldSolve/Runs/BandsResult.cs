using FieldSolve.Bands;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>What the bands command found.</summary>
public sealed record BandsResult
{
    /// <summary>The bands file.</summary>
    public required BandInput Input { get; init; }

    /// <summary>Response of the band model; null for a measured profile.</summary>
    public BandResponse? Response { get; init; }

    /// <summary>Fit of a tensor to the ballistic profile (S/m), or to the measured one (S, or ohm).</summary>
    public required TensorFit Fit { get; init; }

    /// <summary>The law for a device file.</summary>
    public required BandLaw Law { get; init; }

    /// <summary>Fermi lines; empty for a measured profile.</summary>
    public IReadOnlyList<BandContour> Contours { get; init; } = [];

    /// <summary>What the user should know about the model.</summary>
    public IReadOnlyList<string> Cautions { get; init; } = [];

    /// <summary>What went wrong in the computation.</summary>
    public IReadOnlyList<string> Warnings { get; init; } = [];

    /// <summary>Wall times.</summary>
    public IReadOnlyList<StageTime> Stages { get; init; } = [];

    /// <summary>Every quadrature reached its error.</summary>
    public bool AllOk => Response?.Reached ?? true;
}
