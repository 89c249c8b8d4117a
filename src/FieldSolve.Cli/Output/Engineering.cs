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

        int step = Math.Clamp((int)Math.Floor((Math.Log10(Math.Abs(v)) + 1e-9) / 3), -5, 4);
        double scaled = v / Math.Pow(10, 3 * step);
        return scaled.ToString("G" + digits.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture) + " " + Prefixes[step + 5] + unit;
    }
}
