using FieldSolve.Quantities;

namespace FieldSolve.Laws;

/// <summary>One key of a law in the device file.</summary>
/// <param name="Key">Name in the file, for example "d11".</param>
/// <param name="Dimension">What the number measures; <see cref="Dimension.None"/> for a file.</param>
/// <param name="Required">The file must give it.</param>
/// <param name="Default">SI value where the file gives none; infinite for a limit that is then absent.</param>
/// <param name="Bound">Which numbers are allowed.</param>
/// <param name="Meaning">A few words for messages and help.</param>
/// <param name="IsFile">The value is the path of a file whose text the law reads.</param>
public sealed record LawParameter(
    string Key, Dimension Dimension, bool Required, double Default, ParameterBound Bound, string Meaning, bool IsFile = false)
{
    /// <summary>Beyond this an exponent says no more than "a corner", and its powers leave the range of doubles.</summary>
    public const double LargestExponent = 100;

    /// <summary>True when a given value is allowed: finite and within <see cref="Bound"/>.</summary>
    /// <param name="value">SI.</param>
    public bool Allows(double value) => double.IsFinite(value) && Bound switch
    {
        ParameterBound.Positive => value > 0,
        ParameterBound.NonNegative => value >= 0,
        ParameterBound.AtLeastOne => value is >= 1 and <= LargestExponent,
        _ => true,
    };

    /// <summary>The bound in words, for messages: "greater than zero".</summary>
    public string BoundText => Bound switch
    {
        ParameterBound.Positive => "finite and greater than zero",
        ParameterBound.NonNegative => "finite and zero or greater",
        ParameterBound.AtLeastOne => string.Create(System.Globalization.CultureInfo.InvariantCulture, $"from 1 to {LargestExponent}"),
        _ => "finite",
    };
}
