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

    /// <summary>A number at so many significant digits, without needless zeros, with a true minus sign.</summary>
    public static string Number(double value, int digits = 4)
    {
        string text = value.ToString("G" + digits.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
        return text.Replace('-', '−');
    }
}
