namespace FieldSolve.Laws;

/// <summary>Which numbers a law's parameter may take; all must be finite.</summary>
public enum ParameterBound
{
    /// <summary>Any finite number.</summary>
    Any,

    /// <summary>Greater than zero.</summary>
    Positive,

    /// <summary>Zero or greater.</summary>
    NonNegative,

    /// <summary>From 1 to <see cref="LawParameter.LargestExponent"/>.</summary>
    AtLeastOne,
}
