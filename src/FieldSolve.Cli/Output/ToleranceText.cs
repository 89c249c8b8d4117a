using System.CommandLine;
using System.CommandLine.Parsing;
using System.Globalization;
using System.Text;
using FieldSolve.Files;
using FieldSolve.Quantities;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Options and summary of a tolerance run.</summary>
internal static class ToleranceText
{
    private const int MostCauses = 5;

    public static Option<double?> Explain() => new("--explain")
    {
        Description = "A measured across voltage to explain by misplacement, for example \"12 uV\".",
        HelpName = "VOLTAGE",
        CustomParser = r => Voltage(r, "--explain", allowNegative: true),
    };

    public static Option<double?> Wanted() => new("--wanted")
    {
        Description = "Scatter of the across voltage that the placement should keep to. Default: 1 % of the along voltage.",
        HelpName = "VOLTAGE",
        CustomParser = r => Voltage(r, "--wanted", allowNegative: false),
    };

    public static double? Number(ArgumentResult result, string name, double least, double most)
    {
        if (result.Tokens.Count == 1 && double.TryParse(result.Tokens[0].Value, NumberStyles.Float, CultureInfo.InvariantCulture, out double value)
            && value >= least && value <= most)
        {
            return value;
        }

        result.AddError(FormattableString.Invariant($"{name} must be a number from {least} to {most}"));
        return null;
    }

    public static (int, int)? Shard(ArgumentResult result)
    {
        string text = result.Tokens.Count == 1 ? result.Tokens[0].Value : "";
        if (text.Split('/') is [var first, var second]
            && int.TryParse(first, NumberStyles.None, CultureInfo.InvariantCulture, out int k)
            && int.TryParse(second, NumberStyles.None, CultureInfo.InvariantCulture, out int n) && k >= 1 && n >= 1 && k <= n)
        {
            return (k, n);
        }

        result.AddError($"--shard '{text}': write k/n, the number of the shard from 1 and how many there are, for example 3/8");
        return null;
    }

    public static string Plain(ToleranceResult result, string folder)
    {
        var text = new StringBuilder();
        text.Append(CultureInfo.InvariantCulture, $"{result.Device.Title}, {Engineering.Text(result.Current, "A")} and reversed\n");
        foreach (string wiring in result.Device.Wirings.Select(w => w.Name))
        {
            text.Append('\n').Append(wiring).Append('\n');
            foreach (SampleStatistics s in result.Statistics.Where(s => s.Quantity.Wiring == wiring))
            {
                string Of(double v, int digits) => s.Quantity.IsRatio
                    ? v.ToString("G" + digits.ToString(CultureInfo.InvariantCulture), CultureInfo.InvariantCulture)
                    : Engineering.Text(v, "V", digits);
                string sampled = s.Count > 1 ? $"; sampled {Of(s.Deviation.Value, 4)} ({Of(s.Deviation.Low, 3)} to {Of(s.Deviation.High, 3)})" : "";
                text.Append("  ").Append(s.Quantity.Label.PadRight(18)).Append(Of(s.Design, 6).PadRight(14))
                    .Append($" 1 sigma: first order {Of(s.FirstOrder, 4)}{sampled}").Append('\n');
            }

            IEnumerable<string> largest = result.Budget
                .Where(e => e.Quantity.Wiring == wiring && e.Quantity is { Pair: "across", Part: ReadingPart.Odd } && e.Contribution != 0).Take(MostCauses)
                .Select(e => $"{e.Cause.Label} {Engineering.Text(e.Contribution, "V", 3)}");
            if (largest.Any())
            {
                text.Append("  across odd: ").AppendJoin(", ", largest).Append('\n');
            }
        }

        text.Append('\n');
        foreach (string answer in result.Answers)
        {
            text.Append(char.ToUpperInvariant(answer[0])).Append(answer.AsSpan(1)).Append('\n');
        }

        Dictionary<SampleStatus, int> counts = result.Samples.GroupBy(r => r.Status).ToDictionary(g => g.Key, g => g.Count());
        text.Append('\n').Append(CultureInfo.InvariantCulture, $"{result.Samples.Count} samples");
        text.Append(counts.Count > 0 ? ": " : "").AppendJoin(", ", Enum.GetValues<SampleStatus>().Where(counts.ContainsKey).Select(k => $"{counts[k].ToString(CultureInfo.InvariantCulture)} {SamplesCsv.StatusText(k)}"));
        text.Append(CultureInfo.InvariantCulture, $"; {result.Unknowns.Fine} unknowns, samples on {result.Unknowns.Coarse}\n");
        if (result.Cancelled)
        {
            text.Append("cancelled; the samples that were finished are kept, and the same command goes on from there\n");
        }

        return text.Append("results in ").Append(folder).Append('\n').ToString();
    }

    public static string Json(ToleranceResult result, string folder) =>
        SummaryJson.Text(ToleranceRecord.Json(result, new Dictionary<string, string> { ["out"] = folder }), folder);

    private static double? Voltage(ArgumentResult result, string name, bool allowNegative)
    {
        string text = result.Tokens.Count == 1 ? result.Tokens[0].Value : "";
        if (Quantity.TryParse(text, out double value, out Dimension dimension, out _, out _) && dimension == Dimension.Voltage && (allowNegative || value > 0))
        {
            return value;
        }

        result.AddError($"{name} '{text}': a voltage is wanted, for example \"12 uV\"");
        return null;
    }
}
