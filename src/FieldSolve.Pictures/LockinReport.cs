using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Lockin;
using FieldSolve.Readings;

namespace FieldSolve.Pictures;

/// <summary>The report of an AC run: one HTML file like that of a drive, see <see cref="ReportPage"/>; its map plays the cycle.</summary>
public static class LockinReport
{
    private const string None = "–";
    private const int MostLimits = 3;

    /// <summary>Writes the page.</summary>
    /// <param name="result">The run.</param>
    /// <param name="pictures">Its pictures, already written; their SVG files are read and put into the page.</param>
    /// <param name="path">Target file.</param>
    /// <exception cref="IOException">A picture cannot be read or the page cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be read or written.</exception>
    public static void Write(LockinResult result, IReadOnlyList<PictureFile> pictures, string path)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(pictures);

        SheetDevice device = result.Device;
        DriveResult common = result.Common();
        LiveData data = LockinLive.Of(result);
        Html page = new();
        PageShell.Begin(page, device.Title, "lock-in", $"AC drive of {device.Path}, FieldSolve {RunRecord.Version}");
        PageShell.Answer(page, LockinWords.Answer(result));
        page.Box("Cautions", "caution", result.Cautions);
        page.Box("Warnings", "", result.Warnings);
        page.Element("h2", "What was computed");
        foreach (string paragraph in Words(result))
        {
            page.Element("p", paragraph);
        }

        page.Element("h2", "Summary");
        Growth(page, result);
        Limits(page, result);
        ReportPage.AddPictures(page, pictures.Where(p => p.Kind == "device"));
        page.Element("h2", "Curves").Raw("<div class=\"charts\">");
        data.Charts.Where(c => c.Id != "refinement").ToList().ForEach(c => PageShell.Chart(page, c.Id));
        page.Raw("</div>");
        ReportPage.AddStill(page, pictures.Where(p => p.Kind is "waves" or "second"));
        page.Element("h2", "Maps");
        PageShell.Maps(page);
        if (data.Maps.Count == 0)
        {
            page.Element("p", "No wiring reached an answer whose cycle could be shown.");
        }

        foreach (Wiring wiring in device.Wirings)
        {
            page.Element("h2", $"Wiring {wiring.Name}");
            Harmonics(page, result, wiring);
            ReportPage.AddStill(page, pictures.Where(p => p.Wiring == wiring.Name));
        }

        page.Element("h2", "Accuracy");
        page.Element("p", "Errors in this report are estimates of the numerical error of the computed harmonics; they say nothing about the device itself.");
        if (data.Maps.Count > 0)
        {
            page.Element("p", ReportWords.LiveAccuracy(data));
        }

        ReportTables.Refinement(page, common);
        page.Raw("<div class=\"figures\">");
        ReportPage.AddPictures(page, pictures.Where(p => p.Kind == "mesh"));
        PageShell.Chart(page, "refinement");
        ReportPage.AddStill(page, pictures.Where(p => p.Kind == "convergence"));
        page.Raw("</div>");
        page.Element("h2", "Settings");
        ReportTables.Settings(page, common);
        PageShell.End(page, data.Charts.Count + data.Maps.Count > 0 ? data : null, $"SHA-256 of the device file: {device.Sha256}", path);
    }

    private static IEnumerable<string> Words(LockinResult result)
    {
        DriveSpec drive = result.Device.Drive!;
        string currents = string.Join(", ", drive.Currents.Select(i => SiScale.Text(i, "A")));
        yield return $"I(t) = {(drive.Offset == 0 ? "" : SiScale.Text(drive.Offset, "A") + " + ")}√2 I sin(2πft) with I = {currents} RMS"
            + (drive.Frequencies.Count == 0 ? "." : $", f = {string.Join(", ", drive.Frequencies.Select(f => SiScale.Text(f, "Hz")))}.")
            + " Harmonics are RMS values: x along sin(2πkft), y along cos(2πkft), phase = atan2(y, x); harmonic 0 is the DC part.";
        yield return result.Device.GateCapacitance is > 0 and { } c
            ? $"The sheet lies over a gate at 0 V with {SiScale.Text(c, "F/m²")}; the drain is at 0 V. Only the sheet outside the metal carries charge."
            : "Without a gate capacitance the sheet has no memory: the voltages follow the current at every moment, and the frequency does not matter.";
        int ok = result.Points.Count(p => p.Status == RowStatus.Ok);
        yield return string.Create(
            CultureInfo.InvariantCulture,
            $"The finest mesh has {ReportWords.Grouped(result.Figures.Triangles)} quadratic triangles and {ReportWords.Grouped(result.Figures.Unknowns)} unknowns. {ok} of {result.Points.Count} points are ok.")
            + (result.Cancelled ? " The run was cancelled; what follows is what was finished." : "");
    }

    private static void Growth(Html page, LockinResult result)
    {
        double? last = result.Device.Drive!.Frequencies.Count == 0 ? null : result.Device.Drive.Frequencies[^1];
        HarmonicSlope[] slopes = [.. result.Slopes.Where(s => s.Frequency == last)];
        string[] pairs = [.. slopes.Select(s => s.Pair).Distinct()];
        string Cell(string wiring, string pair, int h) => slopes.FirstOrDefault(s => s.Wiring == wiring && s.Pair == pair && s.Harmonic == h) is { } s
            ? s.Slope.ToString("F3", CultureInfo.InvariantCulture)
            : None;
        page.Table(
            "Slope of log r against log I; a weak non-linearity gives the number of the harmonic. From readings at least ten error bars high.",
            ["wiring", "pair", "harmonic 1", "harmonic 2", "harmonic 3"],
            [.. result.Device.Wirings.SelectMany(w => pairs.Where(p => slopes.Any(s => s.Wiring == w.Name && s.Pair == p))
                .Select(p => new[] { w.Name, p, Cell(w.Name, p, 1), Cell(w.Name, p, 2), Cell(w.Name, p, 3) }))],
            null, 0, 1);
    }

    private static void Limits(Html page, LockinResult result)
    {
        FrequencyLimit[] limits =
        [
            .. result.Device.Wirings.SelectMany(w => result.Limits.Where(l => l.Wiring == w.Name)
                .GroupBy(l => l.CurrentRms).MaxBy(g => g.Key)?.Where(l => l.Harmonic is >= 1 and <= MostLimits) ?? []),
        ];
        page.Table(
            "Frequency below which the quasi-static reading holds to 1 % at the largest current: the gate's charge then moves (x, y) by less than that share of r.",
            ["wiring", "pair", "harmonic", "frequency"],
            [.. limits.Select(l => new[] { l.Wiring, l.Pair, l.Harmonic.ToString(CultureInfo.InvariantCulture), SiScale.Text(l.Frequency, "Hz", 3) })],
            null, 0, 1);
    }

    private static void Harmonics(Html page, LockinResult result, Wiring wiring)
    {
        var rows = new List<(string[] Cells, bool Doubtful)>();
        foreach (LockinPoint p in result.Points.Where(p => p.Wiring == wiring.Name))
        {
            string[] head = [SiScale.Text(p.CurrentRms, "A"), p.Frequency is { } f ? SiScale.Text(f, "Hz") : None];
            foreach (HarmonicReading r in p.Readings.Where(r => r.Harmonic <= MostLimits))
            {
                rows.Add((
                    [
                        .. head, r.Pair, r.Harmonic.ToString(CultureInfo.InvariantCulture), ErrorText.Of(r.X, r.Error, "V"), ErrorText.Of(r.Y, r.Error, "V"),
                        CurvesCsv.StatusText(r.Status),
                    ], r.Status != RowStatus.Ok));
            }

            if (p.Readings.Count == 0)
            {
                rows.Add(([.. head, None, None, None, None, CurvesCsv.StatusText(p.Status)], true));
            }
        }

        page.Table(
            $"Source {result.Device.Contacts[wiring.Source].Name}, drain {result.Device.Contacts[wiring.Drain].Name}. All pairs and harmonics 0 to 5 stand in harmonics.csv.",
            ["I, RMS", "f", "pair", "harmonic", "x", "y", "status"], [.. rows.Select(r => r.Cells)], r => rows[r].Doubtful);
    }
}
