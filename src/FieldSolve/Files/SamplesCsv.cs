using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Runs;

namespace FieldSolve.Files;

/// <summary>The table samples.csv: one line per sample and wiring, with the values of all causes.</summary>
public static class SamplesCsv
{
    /// <summary>The word for a status in the table.</summary>
    public static string StatusText(SampleStatus status) => status switch
    {
        SampleStatus.Ok => "ok",
        SampleStatus.Remeshed => "remeshed",
        SampleStatus.NoDevice => "no-device",
        SampleStatus.NotConverged => "not-converged",
        _ => throw new ArgumentOutOfRangeException(nameof(status), status, "Not a status of a sample."),
    };

    /// <summary>Writes the table, line by line.</summary>
    public static void Write(string path, ToleranceResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        WholeFile.Write(path, stream =>
        {
            using StreamWriter writer = new(stream, new UTF8Encoding(false), 1 << 16, leaveOpen: true);
            foreach (string line in Lines(result))
            {
                writer.Write(line);
            }
        });
    }

    /// <summary>The lines, each ended by CR LF; the header first.</summary>
    public static IEnumerable<string> Lines(ToleranceResult result)
    {
        ArgumentNullException.ThrowIfNull(result);
        IReadOnlyList<SheetCause> causes = result.Device.Tolerance!.Causes;
        string[] columns = [.. result.Quantities.Select(Column).Distinct(StringComparer.Ordinal)];
        string[] wirings = [.. result.Device.Wirings.Select(w => w.Name)];
        StringBuilder text = new();
        CurvesCsv.AddLine(text, ["sample", "wiring", "current_A", .. columns, "status", .. causes.Select(Column)]);
        yield return text.ToString();
        foreach (SampleResult sample in result.Samples)
        {
            double[] x = result.Draw(sample.Index);
            for (int w = 0; w < wirings.Length; w++)
            {
                text.Clear();
                CurvesCsv.AddLine(text,
                [
                    sample.Index.ToString(CultureInfo.InvariantCulture), wirings[w], Digits.Of(result.Current),
                    .. columns.Select(c => Value(result, sample, w, c)), StatusText(sample.Status),
                    .. causes.Select((c, k) => Digits.Of(x[k] / c.UnitSize)),
                ]);
                yield return text.ToString();
            }
        }
    }

    private static string Value(ToleranceResult result, SampleResult sample, int wiring, string column)
    {
        for (int q = 0; q < result.Quantities.Count && sample.Values.Length > 0; q++)
        {
            if (result.Quantities[q].WiringIndex == wiring && Column(result.Quantities[q]) == column)
            {
                return Digits.Of(sample.Values[q]);
            }
        }

        return "";
    }

    private static string Column(ToleranceQuantity q) => q.IsRatio ? "ratio"
        : $"{(q.Pair is "along" or "across" or "source" ? "v" : "pair")}_{q.Pair}_{(q.Part == ReadingPart.Odd ? "odd" : "even")}_V";

    private static string Column(SheetCause cause)
    {
        string unit = cause.Unit.Replace("/", "_per_", StringComparison.Ordinal).Replace("^", "", StringComparison.Ordinal).Replace(' ', '_');
        return cause.Target.Name.Length == 0 ? $"{cause.Kind.Key}_{unit}" : $"{cause.Kind.Key}_{cause.Target.Name}_{unit}";
    }
}
