using System.Globalization;
using System.Text;
using System.Text.Json.Nodes;
using FieldSolve.Files;
using FieldSolve.Readings;

namespace FieldSolve.Cli.Output;

/// <summary>The short summary of a drive.</summary>
internal static class DriveText
{
    public static string Plain(DriveResult result, string folder)
    {
        var text = new StringBuilder();
        text.Append(result.Device.Title).Append('\n');
        foreach (WiringSummary s in result.Summaries)
        {
            text.Append(CultureInfo.InvariantCulture, $"\n{s.Wiring}{(s.HasDirection ? string.Create(CultureInfo.InvariantCulture, $" (current at {s.DirectionDegrees:G4} deg)") : "")}\n");
            void Line(string name, string value) => text.Append("  ").Append(name.PadRight(44)).Append(value).Append('\n');
            Line("two-terminal resistance at small drive", Resistance(result, s, s.TwoTerminal, "source"));
            Line("along resistance at small drive", Resistance(result, s, s.Along, "along"));
            Line("across resistance at small drive", Resistance(result, s, s.Across, "across"));
            if (s.Slope is { } line)
            {
                Line("V_across_even / V_along_odd²", string.Create(
                    CultureInfo.InvariantCulture, $"{Engineering.MeasuredPlain(line.Slope, line.Points > 2 ? line.SlopeError : 0, "1/V")} (R² = {line.RSquared:F6}, {line.Points} rows)"));
            }

            if (result.Rows.Where(r => r.Wiring == s.Wiring && r.Readings.Count > 0).MaxBy(r => r.Current) is { } last)
            {
                foreach (Reading r in last.Readings)
                {
                    Line($"V_{r.Pair} at {Engineering.Text(last.Current, "A")}", Engineering.Measured(r.Value, r.Error, "V")
                        + (r.Even is { } even && Math.Abs(even) > (r.EvenError ?? 0) ? $"; even part {Engineering.Measured(even, r.EvenError ?? 0, "V")}" : ""));
                }
            }

            Line("law holds", s.LeftLawAt is { } left ? $"below {Engineering.Text(left, "A")}" : "at all currents");
        }

        Dictionary<RowStatus, int> counts = result.Rows.GroupBy(r => r.Status).ToDictionary(g => g.Key, g => g.Count());
        text.Append('\n').Append(CultureInfo.InvariantCulture, $"{result.Rows.Count} row{(result.Rows.Count == 1 ? "" : "s")}: ");
        text.AppendJoin(", ", Enum.GetValues<RowStatus>().Where(counts.ContainsKey).Select(k => $"{counts[k].ToString(CultureInfo.InvariantCulture)} {CurvesCsv.StatusText(k)}"));
        text.Append(CultureInfo.InvariantCulture, $"; {result.Figures.Unknowns} unknowns on {result.Figures.Triangles} triangles\n");
        if (result.Cancelled)
        {
            text.Append("cancelled; the rows that were finished are kept\n");
        }

        return text.Append("results in ").Append(folder).Append('\n').ToString();
    }

    // The numerical error is that of the smallest current's reading; what the law adds on the way to zero current is not in it.
    private static string Resistance(DriveResult result, WiringSummary s, double? value, string pair)
    {
        CurveRow? smallest = result.Rows.Where(r => r.Wiring == s.Wiring && r.Current != 0 && r.Of(pair) is not null).MinBy(r => Math.Abs(r.Current));
        return value is { } ohm && smallest is not null ? Engineering.Measured(ohm, smallest.Of(pair)!.Error / Math.Abs(smallest.Current), "ohm") : "-";
    }

    public static string Json(DriveResult result, string folder)
    {
        var json = new JsonObject
        {
            ["title"] = result.Device.Title,
            ["folder"] = folder,
            ["rows"] = result.Rows.Count,
            ["ok"] = result.Rows.Count(r => r.Status == RowStatus.Ok),
            ["cancelled"] = result.Cancelled,
            ["unknowns"] = result.Figures.Unknowns,
            ["wirings"] = new JsonArray([.. result.Summaries.Select(s => (JsonNode)new JsonObject
            {
                ["name"] = s.Wiring,
                ["direction_deg"] = s.DirectionDegrees,
                ["two_terminal_ohm"] = s.TwoTerminal,
                ["along_ohm"] = s.Along,
                ["across_ohm"] = s.Across,
                ["slope_per_V"] = s.Slope?.Slope,
                ["slope_error_per_V"] = s.Slope?.SlopeError,
                ["slope_r_squared"] = s.Slope?.RSquared,
                ["law_left_at_A"] = s.LeftLawAt,
            })]),
            ["cautions"] = new JsonArray([.. result.Cautions.Select(c => (JsonNode)c)]),
            ["warnings"] = new JsonArray([.. result.Warnings.Select(c => (JsonNode)c)]),
        };
        return SummaryJson.Text(json, folder);
    }
}
