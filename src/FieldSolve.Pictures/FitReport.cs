using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>The report of a fit: numbers, what the data cannot tell, pictures and tables in one HTML file.</summary>
public static class FitReport
{
    /// <summary>Writes the page.</summary>
    /// <param name="result">The fit.</param>
    /// <param name="pictures">Its pictures, already written; their SVG files are put into the page.</param>
    /// <param name="path">Target file.</param>
    /// <exception cref="IOException">A picture cannot be read or the page cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be read or written.</exception>
    public static void Write(FitResult result, IReadOnlyList<PictureFile> pictures, string path)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(pictures);
        SheetDevice device = result.Device;
        LiveData data = FitLive.Of(result);
        Html page = new();
        PageShell.Begin(page, device.Title, "fit", $"Fit of {device.Path} to {result.Measured.Path}, FieldSolve {RunRecord.Version}");
        PageShell.Answer(page, FitWords.Answer(result));
        page.Box("Cautions", "caution", result.Cautions);
        page.Box("Warnings", "", result.Warnings);
        page.Element("h2", "Fitted numbers");
        Numbers(page, result);
        ReportPage.AddPictures(page, pictures.Where(p => p.Kind == "device"));
        page.Element("h2", "Data, model and what is left");
        page.Raw("<div class=\"charts\">");
        data.Charts.ForEach(c => PageShell.Chart(page, c.Id));
        page.Raw("</div>");
        ReportPage.AddStill(page, pictures.Where(p => Replaced(p, data)));
        ReportPage.AddPictures(page, pictures.Where(p => p.Kind != "device" && !Replaced(p, data)));
        if (!result.Parameters.Any(p => p.Profile.Count > 0))
        {
            page.Element("p", "Profile likelihoods are shown where a number of [fit] asks for its interval, or for all of them with --intervals.");
        }

        page.Element("h2", "What the data determine");
        Directions(page, result);
        Next(page, result);
        Formulas(page, result);
        page.Element("h2", "Accuracy").Element("p", Accuracy(result));
        page.Element("h2", "Settings");
        Settings(page, result);
        PageShell.End(page, data.Charts.Count > 0 ? data : null, $"SHA-256 of the device file: {device.Sha256}; of the data: {result.Measured.Sha256}", path);
    }

    // The live charts show the same and more.
    private static bool Replaced(PictureFile picture, LiveData data) => data.Charts.Any(c => c.Id == picture.Kind);

    private static void Numbers(Html page, FitResult result) => page.Table(
        "One standard error each, from the stated sigmas; 95 % intervals by profile likelihood where asked for.",
        ["number", "fitted", "unit", "95 %", "start", "prior"],
        [.. result.Parameters.Select(p =>
        {
            // Units of one letter take a prefix: "A m/V²" with one would not be what the file says.
            SiScale scale = p.Parameter.Unit is "S" or "m"
                ? SiScale.For(new[] { p.Value, p.StandardError, p.Parameter.Start }.Max(v => Math.Abs(v ?? 0)), p.Parameter.Unit) : new(1 / p.Parameter.UnitSize, FitWords.Unit(p.Parameter.Unit));
            double u = 1 / scale.Factor;
            string end(double? x) => x is { } y ? SiScale.Number(y / u, 6) : "bound";
            return new[]
            {
                $"{p.Parameter.Label}: {p.Parameter.Kind.Meaning}",
                p.Value is { } v ? Fitted(v / u, p.StandardError!.Value / u) : "not determined",
                scale.Unit,
                p.Interval is { } i ? $"{end(i.Low)} to {end(i.High)}" : "–",
                SiScale.Number(p.Parameter.Start / u, 6),
                p.Parameter.PriorSigma is { } s ? $"{SiScale.Number(p.Parameter.PriorMean / u, 4)} ± {SiScale.Number(s / u, 3)}" : "–",
            };
        })],
        k => result.Parameters[k].Value is null || result.Parameters[k].AtBound, 0);

    // Value and error with one power of ten for both.
    private static string Fitted(double value, double error)
    {
        double size = Math.Max(Math.Abs(value), error);
        int exponent = size > 0 ? (int)Math.Floor(Math.Log10(size)) : 0;
        if (exponent is >= -2 and < 5)
        {
            return ErrorText.In(new(1, ""), value, error);
        }

        return $"({ErrorText.In(new(Math.Pow(10, -exponent), ""), value, error)})·10{SiScale.Raised(exponent)}";
    }

    private static string Accuracy(FitResult result)
    {
        FitQuality q = result.Quality;
        string runs = q.RunsZ is { } z ? string.Create(CultureInfo.InvariantCulture, $" Runs of equal signs along the currents: {z:0.0} standard deviations from chance.").Replace('-', '−') : "";
        return string.Create(
            CultureInfo.InvariantCulture,
            $"The numerical error of the model is at most {100 * result.NumericalShare:G2} % of a datum's standard deviation ({100 * result.WantedShare:G2} % were allowed), on {ReportWords.Grouped(result.Unknowns.Coarse)} unknowns corrected by {ReportWords.Grouped(result.Unknowns.Fine)}. The largest of {result.Data.Count} residuals is {Math.Abs(q.Largest):0.0} standard deviations, in line {q.LargestLine} of the data; so large a one is found by chance with a probability of {q.LargestProbability:G2}.")
            + runs + (result.Robust ? " Outliers count less (Student's t, four degrees of freedom)." : "");
    }

    private static void Settings(Html page, FitResult result) => page.Table(
        "", ["setting or figure", "value"],
        [
            ["device file", result.Device.Path], ["data", result.Measured.Path], ["sheet law", result.Device.Law.Kind],
            ["voltages", ReportWords.Grouped(result.Data.Count)], ["free numbers", ReportWords.Grouped(result.Parameters.Count)],
            ["loss", result.Robust ? "Student's t, four degrees of freedom" : "squares"], ["steps of the last fit", ReportWords.Grouped(result.Steps)],
            ["starts", ReportWords.Grouped(result.Starts.Count)], ["states solved", ReportWords.Grouped(result.Solves.States)], ["adjoint states solved", ReportWords.Grouped(result.Solves.Adjoints)],
        ],
        null, 0);

    private static void Directions(Html page, FitResult result) => page.Table(
        "Singular values of the sensitivities over sigma, in natural scales of the numbers (a and b by their own size): one over the standard deviation of the combination beside.",
        ["singular value", "combination", ""],
        [.. result.Directions.Select(d => new[]
        {
            SiScale.Number(d.SingularValue, 3),
            string.Join(", ", d.Direction.Select((v, j) => (v, j)).Where(x => Math.Abs(x.v) >= 0.15).OrderByDescending(x => Math.Abs(x.v)).Take(6)
                .Select(x => $"{SiScale.Number(x.v, 2)} {result.Parameters[x.j].Parameter.Label}")),
            d.Determined ? "determined" : d.Words,
        })],
        k => !result.Directions[k].Determined, 1, 2);

    private static void Next(Html page, FitResult result)
    {
        if (result.Next.Count > 0)
        {
            page.Element("h2", "What to measure next");
        }

        page.Table(
            "Each reading in the order that shrinks the joint uncertainty most, with the noise of the present data.",
            ["source", "drain", "read", "current", "joint uncertainty over", "helps most"],
            [.. result.Next.Select(n => new[]
            {
                n.Source, n.Drain, $"{n.Plus} − {n.Minus}", SiScale.Text(n.Current, "A", 3), SiScale.Number(n.Gain, 3), $"{n.Helped}: {SiScale.Number(n.After / n.Before, 2)} of its standard error",
            })],
            null, 5);
    }

    private static void Formulas(Html page, FitResult result)
    {
        if (result.Formulas.Count > 0)
        {
            page.Element("h2", "What geometry is worth");
        }

        page.Table(
            "The same data by textbook formulas: pairs as tips on a uniform strip as wide as the sheet is across the current, four contacts as points on the rim.",
            ["formula", "number", "by the formula", "fit", "unit", "off, in standard errors of the fit"],
            [.. result.Formulas.Select(f => new[]
            {
                f.Method, f.Key, SiScale.Number(f.Value, 5), f.Fitted is { } v ? SiScale.Number(v, 5) : "–", FitWords.Unit(f.Unit), f.Off is { } off ? SiScale.Number(off, 3) : "–",
            })],
            null, 0, 1);
    }
}
