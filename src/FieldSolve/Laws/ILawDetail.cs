namespace FieldSolve.Laws;

/// <summary>What a law as written tells the guard's search and the summary beyond <see cref="ISheetLaw"/>.</summary>
internal interface ILawDetail : ISheetLaw
{
    /// <summary>The fields at which something can happen.</summary>
    FieldScan Scan { get; }

    /// <summary>The parameters with their units, for the summary.</summary>
    string Terms { get; }

    /// <summary>Throws when a field lies where the law is not known.</summary>
    /// <exception cref="FieldOutsideTableException">A table law's grid does not hold a field.</exception>
    void RequireInside(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb)
    {
    }
}

/// <summary>The range of fields in which the definiteness of dK/dE is looked at.</summary>
/// <param name="Lowest">V/m; below it dK/dE is as good as at zero field.</param>
/// <param name="Highest">V/m; above it the law follows its asymptote.</param>
internal sealed record FieldScan(double Lowest, double Highest)
{
    /// <summary>Nothing can happen: dK/dE is the same at every field.</summary>
    public static FieldScan None { get; } = new(0, 0);

    /// <summary>
    /// Definiteness counts as lost where the smallest eigenvalue is below this share of its zero-field value: a margin for what lies
    /// between the sampled fields. Zero for laws whose dK/dE itself fades at large fields.
    /// </summary>
    public double LossShare { get; init; } = 0.01;

    /// <summary>Largest step in |E|, V/m.</summary>
    public double LargestStep { get; init; } = double.PositiveInfinity;

    /// <summary>Number of directions to look along.</summary>
    public int Directions { get; init; } = 180;

    /// <summary>Field in V/m up to which the law is known along the direction (cos, sin).</summary>
    public Func<double, double, double> Reach { get; init; } = (_, _) => double.PositiveInfinity;
}
