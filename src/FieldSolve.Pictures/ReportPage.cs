using System.Globalization;
using System.Reflection;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Readings;

namespace FieldSolve.Pictures;

/// <summary>
/// The report of a drive: one HTML file that holds its pictures, fetches nothing, runs no script and prints on A4. It carries no
/// clock time, so the same run gives the same page.
/// </summary>
public static class ReportPage
{
    internal const string Policy = "default-src 'none'; img-src data:; style-src 'unsafe-inline'; base-uri 'none'; form-action 'none'";

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
        Html page = new();
        Begin(page, $"{device.Title} – drive", device.Title, $"Drive of {device.Path}, FieldSolve {RunRecord.Version}");

        page.Box("Cautions", "caution", result.Cautions);
        page.Box("Warnings", "", result.Warnings);
        page.Element("h2", "What was computed");
        foreach (string paragraph in ReportWords.Of(result))
        {
            page.Element("p", paragraph);
        }

        page.Element("h2", "Summary");
        ReportTables.Summary(page, result);
        AddPictures(page, pictures.Where(p => p.Wiring is null && p.Kind is not ("mesh" or "convergence")));
        AddWirings(page, result, pictures);
        page.Element("h2", "Accuracy");
        page.Element("p", "Errors in this report are estimates of the numerical error of the computed voltages; they say nothing about the device itself.");
        ReportTables.Refinement(page, result);
        AddPictures(page, pictures.Where(p => p.Kind is "mesh" or "convergence"));
        page.Element("h2", "Settings");
        ReportTables.Settings(page, result);
        End(page, device);
        WholeFile.WriteText(path, page.ToString());
    }

    /// <summary>Head of a page and the header of its body.</summary>
    internal static void Begin(Html page, string windowTitle, string title, string line)
    {
        page.Raw("<!DOCTYPE html>").Raw("<html lang=\"en\">").Raw("<head>").Raw("<meta charset=\"utf-8\">");
        page.Raw($"<meta http-equiv=\"Content-Security-Policy\" content=\"{Policy}\">");
        page.Raw("<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">").Element("title", windowTitle);
        page.Raw("<style>").Raw(Style()).Raw("</style>").Raw("</head>").Raw("<body>");
        page.Raw("<header>").Element("h1", title).Element("p", line).Raw("</header>");
    }

    /// <summary>Footer and end of a page.</summary>
    internal static void End(Html page, SheetDevice device) =>
        page.Raw("<footer>").Element("p", $"SHA-256 of the device file: {device.Sha256}").Raw("</footer>").Raw("</body>").Raw("</html>");

    private static void AddWirings(Html page, DriveResult result, IReadOnlyList<PictureFile> pictures)
    {
        foreach (Wiring wiring in result.Device.Wirings)
        {
            page.Element("h2", $"Wiring {wiring.Name}");
            ReportTables.Curves(page, result, wiring);
            ReportTables.Exits(page, result, wiring);
            AddPictures(page, pictures.Where(p => p.Wiring == wiring.Name));
        }
    }

    /// <summary>Pictures with their captions, embedded.</summary>
    internal static void AddPictures(Html page, IEnumerable<PictureFile> pictures)
    {
        foreach (PictureFile p in pictures)
        {
            string data = Convert.ToBase64String(File.ReadAllBytes(p.SvgPath));
            string size = string.Create(CultureInfo.InvariantCulture, $"width=\"{p.Width}\" height=\"{p.Height}\"");
            page.Raw($"<figure><img {size} style=\"height:auto\" alt=\"{Html.Escaped(p.Caption)}\" src=\"data:image/svg+xml;base64,{data}\">");
            page.Element("figcaption", p.Caption).Raw("</figure>");
        }
    }

    internal static string Style()
    {
        using Stream stream = Assembly.GetExecutingAssembly().GetManifestResourceStream("report.css")
            ?? throw new InvalidOperationException("The embedded style sheet report.css is missing from the assembly.");
        using StreamReader reader = new(stream);
        return reader.ReadToEnd();
    }
}
