using System.Globalization;
using System.Text.RegularExpressions;
using FieldSolve.Quantities;

namespace FieldSolve.Sessions;

/// <summary>Writes a quantity in the unit that stood there before.</summary>
public static partial class QuantityText
{
    /// <summary>A quantity with the unit of an older one.</summary>
    /// <param name="old">The older text, such as "180 deg"; its unit is kept.</param>
    /// <param name="value">SI (angles in radians).</param>
    /// <param name="resolution">SI; the result is rounded to about this.</param>
    /// <param name="otherwise">Unit to use when the older text has none of its own.</param>
    public static string Like(string? old, double value, double resolution, string otherwise)
    {
        string unit = old is null ? "" : Number().Replace(old, "").Trim();
        if (unit.Length == 0 || !Quantity.TryParse("1 " + unit, out double factor, out _, out _, out _))
        {
            unit = otherwise;
            if (!Quantity.TryParse("1 " + unit, out factor, out _, out _, out _))
            {
                throw new ArgumentException($"'{otherwise}' is no unit.", nameof(otherwise));
            }
        }

        int decimals = Math.Clamp((int)Math.Ceiling(-Math.Log10(resolution / factor) - 1e-9), 0, 12);
        string digits = (value / factor).ToString("F" + decimals.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
        digits = digits.Contains('.', StringComparison.Ordinal) ? digits.TrimEnd('0').TrimEnd('.') : digits;
        return (digits == "-0" ? "0" : digits) + " " + unit;
    }

    [GeneratedRegex(@"^\s*[-+\u2212]?[0-9.]+([eE][-+\u2212]?[0-9]+)?")]
    private static partial Regex Number();
}
