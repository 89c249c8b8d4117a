using System.Globalization;

namespace FieldSolve.Files;

/// <summary>Numbers in data files: culture-free, shortest digits that read back to the same value.</summary>
internal static class Digits
{
    /// <summary>Shortest round-trip digits; empty for null and for anything not finite; zero never carries a sign.</summary>
    public static string Of(double? value) => value switch
    {
        null => "",
        0 => "0",
        double v when double.IsFinite(v) => v.ToString("R", CultureInfo.InvariantCulture),
        _ => "",
    };
}
