namespace FieldSolve.Laws;

/// <summary>A law given by numbers, which knows how K changes with each of them.</summary>
internal interface IParametricLaw : ILawDetail
{
    /// <summary>The kind that makes it.</summary>
    LawKind Made { get; }

    /// <summary>SI value of a parameter of <see cref="Made"/>.</summary>
    double ParameterValue(string key);

    /// <summary>dK/dp of the law as written, exact: A/m per SI unit of the parameter, at each field.</summary>
    void ParameterSlope(string key, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb);
}
