using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>The report of a tolerance run: answers in words, tables and pictures in one HTML file.</summary>
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
        Html page = new();
        PageShell.Begin(page, device.Title, "tolerance", $"Tolerance of {device.Path}, FieldSolve {RunRecord.Version}");
        page.Box("Cautions", "caution", result.Cautions);
        page.Box("Warnings", "", result.Warnings);
        page.Element("h2", "Answers");
        foreach (string answer in result.Answers)
        {
            page.Element("p", char.ToUpperInvariant(answer[0]) + answer[1..]);
        }

        page.Element("h2", "What was computed");
        page.Element("p", $"{device.Tolerance!.Causes.Count} causes of error at {SiScale.Text(result.Current, "A")} and reversed. The budget multiplies the exact derivative of each reading with the standard deviation of each cause. The samples are {ReportWords.Grouped(result.Samples.Count)} devices with all causes at once, each solved in full with the law as it stands, on a mesh of {ReportWords.Grouped(result.Unknowns.Coarse)} unknowns that moves with the contacts; what a mesh of {ReportWords.Grouped(result.Unknowns.Fine)} unknowns adds to the design is added to each.");
        Causes(page, device);
        ReportPage.AddPictures(page, pictures.Where(p => p.Wiring is null));
        foreach (Wiring wiring in device.Wirings)
        {
            page.Element("h2", $"Wiring {wiring.Name}");
            Statistics(page, result, wiring);
            ReportPage.AddPictures(page, pictures.Where(p => p.Wiring == wiring.Name));
            Largest(page, result, wiring);
        }

        PageShell.End(page, null, $"SHA-256 of the device file: {device.Sha256}", path);
    }

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
        string Unit(SampleStatistics s) => s.Quantity.IsRatio ? "" : "V";
        string Text(SampleStatistics s, double v, int digits) => s.Quantity.IsRatio ? SiScale.Number(v, digits) : SiScale.Text(v, "V", digits);
        string Of(SampleStatistics s, SampleEstimate e, int digits) => s.Count < 2 ? "–" : $"{Text(s, e.Value, digits)} ({Text(s, e.Low, digits)} to {Text(s, e.High, digits)})";
        page.Table(
            "As designed with its numerical error, then the scatter: first order with what a finer mesh would change of it, and the samples with 95 % intervals.",
            ["reading", "as designed", "sigma, first order", "mean", "sigma", "5 %", "50 %", "95 %"],
            [.. own.Select(s => new[]
            {
                s.Quantity.Label,
                s.Quantity.IsRatio ? ErrorText.In(new(1, ""), s.Design, s.NumericalError) : ErrorText.Of(s.Design, s.NumericalError, Unit(s)),
                $"{Text(s, s.FirstOrder, 4)} ± {Text(s, s.SpreadError, 1)}",
                Of(s, s.Mean, 5), Of(s, s.Deviation, 3), Of(s, s.Percentiles[0], 4), Of(s, s.Percentiles[1], 4), Of(s, s.Percentiles[2], 4),
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
