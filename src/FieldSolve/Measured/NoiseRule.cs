using System.Globalization;
using FieldSolve.Quantities;

namespace FieldSolve.Measured;

/// <summary>Standard deviation of a measured value: an absolute part and a share of the value, added in squares.</summary>
/// <param name="Absolute">SI.</param>
/// <param name="Relative">Share of the value.</param>
public sealed record NoiseRule(double Absolute, double Relative)
{
    /// <summary>Standard deviation of a value, SI.</summary>
    public double Of(double value) => Math.Sqrt((Absolute * Absolute) + (Relative * value * Relative * value));

    /// <summary>Reads "20 nV", "0.2 %" or "20 nV + 0.2 %".</summary>
    /// <param name="text">The rule.</param>
    /// <param name="dimension">Of the values.</param>
    /// <param name="rule">The rule; null on failure.</param>
    /// <param name="error">What is wrong; null if nothing is.</param>
    public static bool TryParse(string text, Dimension dimension, out NoiseRule? rule, out string? error)
    {
        ArgumentNullException.ThrowIfNull(text);
        (rule, error) = (null, null);
        double? absolute = null, relative = null;
        foreach (string part in text.Split('+', StringSplitOptions.TrimEntries))
        {
            if (part.EndsWith('%'))
            {
                if (relative is not null || !double.TryParse(part[..^1].Trim(), NumberStyles.Float, CultureInfo.InvariantCulture, out double percent) || !(percent > 0 && percent < 1e6))
                {
                    error = $"'{part}' is no share of the value; write for example \"0.2 %\"";
                    return false;
                }

                relative = percent / 100;
            }
            else if (absolute is not null || !Quantity.TryParse(part, out double value, out Dimension got, out _, out error) || got != dimension || !(value > 0))
            {
                error = $"'{part}': {error ?? $"{dimension.NameWithArticle} greater than zero is wanted"}; write for example \"{dimension.Example}\", \"0.2 %\" or both with a + between";
                return false;
            }
            else
            {
                absolute = value;
            }
        }

        rule = new(absolute ?? 0, relative ?? 0);
        return true;
    }
}
