using System.Globalization;
using FieldSolve.Files;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>The report of an overlay in one HTML file.</summary>
public static class OverlayReport
{
    /// <summary>Writes the page.</summary>
    /// <param name="result">The overlay.</param>
    /// <param name="pictures">Its pictures, already written; their SVG files are put into the page.</param>
    /// <param name="path">Target file.</param>
    /// <exception cref="IOException">A picture cannot be read or the page cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be read or written.</exception>
    public static void Write(OverlayResult result, IReadOnlyList<PictureFile> pictures, string path)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(pictures);
        Html page = new();
        PageShell.Begin(page, result.Device.Title, "overlay", $"{result.Measured.Path} on {result.Device.Path}, FieldSolve {RunRecord.Version}");
        PageShell.Answer(page, Answer(result));
        page.Box("Warnings", "", result.Warnings);
        page.Element("h2", "Maps");
        PageShell.Comparison(page);
        ReportPage.AddStill(page, pictures);
        page.Element("h2", "Registration");
        page.Table(
            "What carries the map onto the sheet, with standard errors and their shares (of the noise, of the computed map's own error, and of how far another weighting of the points moves the number where the misfit has a pattern): a point p lies at c + scale · R(turn)(p − c) + shift, c the middle of the sheet; the probe shows gain · value + offset.",
            ["number", "value", "of the noise", "of the computed map", "of the weighting"],
            [
                Row("shift x", result.ShiftX, "m", 1), Row("shift y", result.ShiftY, "m", 1), Row("turn (°)", result.Turn, "", Math.PI / 180), Row("scale", result.Scale, "", 1),
                Row("gain", result.Gain, "", 1), Row("offset", result.Offset, result.Unit, 1),
            ],
            null, 0);
        if (result.Patch is { } patch)
        {
            page.Table(
                "The patch that was fitted along. Missing current: integral of what the patch keeps from flowing, along the undisturbed current; the radius is that of a dead disc in a wide isotropic sheet which does the same.",
                ["x", "y", "missing current × area", "radius of a dead disc"],
                [[Of(patch.X, "m", 1), Of(patch.Y, "m", 1), ErrorText.Of(patch.Missing.Value, patch.Missing.StandardError, "A m"), patch.Radius > 0 ? SiScale.Text(patch.Radius, "m", 3) : "–"]]);
        }

        page.Table(
            "Wirings tried.", ["wiring", "current", "misfit over sigma"],
            [.. result.Candidates.Select(c => new[] { c.Wiring, SiScale.Text(c.Current, "A"), SiScale.Number(c.Misfit, 3) })], null, 0);
        page.Table(
            "Where the mean over neighbouring points is beyond the noise.", ["x", "y", "mean residual", "standard deviations", "within"],
            [.. result.Places.Select(p => new[]
            {
                SiScale.Text(p.Place.X, "m", 3), SiScale.Text(p.Place.Y, "m", 3), SiScale.Text(p.Mean, result.Unit, 3), SiScale.Number(Math.Abs(p.Significance), 3), SiScale.Text(p.Radius, "m", 2),
            })]);
        PageShell.End(page, OverlayLive.Of(result), $"SHA-256 of the device file: {result.Device.Sha256}; of the map: {result.Measured.Sha256}", path);
    }

    private static IEnumerable<string> Answer(OverlayResult result)
    {
        yield return $"{ReportWords.Grouped(result.Points.Count(p => p.Model is not null))} of {ReportWords.Grouped(result.Measured.Points.Count)} points lie on the sheet, matched with wiring {result.Map.Wiring} at {SiScale.Text(result.Map.Current, "A")}."
            + (result.Row.Of("source") is { } s ? $" The computed map belongs to a two-terminal voltage of {ErrorText.Of(s.Value, s.Error, "V")} (numerical error)." : "");
        yield return $"The residuals have a root mean square of {SiScale.Text(result.Rms, result.Unit, 3)}; the noise is {SiScale.Text(result.Noise, result.Unit, 3)}{(result.NoiseIsEstimated ? ", estimated from the residuals themselves" : "")}.";
        if (result.Patch is { } patch)
        {
            yield return $"A patch of other conductance lies near ({SiScale.Text(patch.X.Value, "m", 3)}, {SiScale.Text(patch.Y.Value, "m", 3)}){(patch.Radius > 0 ? $" and does what a dead disc of radius {SiScale.Text(patch.Radius, "m", 3)} would" : "")}; the residuals are those of the sheet without it.";
        }

        if (result.IsStructured)
        {
            yield return string.Create(CultureInfo.InvariantCulture, $"The misfit has a pattern that noise does not make; {100 * result.Rejected:F0} % of the points count nothing.");
        }

        yield return result.Places.Count == 0 ? "Nowhere do neighbouring points differ from the computed map by more than the noise."
            : string.Create(CultureInfo.InvariantCulture, $"At {result.Places.Count} {(result.Places.Count == 1 ? "place" : "places")} neighbouring points differ from the computed map by more than the noise; {(result.Places.Count == 1 ? "it" : "the worst")} lies at ({SiScale.Text(result.Places[0].Place.X, "m", 3)}, {SiScale.Text(result.Places[0].Place.Y, "m", 3)}).");
    }

    private static string[] Row(string name, Registered r, string unit, double scale)
    {
        string Share(double v) => r.StandardError > 0 ? v == 0 ? "0" : unit.Length == 0 ? SiScale.Number(v / scale, 2) : SiScale.Text(v, unit, 2) : "";
        return [name, Of(r, unit, scale), Share(r.Noise), Share(r.Numerical), Share(r.Weighting)];
    }

    private static string Of(Registered r, string unit, double scale) => r.StandardError > 0
        ? ErrorText.Of(r.Value / scale, r.StandardError / scale, unit).Trim()
        : $"{(unit.Length == 0 ? SiScale.Number(r.Value / scale, 5) : SiScale.Text(r.Value, unit, 5))} (not free)";
}
