using FieldSolve.Meshing;

namespace FieldSolve.Turning;

/// <summary>Choices of a turn that are not part of the device.</summary>
public sealed record TurnOptions
{
    /// <summary>Keep the contacts and turn the crystal axis in so many steps through 360 degrees; 0 turns the current instead.</summary>
    public int AxisSteps { get; init; }

    /// <summary>The wiring whose curve is wanted when the axis is turned; null for the first.</summary>
    public string? Wiring { get; init; }

    /// <summary>Anisotropy ratios to overlay at fixed sqrt(a b), each at least 1; empty for none.</summary>
    public IReadOnlyList<double> Ratios { get; init; } = [];

    /// <summary>Keep the maps of three directions for the pictures. Default true.</summary>
    public bool ForPictures { get; init; } = true;

    /// <summary>A mesh of the device to use as it is, without refinement; null to make one.</summary>
    public TriangleMesh? Mesh { get; init; }
}
