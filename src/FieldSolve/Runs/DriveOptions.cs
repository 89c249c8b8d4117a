using FieldSolve.Meshing;

namespace FieldSolve.Runs;

/// <summary>Which potential maps a drive keeps.</summary>
public enum MapChoice
{
    /// <summary>None.</summary>
    None,

    /// <summary>The largest current of each wiring.</summary>
    Last,

    /// <summary>Every current.</summary>
    All,
}

/// <summary>Choices of a drive that are not part of the device.</summary>
public sealed record DriveOptions
{
    /// <summary>Maps to keep for files. Default: the last current of each wiring.</summary>
    public MapChoice Maps { get; init; } = MapChoice.Last;

    /// <summary>Also keep the maps that the pictures need (a few currents of each wiring). Default true.</summary>
    public bool ForPictures { get; init; } = true;

    /// <summary>A mesh of the device to use as it is, without refinement (its uniform split gives the answers); null to make one.</summary>
    public TriangleMesh? Mesh { get; init; }

    /// <summary>Also keep the potential at every current, as live pages show it, without the fields that still pictures need. Default false.</summary>
    public bool Frames { get; init; }

    /// <summary>
    /// The wirings are points of one curve: an even part need not be better known than a tenth of the curve's largest, where a row by itself would be measured
    /// by a tenth of its own largest.
    /// </summary>
    internal bool OneCurve { get; init; }
}
