using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Readings;
using FieldSolve.Turning;

namespace FieldSolve.Pictures;

/// <summary>The report of a turn: one HTML file like that of a drive, see <see cref="ReportPage"/>; its map follows the direction.</summary>
public static class TurnReport
{
    private const string None = "–";

    /// <summary>Writes the page.</summary>
    /// <param name="result">The turn.</param>
    /// <param name="pictures">Its pictures, already written.</param>
    /// <param name="path">Target file.</param>
    /// <exception cref="IOException">A picture cannot be read or the page cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be read or written.</exception>
    public static void Write(TurnResult result, IReadOnlyList<PictureFile> pictures, string path)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(pictures);
        DriveResult drive = result.Drive;
        SheetDevice device = drive.Device;
        LiveData data = TurnLive.Of(result);
        Html page = new();
        PageShell.Begin(page, device.Title, "turn", $"Turn of {device.Path}, FieldSolve {RunRecord.Version}");
        PageShell.Answer(page, TurnWords.Answer(result));
        page.Box("Cautions", "caution", drive.Cautions);
        page.Box("Warnings", "", drive.Warnings);
        page.Element("h2", "What was computed");
        page.Element("p", Turned(result));
        foreach (string paragraph in ReportWords.Of(drive).Where((_, k) => k != 1))
        {
            page.Element("p", paragraph);
        }

        page.Element("h2", "What the curves say about the sheet");
        Fits(page, result);
        page.Element("h2", "Curves");
        ReportPage.AddPictures(page, pictures.Where(p => p.Kind == "device"));
        page.Raw("<div class=\"charts\">");
        data.Charts.Where(c => c.Id != "refinement").ToList().ForEach(c => PageShell.Chart(page, c.Id));
        page.Raw("</div>");
        ReportPage.AddPictures(page, pictures.Where(p => p.Kind == "polar"));
        ReportPage.AddStill(page, pictures.Where(p => p.Kind is "angles" or "ratios"));
        if (data.Maps.Count > 0 || pictures.Any(p => p.Kind == "potential"))
        {
            page.Element("h2", "Maps");
            PageShell.Maps(page);
            ReportPage.AddStill(page, pictures.Where(p => p.Kind == "potential"));
        }

        page.Element("h2", "Readings at the largest current");
        Readings(page, result);
        page.Element("h2", "Fourier content");
        Harmonics(page, result);
        page.Element("h2", "Accuracy");
        page.Element("p", "Errors in this report are estimates of the numerical error of the computed voltages; they say nothing about the device itself.");
        if (data.Maps.Count > 0)
        {
            page.Element("p", ReportWords.LiveAccuracy(data));
        }

        ReportTables.Refinement(page, drive);
        page.Raw("<div class=\"figures\">");
        ReportPage.AddPictures(page, pictures.Where(p => p.Kind == "mesh"));
        PageShell.Chart(page, "refinement");
        ReportPage.AddStill(page, pictures.Where(p => p.Kind == "convergence"));
        page.Raw("</div>");
        page.Element("h2", "Settings");
        ReportTables.Settings(page, drive);
        PageShell.End(page, data.Charts.Count + data.Maps.Count > 0 ? data : null, $"SHA-256 of the device file: {device.Sha256}", path);
    }

    private static string Turned(TurnResult result)
    {
        int directions = result.Rows.Select(r => (r.DirectionDegrees, r.AxisDegrees, r.Row.Wiring)).Distinct().Count();
        string count = directions.ToString(CultureInfo.InvariantCulture);
        return result.Mode switch
        {
            TurnMode.Ring => $"The first wiring was stepped round a ring of contacts: {count} directions on one mesh.",
            TurnMode.Wirings => $"Every wiring of the file is one direction: {count} directions on one mesh.",
            _ => $"The contacts of wiring {result.Drive.Device.Wirings[0].Name} were kept and the crystal axis was turned in {count} steps through 360°, on one mesh. "
                + "A turn by 180° makes the law K(E) into −K(−E), so half of the directions follow from the other half with the current reversed.",
        };
    }

    private static void Fits(Html page, TurnResult result)
    {
        if (result.Fit is not { } fit)
        {
            page.Element("p", "The run was cancelled before the fits.");
            return;
        }

        page.Element(
            "p",
            "The same curves, in the limit of small drive, read in two ways: with the formulas for a strip with a uniform field, and with the response of this device's own shape and contacts. "
            + "The difference between the two columns is the bias of the strip formulas. The label a goes to the principal axis nearest to the file's axis. Errors come from the misfit and from the numerical errors of the curves.");
        double ratio = Math.Max(fit.Law.A, fit.Law.B) / Math.Min(fit.Law.A, fit.Law.B);
        page.Table(
            "Tensor.",
            ["", "device file", "strip formulas", "device geometry"],
            [
                ["anisotropy ratio", SiScale.Number(ratio, 6), Cell(fit.Strip?.AnisotropyRatio), Cell(fit.Geometry?.AnisotropyRatio)],
                ["axis a (°)", ratio > 1 ? SiScale.Number(Degrees.Wrapped(fit.Law.Axis * 180 / Math.PI), 6) : None, Cell(fit.Strip?.AxisDegrees), Cell(fit.Geometry?.AxisDegrees)],
                ["sheet resistance (Ω)", SiScale.Number(fit.Law.SheetResistance, 6), Cell(fit.Strip?.SheetResistance), Cell(fit.Geometry?.SheetResistance)],
                ["Hall resistance (Ω)", SiScale.Number(fit.Law.HallResistance, 6), Cell(fit.Strip?.HallResistance), Cell(fit.Geometry?.HallResistance)],
                ["misfit / signal", None, Share(fit.Strip?.Misfit, fit.Strip?.Signal), Share(fit.Geometry?.Misfit, fit.Geometry?.Signal)],
            ],
            null, 0);
        if (fit.StripSecond is null && fit.GeometrySecond is null)
        {
            return;
        }

        double[] law = [fit.LawSecond.D11, fit.LawSecond.D12, fit.LawSecond.D16, fit.LawSecond.D21, fit.LawSecond.D22, fit.LawSecond.D26];
        double size = new[] { fit.StripSecond, fit.GeometrySecond }.OfType<FittedSecondOrder>().SelectMany(s => s.Elements).OfType<Fitted>()
            .Select(e => Math.Abs(e.Value)).Concat(law.Select(Math.Abs)).Max();
        int power = size > 0 ? (int)Math.Floor(Math.Log10(size)) : 0;
        double unit = Math.Pow(10, power);
        page.Table(
            $"Second-order elements in 10{SiScale.Raised(power)} A m/V², each column in the frame of its own axis. A dash: the curves do not determine it.",
            ["", "device file", "strip formulas", "device geometry"],
            [
                .. FittedSecondOrder.Names.Select((name, k) => new[]
                {
                    name, SiScale.Number(law[k] / unit, 5), Cell(fit.StripSecond?.Elements[k], unit), Cell(fit.GeometrySecond?.Elements[k], unit),
                }),
                ["misfit / signal", None, Share(fit.StripSecond?.Misfit, fit.StripSecond?.Signal), Share(fit.GeometrySecond?.Misfit, fit.GeometrySecond?.Signal)],
            ],
            null, 0);
        if (fit.Mirror is { } mirror)
        {
            string name = mirror.AlongA ? "d12" : "d21", mixed = mirror.AlongA ? "d11 − 2r²d26" : "d22 − 2r²d16";
            page.Element(
                "p",
                $"The published formula for a strip with one mirror line fits V_across_even / V_along_odd² best with the line along {(mirror.AlongA ? "a" : "b")}: "
                + $"{name} = {Cell(mirror.Perpendicular, unit)}, {mixed} = {Cell(mirror.Mixed, unit)} in the same unit, r = {SiScale.Number(mirror.ResistivityRatio, 4)}; "
                + $"misfit over signal {Share(mirror.Misfit, mirror.Signal)}.");
        }
    }

    private static void Readings(Html page, TurnResult result)
    {
        double current = TurnQuantity.Largest(result);
        TurnRow[] rows = [.. result.Rows.Where(r => r.Row.Current == current)];
        string Text(TurnRow row, string pair, Func<Reading, double?> part, Func<Reading, double?> error) =>
            row.Row.Of(pair) is { } r && part(r) is { } v ? ErrorText.Of(v, error(r), "V") : None;
        page.Table(
            $"I = {SiScale.Text(current, "A")}. Every row and column of the run stands in angles.csv.",
            ["direction", "axis a", "wiring", "V_along odd", "V_across odd", "V_along even", "V_across even", "status"],
            [.. rows.Select(r => new[]
            {
                SiScale.Number(r.DirectionDegrees, 6) + "°", SiScale.Number(r.AxisDegrees, 6) + "°", r.Row.Wiring,
                Text(r, "along", x => x.Odd ?? x.Value, x => x.Error), Text(r, "across", x => x.Odd ?? x.Value, x => x.Error),
                Text(r, "along", x => x.Even, x => x.EvenError), Text(r, "across", x => x.Even, x => x.EvenError), CurvesCsv.StatusText(r.Row.Status),
            })],
            k => rows[k].Row.Status != RowStatus.Ok,
            2);
    }

    private static void Harmonics(Html page, TurnResult result)
    {
        foreach (AngleHarmonics curve in result.Fit?.Harmonics ?? [])
        {
            string unit = curve.Unit == "ohm" ? "Ω" : "Ω/A", what = curve.Unit == "ohm" ? "V/I" : "V/I²";
            page.Table(
                $"{curve.Curve.Replace("_", ", ", StringComparison.Ordinal)}: {what} in the limit of small drive, over the angle of the current from crystal a of the file.",
                ["order n", $"cos n ({unit})", $"sin n ({unit})"],
                [.. curve.Terms.Select(t => new[] { t.Order.ToString(CultureInfo.InvariantCulture), Cell(t.Cos), t.Order == 0 ? None : Cell(t.Sin) })]);
        }
    }

    private static string Cell(Fitted? value, double unit = 1) =>
        value is { } v && double.IsFinite(v.Value) ? ErrorText.In(new(1 / unit, ""), v.Value, v.Error) : None;

    private static string Share(double? misfit, double? signal) => misfit is { } m && signal is { } s && s > 0 ? SiScale.Number(m / s, 2) : None;
}
