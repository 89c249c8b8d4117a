namespace FieldSolve.Meshing;

/// <summary>What the mesher is held to besides the size field.</summary>
public sealed record MeshOptions
{
    /// <summary>
    /// Smallest angle wanted in degrees, 0 to 33; default 26. Kept everywhere but next to corners of the outline that are sharper
    /// than 60 degrees themselves.
    /// </summary>
    public double MinimumAngleDegrees { get; init; } = 26;

    /// <summary>Most triangles allowed; default five million.</summary>
    public int MaxTriangles { get; init; } = 5_000_000;
}
