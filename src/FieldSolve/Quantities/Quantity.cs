using System.Globalization;

namespace FieldSolve.Quantities;

/// <summary>
/// Reads a number with its unit, for example "8 um", "120 ohm um", "2e-9 A m/V^2", "20 deg"; see <see cref="Unit"/> for the
/// units. White space is free; the decimal sign is a point.
/// </summary>
public static class Quantity
{
    private const int LongestText = 200;

    /// <summary>Reads a quantity into SI units; angles into radians.</summary>
    /// <param name="text">Number, then unit.</param>
    /// <param name="value">The value in SI units. Where the unit is a power of ten the decimal text is scaled before it is
    /// rounded, so that "10 um" is the double nearest to 1e-5. Zero on failure.</param>
    /// <param name="dimension">Dimension of the unit; <see cref="Dimension.None"/> where there is none.</param>
    /// <param name="errorColumn">1-based column in <paramref name="text"/> of what is wrong; 0 if nothing is.</param>
    /// <param name="error">What is wrong, as a clause; null if nothing is.</param>
    /// <returns>False, with <paramref name="error"/> set, when the text is no quantity or not a finite double.</returns>
    public static bool TryParse(string text, out double value, out Dimension dimension, out int errorColumn, out string? error)
    {
        ArgumentNullException.ThrowIfNull(text);
        (value, dimension, errorColumn) = (0, default, 0);
        int at = 0;
        if (text.Length > LongestText)
        {
            error = "the text is too long for a number with a unit";
        }
        else if (TryNumber(text, ref at, out string mantissa, out int exponent, out error)
            && Unit.TryRead(text, ref at, out Unit unit, out error))
        {
            double si = unit.Of(mantissa, exponent);
            bool tiny = si == 0 && mantissa.AsSpan().IndexOfAnyInRange('1', '9') >= 0;
            if (double.IsFinite(si) && !tiny)
            {
                (value, dimension) = (si, unit.Dimension);
                return true;
            }

            at = 0;
            error = tiny ? "the number is too small for double precision" : "the number is too large for double precision";
        }

        errorColumn = at + 1;
        return false;
    }

    private static bool TryNumber(string text, ref int at, out string mantissa, out int exponent, out string? error)
    {
        (mantissa, exponent, error) = ("0", 0, null);
        at = SkipSpace(text, 0);
        if (at == text.Length)
        {
            error = "a number is missing";
            return false;
        }

        int start = at;
        bool negative = text[at] is '-' or '\u2212';
        at += negative || text[at] == '+' ? 1 : 0;
        int digits = at;
        at = SkipDigits(text, at);
        int count = at - digits;
        if (at < text.Length && text[at] == '.')
        {
            int fraction = at + 1;
            at = SkipDigits(text, fraction);
            count += at - fraction;
        }

        if (count == 0)
        {
            at = start;
            string rest = text[digits..].TrimStart();
            error = rest.StartsWith("nan", StringComparison.OrdinalIgnoreCase) || rest.StartsWith("inf", StringComparison.OrdinalIgnoreCase)
                ? "the number must be finite"
                : "a number must come first";
            return false;
        }

        if (at < text.Length && text[at] == ',')
        {
            error = "write a decimal point, not a comma, and no thousands separators";
            return false;
        }

        mantissa = (negative ? "-" : "") + text[digits..at];
        exponent = Exponent(text, ref at);
        return true;
    }

    /// <summary>The power of ten behind an e, if digits follow it; otherwise the e belongs to the unit.</summary>
    private static int Exponent(string text, ref int at)
    {
        if (at >= text.Length || text[at] is not ('e' or 'E'))
        {
            return 0;
        }

        int sign = at + 1;
        bool negative = sign < text.Length && text[sign] is '-' or '\u2212';
        int digits = negative || (sign < text.Length && text[sign] == '+') ? sign + 1 : sign;
        int end = SkipDigits(text, digits);
        if (end == digits)
        {
            return 0;
        }

        at = end;
        ReadOnlySpan<char> trimmed = text.AsSpan(digits, end - digits).TrimStart('0');
        int size = trimmed.Length switch
        {
            0 => 0,
            > 6 => 999_999, // far beyond any double, and far from overflowing the sum with the unit's own exponent
            _ => int.Parse(trimmed, NumberStyles.None, CultureInfo.InvariantCulture),
        };
        return negative ? -size : size;
    }

    private static int SkipDigits(string text, int at)
    {
        while (at < text.Length && char.IsAsciiDigit(text[at]))
        {
            at++;
        }

        return at;
    }

    private static int SkipSpace(string text, int at)
    {
        while (at < text.Length && char.IsWhiteSpace(text[at]))
        {
            at++;
        }

        return at;
    }
}
