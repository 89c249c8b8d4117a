namespace FieldSolve.Readings;

/// <summary>How the error of a reading falls in a triangle when the mesh is split.</summary>
internal enum Falloff : byte
{
    /// <summary>Like h^4, as for quadratic elements in a functional.</summary>
    Smooth,

    /// <summary>Around a corner that is not known to be singular: between h^2 and h^4.</summary>
    Blunt,

    /// <summary>Around a contact end or a re-entrant corner: like h to the power of the singular functions.</summary>
    Singular,
}

/// <summary>What is known of the rates of convergence of one kind of reading, by coarse triangle.</summary>
/// <param name="Remaining">Error left on the fine mesh, as a share of the difference between the two meshes: 1/(2^p - 1) for an error like h^p.</param>
/// <param name="Kinds">What the triangle touches.</param>
/// <param name="SingularIsKnown">The rate at singular points is the leading one and no other of about the same size mixes in.</param>
/// <param name="Doubt">Share of its own size that the correction may miss.</param>
internal sealed record ErrorShares(double[] Remaining, Falloff[] Kinds, bool SingularIsKnown, double Doubt)
{
    /// <summary>p = 4.</summary>
    public const double Smooth = 1.0 / 15;
}
