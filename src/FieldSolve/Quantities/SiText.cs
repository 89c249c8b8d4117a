using System.Globalization;

namespace FieldSolve.Quantities;

/// <summary>Values with SI prefixes for sentences, such as "1.2 µm" or "40 kV/m".</summary>
internal static class SiText
{
    private static readonly (double Size, string Prefix)[] Prefixes =
    [
        (1e12, "T"), (1e9, "G"), (1e6, "M"), (1e3, "k"), (1, ""), (1e-3, "m"), (1e-6, "µ"), (1e-9, "n"), (1e-12, "p"), (1e-15, "f"),
    ];

    /// <summary>A value at so many significant digits.</summary>
    /// <param name="value">In SI.</param>
    /// <param name="unit">Takes the prefix at its front.</param>
    /// <param name="digits">Three or more, so that no exponent is needed.</param>
    public static string Of(double value, string unit, int digits = 3)
    {
        if (value == 0 || !double.IsFinite(value))
        {
            return string.Create(CultureInfo.InvariantCulture, $"{value} {unit}");
        }

        // What rounds up to 1000 takes the next prefix.
        double least = 1 - (0.5 * Math.Pow(10, -digits));
        (double size, string prefix) = Prefixes.FirstOrDefault(p => Math.Abs(value) >= p.Size * least, Prefixes[^1]);
        return $"{(value / size).ToString("G" + digits.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture)} {prefix}{unit}";
    }

    /// <summary>A place, such as "(1.2 µm, 0 m)"; what is rounding beside the other coordinate is zero.</summary>
    /// <param name="x">Metres.</param>
    /// <param name="y">Metres.</param>
    public static string Place(double x, double y)
    {
        double rounding = 1e-9 * Math.Max(Math.Abs(x), Math.Abs(y));
        string Text(double v) => Of(Math.Abs(v) <= rounding ? 0 : v, "m");
        return $"({Text(x)}, {Text(y)})";
    }
}
