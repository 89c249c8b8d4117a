using System.Globalization;
using System.Text;
using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Summary of a fit.</summary>
internal static class FitText
{
    public static string Json(FitResult result, string folder) => SummaryJson.Text(FitRecord.Json(result), folder);

    public static string Plain(FitResult result, string folder)
    {
        var text = new StringBuilder();
        FitQuality q = result.Quality;
        text.Append(CultureInfo.InvariantCulture, $"{result.Device.Title}: {result.Data.Count} voltages, {result.Parameters.Count} free numbers{(result.Robust ? ", robust" : "")}\n\n");
        int wide = Math.Max(18, result.Parameters.Select(p => p.Parameter.Label.Length).DefaultIfEmpty(0).Max() + 2);
        foreach (FittedParameter p in result.Parameters)
        {
            text.Append("  ").Append(p.Parameter.Label.PadRight(wide)).Append(Value(p)).Append('\n');
        }

        text.Append(CultureInfo.InvariantCulture, $"\nchi squared {q.ChiSquared:G5} for {q.Freedom} degrees of freedom");
        text.Append(q.Probability is { } chance ? string.Create(CultureInfo.InvariantCulture, $", by chance with probability {chance:0.###}") : "");
        text.Append(CultureInfo.InvariantCulture, $"; numerical error at most {100 * result.NumericalShare:G2} % of a datum's sigma\n");
        foreach (FormulaValue f in result.Formulas)
        {
            text.Append(CultureInfo.InvariantCulture, $"{f.Method}: {f.Key} = {f.Value:G5} {f.Unit}");
            text.Append(f.Fitted is { } v ? string.Create(CultureInfo.InvariantCulture, $", fit {v:G5}") : "");
            text.Append(f.Off is { } off ? string.Create(CultureInfo.InvariantCulture, $", {off:+0.#;-0.#} sigmas off\n") : "\n");
        }

        for (int k = 0; k < result.Next.Count; k++)
        {
            NextReading n = result.Next[k];
            text.Append(CultureInfo.InvariantCulture, $"next {k + 1}: {n.Source} to {n.Drain}, read {n.Plus} - {n.Minus} at {Engineering.Text(n.Current, "A", 3)}: ");
            text.Append(CultureInfo.InvariantCulture, $"joint uncertainty / {n.Gain:G3}, {n.Helped} most ({n.After / n.Before:0.##} of its standard error)\n");
        }

        return text.Append("\nresults in ").Append(folder).Append('\n').ToString();
    }

    private static string Value(FittedParameter p)
    {
        if (p.Value is not { } v || p.StandardError is not { } e)
        {
            return "not determined by these data";
        }

        // Only units of one letter take a prefix: "A m/V^2" with one would not be what the file says.
        (double unit, string name) = (p.Parameter.UnitSize, p.Parameter.Unit);
        bool prefixed = name is "S" or "m";
        string end(double? x) => x is not { } y ? "bound" : prefixed ? Engineering.Text(y, name) : (y / unit).ToString("G5", CultureInfo.InvariantCulture);
        string interval = p.Interval is { } i ? $"  95 %: {end(i.Low)} to {end(i.High)}" : "";
        return (prefixed ? Engineering.Measured(v, e, name) : Engineering.MeasuredPlain(v / unit, e / unit, name)) + interval;
    }
}
