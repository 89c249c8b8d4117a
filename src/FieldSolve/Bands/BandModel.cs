namespace FieldSolve.Bands;

/// <summary>What a bands file describes: cones, their filling and scattering.</summary>
public sealed record BandModel
{
    /// <summary>Title for summaries and pictures.</summary>
    public required string Title { get; init; }

    /// <summary>The cones; at least one.</summary>
    public required IReadOnlyList<Cone> Cones { get; init; }

    /// <summary>Chemical potential, J.</summary>
    public required double ChemicalPotential { get; init; }

    /// <summary>Relaxation time, s, the same for all states.</summary>
    public required double RelaxationTime { get; init; }

    /// <summary>Temperature, K.</summary>
    public double Temperature { get; init; }

    /// <summary>Thickness of a film with three-dimensional cones, m; null for two-dimensional cones.</summary>
    public double? Thickness { get; init; }

    /// <summary>States farther than this from their node are left out, 1/m; null for no such limit.</summary>
    public double? CutOff { get; init; }

    /// <summary>Angle from lab x to crystal a, rad.</summary>
    public double Axis { get; init; }

    /// <summary>Shift of the Fermi contour at the field limit, as a share of the smallest half width of a contour.</summary>
    public double Shift { get; init; } = 0.1;

    /// <summary>Wanted relative error of the quadrature.</summary>
    public double Error { get; init; } = 1e-8;

    /// <summary>Directions of the conductance profile around the full circle; even.</summary>
    public int Directions { get; init; } = 72;
}
