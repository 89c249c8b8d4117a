using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Readings;

namespace FieldSolve.Pictures;

/// <summary>
/// The report of a drive: one HTML file that holds its maps, curves and pictures, fetches nothing and prints on A4. Its policy lets only its own
/// script run; without it tables and still pictures say the same. It carries no clock time, so the same run gives the same page.
/// </summary>
public static class ReportPage
{
    /// <summary>Writes the page.</summary>
    /// <param name="result">The drive.</param>
    /// <param name="pictures">Pictures of the drive, already written; their SVG files are read and put into the page.</param>
    /// <param name="path">Target file.</param>
    /// <exception cref="IOException">A picture cannot be read or the page cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be read or written.</exception>
    public static void Write(DriveResult result, IReadOnlyList<PictureFile> pictures, string path)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(pictures);

        SheetDevice device = result.Device;
        LiveData data = DriveLive.Of(result);
        Html page = new();
        PageShell.Begin(page, device.Title, "drive", $"Drive of {device.Path}, FieldSolve {RunRecord.Version}");
        PageShell.Answer(page, ReportWords.Answer(result));
        page.Box("Cautions", "caution", result.Cautions);
        page.Box("Warnings", "", result.Warnings);
        ReportTables.Summary(page, result);
        page.Element("h2", "What was computed");
        foreach (string paragraph in ReportWords.Of(result))
        {
            page.Element("p", paragraph);
        }

        AddPictures(page, pictures.Where(p => p.Kind == "device"));
        if (data.Charts.Count > 0)
        {
            page.Element("h2", "Curves").Raw("<div class=\"charts\">");
            data.Charts.Where(c => c.Id != "refinement").ToList().ForEach(c => PageShell.Chart(page, c.Id));
            page.Raw("</div>");
            AddStill(page, pictures.Where(p => p.Kind is "curves" or "even"));
        }

        if (data.Maps.Count > 0 || pictures.Any(p => p.Wiring is not null))
        {
            page.Element("h2", "Maps");
            PageShell.Maps(page);
            AddStill(page, pictures.Where(p => p.Wiring is not null));
        }

        AddWirings(page, result);
        page.Element("h2", "Accuracy");
        page.Element("p", "Errors in this report are estimates of the numerical error of the computed voltages; they say nothing about the device itself.");
        if (data.Meshes.Count > 0)
        {
            page.Element("p", ReportWords.LiveAccuracy(data));
        }

        ReportTables.Refinement(page, result);
        page.Raw("<div class=\"figures\">");
        AddPictures(page, pictures.Where(p => p.Kind == "mesh"));
        PageShell.Chart(page, "refinement");
        AddStill(page, pictures.Where(p => p.Kind == "convergence"));
        page.Raw("</div>").Element("h2", "Settings");
        ReportTables.Settings(page, result);
        PageShell.End(page, data.Charts.Count + data.Maps.Count > 0 ? data : null, $"SHA-256 of the device file: {device.Sha256}", path);
    }

    private static void AddWirings(Html page, DriveResult result)
    {
        foreach (Wiring wiring in result.Device.Wirings)
        {
            page.Element("h2", $"Wiring {wiring.Name}");
            ReportTables.Curves(page, result, wiring);
            ReportTables.Exits(page, result, wiring);
        }
    }

    // Still pictures for a reader without scripts; with them the live parts show the same and more.
    internal static void AddStill(Html page, IEnumerable<PictureFile> pictures)
    {
        page.Raw("<noscript>");
        AddPictures(page, pictures);
        page.Raw("</noscript>");
    }

    internal static void AddPictures(Html page, IEnumerable<PictureFile> pictures)
    {
        foreach (PictureFile p in pictures)
        {
            string size = string.Create(CultureInfo.InvariantCulture, $"width=\"{p.Width}\" height=\"{p.Height}\"");
            page.Raw($"<figure><img {size} alt=\"{Html.Escaped(p.Caption)}\" src='data:image/svg+xml,{Quoted(File.ReadAllText(p.SvgPath))}'>");
            page.Element("figcaption", p.Caption).Raw("</figure>");
        }
    }

    // As text an SVG takes three quarters of what base64 would. An address loses its line ends and ends at a number sign, an attribute at its quote.
    private static string Quoted(string svg) => svg.Replace("%", "%25", StringComparison.Ordinal).Replace("#", "%23", StringComparison.Ordinal)
        .Replace("\r", "", StringComparison.Ordinal).Replace("\n", "%0A", StringComparison.Ordinal).Replace("\t", "%09", StringComparison.Ordinal)
        .Replace("&", "&amp;", StringComparison.Ordinal).Replace("'", "&#39;", StringComparison.Ordinal).Replace("<", "&lt;", StringComparison.Ordinal);
}
