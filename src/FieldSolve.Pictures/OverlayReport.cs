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
        page.Box("Warnings", "", result.Warnings);
        page.Element("h2", "Verdict");
        page.Element("p", Verdict(result));
        ReportPage.AddPictures(page, pictures);
        page.Element("h2", "Registration");
        page.Table(
            "What carries the map onto the sheet, with standard errors: a point p lies at c + scale · R(turn)(p − c) + shift, c the middle of the sheet; the probe shows gain · value + offset.",
            ["number", "value"],
            [
                ["shift x", Of(result.ShiftX, "m", 1)], ["shift y", Of(result.ShiftY, "m", 1)], ["turn (°)", Of(result.Turn, "", Math.PI / 180)], ["scale", Of(result.Scale, "", 1)],
                ["gain", Of(result.Gain, "", 1)], ["offset", Of(result.Offset, result.Unit, 1)],
            ],
            null, 0);
        page.Table(
            "Wirings tried.", ["wiring", "current", "misfit over sigma"],
            [.. result.Candidates.Select(c => new[] { c.Wiring, SiScale.Text(c.Current, "A"), SiScale.Number(c.Misfit, 3) })], null, 0);
        page.Table(
            "Where the mean over neighbouring points is beyond the noise.", ["x", "y", "mean residual", "standard deviations", "within"],
            [.. result.Places.Select(p => new[]
            {
                SiScale.Text(p.Place.X, "m", 3), SiScale.Text(p.Place.Y, "m", 3), SiScale.Text(p.Mean, result.Unit, 3), SiScale.Number(Math.Abs(p.Significance), 3), SiScale.Text(p.Radius, "m", 2),
            })]);
        PageShell.End(page, null, $"SHA-256 of the device file: {result.Device.Sha256}; of the map: {result.Measured.Sha256}", path);
    }

    private static string Verdict(OverlayResult result)
    {
        Reading? source = result.Row.Of("source");
        string error = source is { } s ? $" The computed map belongs to a two-terminal voltage of {ErrorText.Of(s.Value, s.Error, "V")} (numerical error)." : "";
        string places = result.Places.Count == 0 ? "Nowhere do neighbouring points differ from the computed map by more than the noise."
            : string.Create(CultureInfo.InvariantCulture, $"At {result.Places.Count} {(result.Places.Count == 1 ? "place" : "places")} neighbouring points differ from the computed map by more than the noise; the worst lies at ({SiScale.Text(result.Places[0].Place.X, "m", 3)}, {SiScale.Text(result.Places[0].Place.Y, "m", 3)}).");
        return string.Create(
            CultureInfo.InvariantCulture,
            $"{result.Points.Count(p => p.Model is not null)} of {result.Measured.Points.Count} points lie on the sheet, matched with wiring {result.Map.Wiring} at {SiScale.Text(result.Map.Current, "A")}. The residuals have a root mean square of {SiScale.Text(result.Rms, result.Unit, 3)}; the noise is {SiScale.Text(result.Noise, result.Unit, 3)}{(result.NoiseIsEstimated ? ", estimated from the residuals themselves" : "")}. {places}{error}");
    }

    private static string Of(Registered r, string unit, double scale) => r.StandardError > 0
        ? ErrorText.Of(r.Value / scale, r.StandardError / scale, unit).Trim()
        : $"{(unit.Length == 0 ? SiScale.Number(r.Value / scale, 5) : SiScale.Text(r.Value, unit, 5))} (not free)";
}
