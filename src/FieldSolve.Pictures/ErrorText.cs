using System.Globalization;

namespace FieldSolve.Pictures;

/// <summary>Values with their errors: the error at two digits, the value down to the same decimal.</summary>
internal static class ErrorText
{
    private const int MostDigits = 12;

    /// <summary>For example "46.0512 ± 0.0046 mV"; without an error six digits.</summary>
    /// <param name="value">In SI; null or not finite gives a dash.</param>
    /// <param name="error">In SI; zero, null or not finite leaves the error out.</param>
    /// <param name="unit">Unit without prefix; "1/V" and the like take no prefix.</param>
    public static string Of(double? value, double? error, string unit)
    {
        if (value is not { } v || !double.IsFinite(v))
        {
            return "–";
        }

        // A value far below its error is shown in the error's unit: 0 ± 17 nV, not 189 ± 16779005476 aV.
        double size = error is { } e && double.IsFinite(e) ? Math.Max(Math.Abs(v), e) : v;
        SiScale scale = unit.StartsWith("1/", StringComparison.Ordinal) ? new(1, unit) : SiScale.For(size, unit);
        return $"{In(scale, v, error)} {scale.Unit}";
    }

    /// <summary>The same in a given unit, without the unit's name.</summary>
    public static string In(SiScale scale, double? value, double? error)
    {
        if (value is not { } v || !double.IsFinite(v))
        {
            return "–";
        }

        double shown = v * scale.Factor;
        if (error is not { } e || !double.IsFinite(e) || e <= 0)
        {
            return SiScale.Number(shown, 6);
        }

        double shownError = e * scale.Factor;
        int decimals = 1 - (int)Math.Floor(Math.Log10(shownError));
        if (decimals < 0)
        {
            // The error reaches beyond the unit's digits: whole numbers are honest enough.
            decimals = 0;
        }

        if (decimals > MostDigits)
        {
            return $"{SiScale.Number(shown, MostDigits)} ± {SiScale.Number(shownError, 2)}";
        }

        string format = "F" + decimals.ToString(CultureInfo.InvariantCulture);

        // A value that rounds to zero shows no sign.
        double rounded = Math.Abs(shown) < 0.5 * Math.Pow(10, -decimals) ? 0 : shown;
        string text = rounded.ToString(format, CultureInfo.InvariantCulture).Replace('-', '−');
        return $"{text} ± {shownError.ToString(format, CultureInfo.InvariantCulture)}";
    }
}
