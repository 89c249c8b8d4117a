using System.Globalization;

namespace FieldSolve.Laws;

/// <summary>Laws in words, for the summary and the report.</summary>
public static class LawSummary
{
    /// <summary>Two lines: kind with its parameters, then how far the law reaches. Culture-invariant; S and V/m with the prefix that a device file would have.</summary>
    /// <param name="law">A law of the catalogue, guarded or not.</param>
    public static string Describe(ISheetLaw law)
    {
        ArgumentNullException.ThrowIfNull(law);
        string terms = law is ILawDetail detail ? detail.Terms : TensorTerms(law.AtZeroField);
        string reach = law.Guard is { } g
            ? $"as written up to {Number(g.From, "V/m")}; bent monotonically beyond, with the non-ohmic part held at its value of at most {Number(g.Limit, "V/m")}"
            : law.IsLinear ? "the same dK/dE at every field" : "dK/dE stays definite at every field of the law: no guard";
        return $"{law.Kind}: {terms}\n{reach}";
    }

    /// <summary>a = … S, b = … S, hall = … S.</summary>
    internal static string OhmicTerms(Tensor2 s) =>
        $"a = {Number(s.Aa, "S")}, b = {Number(s.Bb, "S")}" + (s.Ab == 0 ? string.Empty : $", hall = {Number(s.Ab, "S")}");

    /// <summary>dK/dE at zero field, element by element.</summary>
    internal static string TensorTerms(Tensor2 s) =>
        $"dK/dE at zero field: aa = {Number(s.Aa)} S, ab = {Number(s.Ab)} S, ba = {Number(s.Ba)} S, bb = {Number(s.Bb)} S";

    /// <summary>The terms that are not zero, each as ", name = value unit".</summary>
    internal static string Terms(string unit, params ReadOnlySpan<(string Name, double Value)> terms)
    {
        string text = string.Empty;
        foreach ((string name, double value) in terms)
        {
            text += value == 0 || double.IsInfinity(value) ? string.Empty : $", {name} = {Number(value, unit)}";
        }

        return text;
    }

    // Units of a second power take no prefix here: "A m/V^2" is written with an exponent in device files too.
    internal static string Number(double value, string unit)
    {
        if (unit is not ("S" or "V/m") || value == 0 || !double.IsFinite(value))
        {
            return $"{Number(value)} {unit}";
        }

        (double size, string prefix) = Math.Abs(value) switch
        {
            >= 1e6 => (1e6, "M"),
            >= 1e3 => (1e3, "k"),
            >= 1 => (1, ""),
            >= 1e-3 => (1e-3, "m"),
            _ => (1e-6, "µ"),
        };
        return $"{Number(value / size)} {prefix}{unit}";
    }

    internal static string Number(double value) => value.ToString("G6", CultureInfo.InvariantCulture);
}
