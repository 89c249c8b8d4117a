using FieldSolve.Device;

namespace FieldSolve.Bands;

/// <summary>A valid bands file: a band model, or a measured profile.</summary>
public sealed record BandInput
{
    /// <summary>Title for summaries and pictures.</summary>
    public required string Title { get; init; }

    /// <summary>The file as the user named it.</summary>
    public required string Path { get; init; }

    /// <summary>SHA-256 of its bytes, lower case hexadecimal.</summary>
    public required string Sha256 { get; init; }

    /// <summary>Angle from lab x to crystal a, rad.</summary>
    public required double Axis { get; init; }

    /// <summary>The band model; null when the file gives a profile.</summary>
    public BandModel? Model { get; init; }

    /// <summary>The measured profile; null when the file gives cones.</summary>
    public MeasuredProfile? Profile { get; init; }
}

/// <summary>What came of reading a bands file: the input, or the faults that forbid it.</summary>
/// <param name="Input">Null when there are faults.</param>
/// <param name="Faults">In the order of their places.</param>
public sealed record BandReading(BandInput? Input, IReadOnlyList<Fault> Faults);
