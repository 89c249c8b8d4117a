using System.Globalization;
using System.Text;
using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Summary of an overlay.</summary>
internal static class OverlayText
{
    public static string Json(OverlayResult result, string folder) => SummaryJson.Text(OverlayRecord.Json(result), folder);

    public static string Plain(OverlayResult result, string folder)
    {
        var text = new StringBuilder();
        string unit = result.Unit;
        text.Append(CultureInfo.InvariantCulture, $"{result.Device.Title}: {result.Points.Count(p => p.Model is not null)} of {result.Measured.Points.Count} points on the sheet, matched with wiring {result.Map.Wiring} at {Engineering.Text(result.Map.Current, "A")}\n\n");
        Line("shift x", result.ShiftX, "m", 1);
        Line("shift y", result.ShiftY, "m", 1);
        Line("turn", result.Turn, "deg", Math.PI / 180);
        Line("scale", result.Scale, "", 1);
        Line("gain", result.Gain, "", 1);
        Line("offset", result.Offset, unit, 1);
        text.Append($"\nresiduals {Engineering.Text(result.Rms, unit, 3)} root mean square, noise {Engineering.Text(result.Noise, unit, 3)}{(result.NoiseIsEstimated ? " (estimated from the residuals)" : "")}\n");
        if (result.Patch is { } patch)
        {
            text.Append($"a patch of other conductance at ({Engineering.Text(patch.X.Value, "m", 3)}, {Engineering.Text(patch.Y.Value, "m", 3)}), fitted along");
            text.Append(patch.Radius > 0 ? $"; it does what a dead disc of radius {Engineering.Text(patch.Radius, "m", 3)} would\n" : "; it conducts better than the sheet\n");
        }

        if (result.IsStructured)
        {
            text.Append(CultureInfo.InvariantCulture, $"the misfit has a pattern: {100 * result.Rejected:F0} % of the points count nothing, and the errors hold what another weighting does\n");
        }

        foreach (OverlayPlace p in result.Places)
        {
            text.Append($"beyond the noise at ({Engineering.Text(p.Place.X, "m", 3)}, {Engineering.Text(p.Place.Y, "m", 3)}): {Engineering.Text(p.Mean, unit, 3)}, ");
            text.Append(CultureInfo.InvariantCulture, $"{Math.Abs(p.Significance):G3} standard deviations within {Engineering.Text(p.Radius, "m", 2)}\n");
        }

        if (result.Places.Count == 0)
        {
            text.Append("nowhere beyond the noise\n");
        }

        return text.Append("\nresults in ").Append(folder).Append('\n').ToString();

        void Line(string name, Registered r, string u, double scale)
        {
            string both = u is "deg" or "" ? Engineering.MeasuredPlain(r.Value / scale, r.StandardError / scale, u) : Engineering.Measured(r.Value, r.StandardError, u);
            text.Append("  ").Append(name.PadRight(10)).Append(both).Append(r.StandardError > 0 ? "\n" : " (not free)\n");
        }
    }
}
