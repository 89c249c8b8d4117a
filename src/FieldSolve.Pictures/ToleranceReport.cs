using System.Globalization;
using System.Text.RegularExpressions;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>The report of a tolerance run: answers in words, tables and live charts in one HTML file like that of a drive, see <see cref="ReportPage"/>.</summary>
public static class ToleranceReport
{
    private const int MostCauses = 12;

    /// <summary>Writes the page.</summary>
    /// <param name="result">The run.</param>
    /// <param name="pictures">Pictures of the run, already written; their SVG files are read and put into the page.</param>
    /// <param name="path">Target file.</param>
    /// <exception cref="IOException">A picture cannot be read or the page cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be read or written.</exception>
    public static void Write(ToleranceResult result, IReadOnlyList<PictureFile> pictures, string path)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(pictures);
        SheetDevice device = result.Device;
        LiveData data = ToleranceLive.Of(result);
        Html page = new();
        PageShell.Begin(page, device.Title, "tolerance", $"Tolerance of {device.Path}, FieldSolve {RunRecord.Version}");
        PageShell.Answer(page, result.Answers.Select(Printed));
        page.Box("Cautions", "caution", result.Cautions);
        page.Box("Warnings", "", result.Warnings);
        page.Element("h2", "What was computed");
        page.Element("p", $"{device.Tolerance!.Causes.Count} causes of error at {SiScale.Text(result.Current, "A")} and reversed. The budget multiplies the exact derivative of each reading with the standard deviation of each cause. The samples are {ReportWords.Grouped(result.Samples.Count)} devices with all causes at once, each solved in full with the law as it stands, on a mesh of {ReportWords.Grouped(result.Unknowns.Coarse)} unknowns that moves with the contacts; what a mesh of {ReportWords.Grouped(result.Unknowns.Fine)} unknowns adds to the design is added to each.");
        Causes(page, device);
        ReportPage.AddPictures(page, pictures.Where(p => p.Kind == "device"));
        if (data.Share is not null)
        {
            page.Element("h2", "Contacts");
            PageShell.Share(page);
            ReportPage.AddStill(page, pictures.Where(p => p.Kind == "share"));
        }

        for (int w = 0; w < device.Wirings.Count; w++)
        {
            Wiring wiring = device.Wirings[w];
            page.Element("h2", $"Wiring {wiring.Name}");
            Statistics(page, result, wiring);
            page.Raw("<div class=\"charts\">");
            PageShell.Chart(page, ToleranceLive.BudgetId(w));
            PageShell.Chart(page, ToleranceLive.SamplesId(w));
            page.Raw("</div>");
            ReportPage.AddStill(page, pictures.Where(p => p.Wiring == wiring.Name));
            Largest(page, result, wiring);
        }

        page.Element("h2", "Accuracy").Element("p", Accuracy(result));
        page.Element("h2", "Settings");
        Settings(page, result);
        PageShell.End(page, data.Charts.Count > 0 || data.Share is not null ? data : null, $"SHA-256 of the device file: {device.Sha256}", path);
    }

    // Answers are also said on a terminal, without a true minus.
    private static string Printed(string answer) => Regex.Replace(answer, @"(?<=[\s(])-(?=\d)", "−");

    private static string Accuracy(ToleranceResult result)
    {
        SampleStatistics[] sampled = [.. result.Statistics.Where(s => s.Count > 1 && s.Deviation.Value > 0)];
        return "The error beside each value as designed is the numerical error of that voltage; that beside each first-order scatter is what a finer mesh would change of it."
            + (sampled.Length == 0 ? "" : $" Over all readings it is at most {SiScale.Number(100 * sampled.Max(s => s.SpreadError / s.Deviation.Value), 2)} % of the sampled scatter. The intervals are for the number of samples.")
            + " None of this says how well the sizes of the causes are known.";
    }

    private static void Settings(Html page, ToleranceResult result) => page.Table(
        "", ["setting or figure", "value"],
        [
            ["current, with both signs", SiScale.Text(result.Current, "A")], ["samples", ReportWords.Grouped(result.Samples.Count)],
            ["sheet law", result.Device.Law.Kind], ["causes", ReportWords.Grouped(result.Device.Tolerance!.Causes.Count)],
            ["unknowns of the finest mesh", ReportWords.Grouped(result.Unknowns.Fine)], ["unknowns of the mesh of the samples", ReportWords.Grouped(result.Unknowns.Coarse)],
            ["wanted error of a voltage, relative to the largest along voltage", SiScale.Number(result.Device.Mesh.Error)],
        ],
        null, 0);

    private static void Causes(Html page, SheetDevice device) => page.Table(
        "Causes, one standard deviation each.",
        ["cause", "befalls", "sigma", "distribution"],
        [.. device.Tolerance!.Causes.GroupBy(c => (c.Kind, c.Sigma, c.Shape)).Select(g => new[]
        {
            $"{g.Key.Kind.Key}: {g.Key.Kind.Meaning}",
            g.First().Target.Name.Length == 0 ? "the sheet" : string.Join(", ", g.Select(c => c.Target.Name)),
            BudgetPicture.SizeOf(g.First()),
            g.Key.Shape == CauseShape.Normal ? "normal" : "uniform",
        })],
        null, 0, 1);

    private static void Statistics(Html page, ToleranceResult result, Wiring wiring)
    {
        SampleStatistics[] own = [.. result.Statistics.Where(s => s.Quantity.Wiring == wiring.Name)];
        SiScale Scale(SampleStatistics s, double size) => s.Quantity.IsRatio ? new(1, "") : SiScale.For(size, "V");

        // An estimate and below it its interval, in one unit.
        string Of(SampleStatistics s, SampleEstimate e, int digits)
        {
            if (s.Count < 2)
            {
                return "–";
            }

            SiScale scale = Scale(s, Math.Max(Math.Abs(e.Low), Math.Abs(e.High)));
            string Number(double v) => SiScale.Number(v * scale.Factor, digits);
            return $"{Number(e.Value)} {scale.Unit}".TrimEnd() + $"\n{Number(e.Low)} to {Number(e.High)}";
        }

        page.Table(
            "As designed with its numerical error; the scatter in first order with what a finer mesh would change of it; then the samples, each with its 95 % interval below.",
            ["reading", "as designed", "sigma, first order", "mean", "sigma", "5 %", "50 %", "95 %"],
            [.. own.Select(s => new[]
            {
                s.Quantity.Label,
                s.Quantity.IsRatio ? ErrorText.In(new(1, ""), s.Design, s.NumericalError) : ErrorText.Of(s.Design, s.NumericalError, "V"),
                $"{ErrorText.In(Scale(s, s.FirstOrder), s.FirstOrder, s.SpreadError)} {Scale(s, s.FirstOrder).Unit}".TrimEnd(),
                Of(s, s.Mean, 4), Of(s, s.Deviation, 3), Of(s, s.Percentiles[0], 3), Of(s, s.Percentiles[1], 3), Of(s, s.Percentiles[2], 3),
            })],
            k => own[k].Count > 1 && own[k].SpreadError > 0.1 * own[k].Deviation.Value);
    }

    private static void Largest(Html page, ToleranceResult result, Wiring wiring)
    {
        BudgetEntry[] entries =
        [
            .. result.Budget.Where(e => e.Quantity.Wiring == wiring.Name && e.Quantity.Pair == (wiring.Across is null ? "along" : "across")
                && e.Quantity.Part == ReadingPart.Odd && e.Contribution != 0).Take(MostCauses),
        ];
        page.Table(
            $"Largest contributions to the odd part of V_{(wiring.Across is null ? "along" : "across")}; all of them stand in budget.csv.",
            ["cause", "sigma", "contribution", "order"],
            [.. entries.Select(e => new[]
            {
                e.Cause.Label, BudgetPicture.SizeOf(e.Cause), ErrorText.Of(e.Contribution, e.Error, "V"), e.Order.ToString(CultureInfo.InvariantCulture),
            })],
            null, 0);
    }
}
