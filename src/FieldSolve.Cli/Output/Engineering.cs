using System.Globalization;

namespace FieldSolve.Cli.Output;

/// <summary>Numbers with SI prefixes for the terminal.</summary>
internal static class Engineering
{
    private static readonly string[] Prefixes = ["f", "p", "n", "µ", "m", "", "k", "M", "G", "T"];

    /// <summary>For example "12.35 mV"; "-" for an absent value.</summary>
    public static string Text(double? value, string unit, int digits = 5)
    {
        if (value is not { } v)
        {
            return "-";
        }

        if (v == 0)
        {
            return "0 " + unit;
        }

        int step = Step(v, digits);
        return Significant(v / Math.Pow(10, 3 * step), digits) + " " + Prefixes[step + 5] + unit;
    }

    /// <summary>A value and its error in one unit, both to the second digit of the error: "12.354 mV +- 0.012 mV".</summary>
    /// <param name="value">In SI.</param>
    /// <param name="error">Standard or numerical error; zero or not finite leaves it out.</param>
    /// <param name="unit">Takes a prefix; empty for a plain number.</param>
    public static string Measured(double value, double error, string unit)
    {
        if (!(error > 0) || !double.IsFinite(error))
        {
            return Text(value, unit, 6);
        }

        int step = Step(Math.Max(Math.Abs(value), error), 2);
        (string v, string e) = Paired(value / Math.Pow(10, 3 * step), error / Math.Pow(10, 3 * step));
        return $"{v} {Prefixes[step + 5]}{unit} +- {e} {Prefixes[step + 5]}{unit}";
    }

    /// <summary>As <see cref="Measured"/>, for a unit that takes no prefix; a power of ten stands once: "(8.15 +- 0.12)e-10 A m/V^2".</summary>
    public static string MeasuredPlain(double value, double error, string unit)
    {
        string tail = unit.Length > 0 ? " " + unit : "";
        if (!(error > 0) || !double.IsFinite(error))
        {
            return value.ToString("G6", CultureInfo.InvariantCulture) + tail;
        }

        int power = (int)Math.Floor(Math.Log10(Math.Max(Math.Abs(value), error)));
        if (power is > -4 and < 6)
        {
            (string v, string e) = Paired(value, error);
            return $"{v} +- {e}{tail}";
        }

        (string mantissa, string own) = Paired(value / Math.Pow(10, power), error / Math.Pow(10, power));
        return string.Create(CultureInfo.InvariantCulture, $"({mantissa} +- {own})e{power}{tail}");
    }

    // Both to the second significant digit of the error.
    private static (string Value, string Error) Paired(double value, double error)
    {
        int decimals = Math.Clamp(1 - (int)Math.Floor(Math.Log10(error)), -12, 12);
        string format = "F" + Math.Max(decimals, 0).ToString(CultureInfo.InvariantCulture);
        double grain = Math.Pow(10, Math.Max(-decimals, 0));
        string Of(double x)
        {
            string text = (grain > 1 ? Math.Round(x / grain) * grain : x).ToString(format, CultureInfo.InvariantCulture);
            return text.AsSpan().IndexOfAnyExcept("-0.") < 0 ? text.TrimStart('-') : text; // no minus before what rounds to zero
        }

        return (Of(value), Of(error));
    }

    // Fewer than three digits of 100 and more would show an exponent: 9E+02.
    private static string Significant(double scaled, int digits)
    {
        int whole = (int)Math.Floor(Math.Log10(Math.Abs(scaled)) + 1e-9) + 1;
        if (whole <= digits)
        {
            return scaled.ToString("G" + digits.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture);
        }

        double grain = Math.Pow(10, whole - digits);
        return (Math.Round(scaled / grain) * grain).ToString("F0", CultureInfo.InvariantCulture);
    }

    // Three powers of ten a step; a value that rounds up to 1000 takes the next one.
    private static int Step(double value, int digits)
    {
        double size = Math.Abs(value) * (1 + (0.5 * Math.Pow(10, 1 - Math.Max(digits, 3))));
        return Math.Clamp((int)Math.Floor((Math.Log10(size) + 1e-9) / 3), -5, 4);
    }
}
