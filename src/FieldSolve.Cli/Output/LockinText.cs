using System.Globalization;
using System.Text;
using System.Text.Json.Nodes;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Lockin;
using FieldSolve.Readings;

namespace FieldSolve.Cli.Output;

/// <summary>The short summary of an AC run.</summary>
internal static class LockinText
{
    public static string Plain(LockinResult result, string folder)
    {
        var text = new StringBuilder();
        text.Append(result.Device.Title).Append('\n');
        foreach (Wiring wiring in result.Device.Wirings)
        {
            if (Largest(result, wiring) is not { } point)
            {
                continue;
            }

            text.Append(CultureInfo.InvariantCulture, $"\n{wiring.Name} at {Engineering.Text(point.CurrentRms, "A")} RMS");
            text.Append(point.Frequency is { } f ? $", {Engineering.Text(f, "Hz")}\n" : "\n");
            void Line(string name, string value) => text.Append("  ").Append(name.PadRight(44)).Append(value).Append('\n');
            foreach (string pair in wiring.Pairs.Select(p => p.Name).Append("source"))
            {
                for (int h = 1; h <= 3; h++)
                {
                    if (point.Of(pair, h) is { } r && r.R > r.Error)
                    {
                        double? slope = SlopeOf(result, point, pair, h);
                        Line(
                            $"{pair}, harmonic {h.ToString(CultureInfo.InvariantCulture)}",
                            string.Create(CultureInfo.InvariantCulture, $"{Engineering.Measured(r.R, r.Error, "V")} at {r.PhaseDegrees:F2} deg")
                                + (slope is { } s ? string.Create(CultureInfo.InvariantCulture, $", grows like I^{s:F3}") : ""));
                    }
                }
            }

            if (result.Lines.LastOrDefault(l => l.Wiring == wiring.Name) is { } line)
            {
                Line("V_2w across / (V_1w along)²", string.Create(CultureInfo.InvariantCulture, $"{line.Line.Slope:G6} 1/V (R² = {line.Line.RSquared:F6}, {line.Line.Points} points)"));
            }

            if (LimitOf(result, wiring) is { } limit)
            {
                Line("quasi-static to 1 % below", $"{Engineering.Text(limit.Frequency, "Hz", 3)} (first harmonic of {limit.Pair})");
            }
        }

        Dictionary<RowStatus, int> counts = result.Points.GroupBy(p => p.Status).ToDictionary(g => g.Key, g => g.Count());
        text.Append('\n').Append(CultureInfo.InvariantCulture, $"{result.Points.Count} point{(result.Points.Count == 1 ? "" : "s")}: ");
        text.AppendJoin(", ", Enum.GetValues<RowStatus>().Where(counts.ContainsKey).Select(k => $"{counts[k].ToString(CultureInfo.InvariantCulture)} {CurvesCsv.StatusText(k)}"));
        text.Append(CultureInfo.InvariantCulture, $"; {result.Figures.Unknowns} unknowns on {result.Figures.Triangles} triangles\n");
        if (result.Cancelled)
        {
            text.Append("cancelled; the points that were finished are kept\n");
        }

        return text.Append("results in ").Append(folder).Append('\n').ToString();
    }

    public static string Json(LockinResult result, string folder)
    {
        var json = new JsonObject
        {
            ["title"] = result.Device.Title,
            ["folder"] = folder,
            ["points"] = result.Points.Count,
            ["ok"] = result.Points.Count(p => p.Status == RowStatus.Ok),
            ["cancelled"] = result.Cancelled,
            ["unknowns"] = result.Figures.Unknowns,
            ["wirings"] = new JsonArray([.. result.Device.Wirings.Select(w => (JsonNode)Wiring(result, w))]),
            ["cautions"] = new JsonArray([.. result.Cautions.Select(c => (JsonNode)c)]),
            ["warnings"] = new JsonArray([.. result.Warnings.Select(c => (JsonNode)c)]),
        };
        return SummaryJson.Text(json, folder);
    }

    private static JsonObject Wiring(LockinResult result, Wiring wiring)
    {
        LockinPoint? point = Largest(result, wiring);
        SecondHarmonicLine? line = result.Lines.LastOrDefault(l => l.Wiring == wiring.Name);
        return new JsonObject
        {
            ["name"] = wiring.Name,
            ["current_rms_A"] = point?.CurrentRms,
            ["frequency_Hz"] = point?.Frequency,
            ["harmonics"] = new JsonArray([.. (point?.Readings ?? []).Select(r => (JsonNode)new JsonObject
            {
                ["pair"] = r.Pair,
                ["harmonic"] = r.Harmonic,
                ["x_V"] = r.X,
                ["y_V"] = r.Y,
                ["err_V"] = r.Error,
                ["slope"] = SlopeOf(result, point!, r.Pair, r.Harmonic),
            })]),
            ["second_harmonic_slope_per_V"] = line?.Line.Slope,
            ["second_harmonic_slope_error_per_V"] = line?.Line.SlopeError,
            ["quasi_static_below_Hz"] = LimitOf(result, wiring)?.Frequency,
        };
    }

    // The largest current that has an answer, at its last frequency.
    private static LockinPoint? Largest(LockinResult result, Wiring wiring) =>
        result.Points.Where(p => p.Wiring == wiring.Name && p.Readings.Count > 0).Reverse().MaxBy(p => p.CurrentRms);

    private static double? SlopeOf(LockinResult result, LockinPoint point, string pair, int harmonic) =>
        result.Slopes.FirstOrDefault(s => s.Wiring == point.Wiring && s.Pair == pair && s.Harmonic == harmonic && s.Frequency == point.Frequency)?.Slope;

    // The lowest limit of a first harmonic.
    private static FrequencyLimit? LimitOf(LockinResult result, Wiring wiring) =>
        result.Limits.Where(l => l.Wiring == wiring.Name && l.Harmonic == 1).MinBy(l => l.Frequency);
}
