using System.Globalization;

namespace FieldSolve.Quantities;

/// <summary>
/// A unit such as "um", "ohm cm^2" or "A m/V²". Products are written with a space, · or *, quotients with / (which
/// divides by the next unit alone), powers with ^ or ² ³. "/sq" and "/□" (per square) change nothing.
/// </summary>
/// <param name="Exponent">Power of ten to SI.</param>
/// <param name="Degrees">Power of the degree in it; π/180 rad is no power of ten.</param>
/// <param name="Dimension">What it measures.</param>
/// <param name="Electronvolts">Power of the electronvolt in it, which is no power of ten of the joule either.</param>
public readonly record struct Unit(int Exponent, int Degrees, Dimension Dimension, int Electronvolts = 0)
{
    /// <summary>Joules in an electronvolt; exact (SI, 2019).</summary>
    private const double Electronvolt = 1.602176634e-19;

    private static readonly (string Symbol, Unit Unit)[] Symbols =
    [
        ("m", new(0, 0, Dimension.Length)),
        ("s", new(0, 0, Dimension.Time)),
        ("A", new(0, 0, Dimension.Current)),
        ("V", new(0, 0, Dimension.Voltage)),
        ("W", new(0, 0, Dimension.Power)),
        ("S", new(0, 0, Dimension.SheetConductance)),
        ("F", new(0, 0, Dimension.Capacitance)),
        ("T", new(0, 0, Dimension.FluxDensity)),
        ("Hz", new(0, 0, Dimension.Frequency)),
        ("J", new(0, 0, Dimension.Energy)),
        ("eV", new(0, 0, Dimension.Energy, 1)),
        ("K", new(0, 0, Dimension.Temperature)),
        ("ohm", new(0, 0, Dimension.Resistance)),
        ("Ohm", new(0, 0, Dimension.Resistance)),
        ("\u03A9", new(0, 0, Dimension.Resistance)), // Greek capital omega
        ("\u2126", new(0, 0, Dimension.Resistance)), // ohm sign
        ("rad", new(0, 0, Dimension.Angle)),
        ("deg", new(0, 1, Dimension.Angle)),
        ("\u00B0", new(0, 1, Dimension.Angle)), // degree sign
        ("sq", default),
        ("\u25A1", default), // white square
    ];

    private static readonly (char Symbol, int Exponent)[] Prefixes =
    [
        ('f', -15), ('p', -12), ('n', -9), ('u', -6), ('\u00B5', -6), ('\u03BC', -6), ('m', -3), ('k', 3), ('M', 6), ('G', 9), ('T', 12),
    ];

    private static readonly string[] Common =
    [
        "nm", "um", "mm", "cm", "m", "nA", "uA", "mA", "A", "uV", "mV", "V", "kV", "uS", "mS", "S", "ohm", "kohm", "Mohm",
        "Hz", "kHz", "MHz", "pF", "nF", "uF", "F", "uW", "mW", "W", "s", "ms", "us", "mT", "T", "deg", "rad", "mrad",
        "eV", "meV", "mK", "K", "ps", "fs",
    ];

    /// <summary>Reads a unit that stands alone, for example "um".</summary>
    /// <param name="text">The unit.</param>
    /// <param name="unit">The unit read.</param>
    /// <param name="error">What is wrong, as a clause; null if nothing is.</param>
    /// <returns>False, with <paramref name="error"/> set, when the text is no unit.</returns>
    public static bool TryParse(string text, out Unit unit, out string? error)
    {
        ArgumentNullException.ThrowIfNull(text);
        int at = 0;
        return TryRead(text, ref at, out unit, out error);
    }

    /// <summary>
    /// The SI value of a number of such units. A power of ten is applied to the shortest decimal text of the number, so that
    /// 5 µm is 5e-6 and not its neighbour.
    /// </summary>
    public double Of(double number)
    {
        string text = number.ToString("R", CultureInfo.InvariantCulture);
        int e = text.IndexOf('E', StringComparison.Ordinal);
        return !double.IsFinite(number) ? number
            : e < 0 ? Of(text, 0)
            : Of(text[..e], int.Parse(text.AsSpan(e + 1), NumberStyles.AllowLeadingSign, CultureInfo.InvariantCulture));
    }

    /// <summary>The SI value of decimal digits times a power of ten, rounded once unless degrees or electronvolts come in.</summary>
    internal double Of(string mantissa, int exponent)
    {
        string text = string.Create(CultureInfo.InvariantCulture, $"{mantissa}E{exponent + Exponent}");
        double value = double.Parse(text, NumberStyles.Float, CultureInfo.InvariantCulture);
        double angle = Degrees switch
        {
            0 => value,
            1 => value * Math.PI / 180,
            _ => value * Math.Pow(Math.PI / 180, Degrees),
        };
        return Electronvolts == 0 ? angle : angle * Math.Pow(Electronvolt, Electronvolts);
    }

    /// <summary>Reads a unit from a place in a text to its end. No unit at all is a plain number.</summary>
    internal static bool TryRead(string text, ref int at, out Unit unit, out string? error)
    {
        unit = default;
        error = null;
        for (bool first = true; ; first = false)
        {
            int before = at;
            int sign = Separator(text, ref at, out bool bare);
            if (first && bare && IsOneOver(text, at))
            {
                at++;
                sign = Separator(text, ref at, out bare);
            }

            if (at == text.Length)
            {
                error = bare || before == at ? null : "a unit is missing at the end";
                at = error is null ? at : before;
                return error is null;
            }

            if (!first && before == at)
            {
                error = $"'{Visible(text[at])}' is not expected in a unit";
                return false;
            }

            int start = at;
            string symbol = Symbol(text, ref at);
            if (symbol.Length == 0 || !TrySymbol(symbol, out Unit factor))
            {
                at = start;
                error = symbol.Length == 0 ? $"'{Visible(text[start])}' is not expected in a unit" : $"unknown unit '{symbol}'{Hint(symbol)}";
                return false;
            }

            if (!TryPower(text, ref at, out int power))
            {
                error = "a power must be a small integer, for example ^2";
                return false;
            }

            power *= sign;
            unit = new(
                unit.Exponent + (factor.Exponent * power), unit.Degrees + (factor.Degrees * power),
                unit.Dimension * factor.Dimension.ToPower(power), unit.Electronvolts + (factor.Electronvolts * power));
        }
    }

    /// <summary>The 1 of "1/nm".</summary>
    private static bool IsOneOver(string text, int at) =>
        at < text.Length && text[at] == '1' && text.AsSpan(at + 1).TrimStart() is ['/', ..];

    /// <summary>Passes white space with at most one sign in it; -1 for a quotient. <paramref name="bare"/>: white space alone.</summary>
    private static int Separator(string text, ref int at, out bool bare)
    {
        int sign = 1;
        bare = true;
        for (; at < text.Length; at++)
        {
            char c = text[at];
            if (bare && c is '/' or '*' or '\u00B7' or '\u22C5')
            {
                sign = c == '/' ? -1 : 1;
                bare = false;
            }
            else if (!char.IsWhiteSpace(c))
            {
                break;
            }
        }

        return sign;
    }

    private static string Symbol(string text, ref int at)
    {
        int start = at;
        while (at < text.Length && (char.IsLetter(text[at]) || text[at] is '\u00B0' or '\u25A1'))
        {
            at++;
        }

        return text[start..at];
    }

    private static bool TrySymbol(string symbol, out Unit unit)
    {
        foreach ((string known, Unit u) in Symbols)
        {
            if (known == symbol)
            {
                unit = u;
                return true;
            }
        }

        foreach ((string known, Unit u) in Symbols)
        {
            if (symbol.Length == known.Length + 1 && symbol.EndsWith(known, StringComparison.Ordinal) && u != default)
            {
                int k = Array.FindIndex(Prefixes, p => p.Symbol == symbol[0]);
                if (k >= 0 || symbol == "cm")
                {
                    unit = u with { Exponent = k >= 0 ? Prefixes[k].Exponent : -2 };
                    return true;
                }
            }
        }

        unit = default;
        return false;
    }

    private static bool TryPower(string text, ref int at, out int power)
    {
        power = 1;
        if (at >= text.Length)
        {
            return true;
        }

        if (text[at] is '\u00B2' or '\u00B3')
        {
            power = text[at++] == '\u00B2' ? 2 : 3;
            return true;
        }

        if (text[at] != '^')
        {
            return true;
        }

        int digits = at + 1;
        int sign = digits < text.Length && text[digits] is '-' or '\u2212' ? -1 : 1;
        digits += sign < 0 ? 1 : 0;
        if (digits >= text.Length || !char.IsAsciiDigit(text[digits]) || (digits + 1 < text.Length && char.IsAsciiDigit(text[digits + 1])))
        {
            return false;
        }

        power = sign * (text[digits] - '0');
        at = digits + 1;
        return power != 0;
    }

    private static string Hint(string symbol)
    {
        string? near = symbol is "micron" or "microns" ? "um" : Array.Find(Common, c => c.Equals(symbol, StringComparison.OrdinalIgnoreCase));
        return near is null ? "" : $" (did you mean '{near}'?)";
    }

    private static string Visible(char c) =>
        char.IsControl(c) || char.IsSurrogate(c) ? string.Create(CultureInfo.InvariantCulture, $"U+{(int)c:X4}") : c.ToString();
}
