using System.Globalization;

namespace FieldSolve.Pictures;

/// <summary>A unit with an SI prefix that suits a range of values.</summary>
/// <param name="Factor">Multiplies an SI value to give the number in <paramref name="Unit"/>.</param>
/// <param name="Unit">For example "mV", "µm", "kV/m", "mV²".</param>
internal readonly record struct SiScale(double Factor, string Unit)
{
    private const int Smallest = -6, Largest = 4;

    private static readonly string[] Prefixes = ["a", "f", "p", "n", "µ", "m", "", "k", "M", "G", "T"];

    /// <summary>The prefix that brings the largest value to between 1 and 1000 (1 and a million for a squared unit).</summary>
    /// <param name="largest">Largest absolute value in SI; zero or not finite gives no prefix.</param>
    /// <param name="unit">Unit without prefix; the prefix goes to its front.</param>
    /// <param name="power">2 for a squared unit: the prefix is squared with it.</param>
    public static SiScale For(double largest, string unit, int power = 1)
    {
        double size = Math.Abs(largest);
        int step = size > 0 && double.IsFinite(size) ? (int)Math.Floor((Math.Log10(size) + 1e-9) / (3 * power)) : 0;
        step = Math.Clamp(step, Smallest, Largest);
        return new(Math.Pow(10, -3 * power * step), Prefixes[step - Smallest] + unit + (power == 2 ? "²" : ""));
    }

    /// <summary>A value with its prefixed unit at a few digits, such as "500 µA".</summary>
    public static string Text(double value, string unit, int digits = 4)
    {
        SiScale scale = For(value, unit);
        return string.Create(CultureInfo.InvariantCulture, $"{Number(value * scale.Factor, digits)} {scale.Unit}");
    }

    /// <summary>A whole number in raised digits.</summary>
    public static string Raised(int number) => string.Concat(
        number.ToString(CultureInfo.InvariantCulture).Select(c => c == '-' ? '⁻' : "⁰¹²³⁴⁵⁶⁷⁸⁹"[c - '0']));

    /// <summary>A number at so many significant digits, without needless zeros, with a true minus sign.</summary>
    public static string Number(double value, int digits = 4)
    {
        // Adding zero turns a negative zero into a plain one.
        string text = (value + 0.0).ToString("G" + digits.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
        int mark = text.IndexOf('E', StringComparison.Ordinal);
        if (mark > 0)
        {
            // A few digits of a number below a million need no power of ten: 190, not 1.9E+02.
            int exponent = int.Parse(text.AsSpan(mark + 1), CultureInfo.InvariantCulture);
            text = exponent is > 0 and < 6
                ? double.Parse(text, CultureInfo.InvariantCulture).ToString("F0", CultureInfo.InvariantCulture)
                : $"{text[..mark]}·10{Raised(exponent)}";
        }

        return text.Replace('-', '−');
    }
}
