using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Readings;

namespace FieldSolve.Pictures;

/// <summary>What a drive computed, in sentences.</summary>
internal static class ReportWords
{
    /// <summary>The answer, one sentence per wiring.</summary>
    public static IEnumerable<string> Answer(DriveResult result)
    {
        foreach (WiringSummary s in result.Summaries)
        {
            List<string> parts = [];
            void Add(string name, double? ohms)
            {
                if (ohms is { } r && double.IsFinite(r))
                {
                    parts.Add($"{name} {SiScale.Text(r, "Ω", 6)}");
                }
            }

            Add("along", s.Along);
            Add("across", s.Across);
            Add("between source and drain", s.TwoTerminal);
            string text = $"Wiring {s.Wiring}{(s.HasDirection ? $", current at {SiScale.Number(Math.Round(s.DirectionDegrees, 3), 6)}°" : "")}: "
                + (parts.Count > 0 ? "at small drive " + string.Join(", ", parts) + "." : "no row could be solved.");
            if (!result.Device.Law.IsLinear && s.Slope is { } fit && double.IsFinite(fit.Slope))
            {
                text += $" The even across voltage is {ErrorText.In(new(1, ""), fit.Slope, fit.SlopeError)} /V times the square of the odd along voltage"
                    + (double.IsFinite(fit.RSquared) ? $" (R² = {SiScale.Number(fit.RSquared, 6)})." : ".");
            }

            yield return text + (s.LeftLawAt is { } left ? $" The law is left from {SiScale.Text(left, "A")} on." : $" The law holds up to {SiScale.Text(s.Largest, "A")}.");
        }
    }

    /// <summary>What the numbers of the live maps are.</summary>
    public static string LiveAccuracy(LiveData data)
    {
        double error = data.Laws.Count > 0 ? data.Laws.Max(l => l.Error) : 0;
        return $"The live maps carry the potential of the finest mesh at all {Grouped(data.Meshes[0].Count)} nodes, to one part in four thousand million of its range. "
            + "A reading under the pointer, and every profile, comes from the quadratic element itself, as in the solver; "
            + "the colours take field and current straight between averages at the nodes. "
            + (error > 1e-6 ? $"K follows the law to {SiScale.Number(error, 2)} of itself." : "K follows the law to better than a millionth.");
    }

    /// <summary>The paragraphs.</summary>
    public static IEnumerable<string> Of(DriveResult result)
    {
        SheetDevice device = result.Device;
        yield return string.Create(CultureInfo.InvariantCulture, $"{Sheet(device)} It carries {Count(device.Contacts.Count, "contact")}")
            + (device.Tips.Count > 0 ? $" and {Count(device.Tips.Count, "voltage tip")}" : "")
            + $". The sheet law is {device.Law.Kind}; crystal axis a lies at {SiScale.Number(Math.Round(device.Axis * 180 / Math.PI, 6), 6)}° from lab x.";
        if (device.Drive is { } drive)
        {
            string range = drive.Steps == 1
                ? SiScale.Text(drive.From, "A")
                : $"{drive.Steps.ToString(CultureInfo.InvariantCulture)} values from {SiScale.Text(drive.From, "A")} to {SiScale.Text(drive.To, "A")}";
            yield return $"{Count(device.Wirings.Count, "wiring")}, current: {range}"
                + (drive.BothSigns
                    ? ", each solved with both signs on the same mesh: the odd part is half the difference of the two readings, the even part half their sum."
                    : ", one sign only.")
                + " Contacts outside a wiring float: each is one potential and carries no net current.";
        }

        int ok = result.Rows.Count(r => r.Status == RowStatus.Ok);
        yield return string.Create(
            CultureInfo.InvariantCulture,
            $"The finest mesh has {Grouped(result.Figures.Triangles)} quadratic triangles and {Grouped(result.Figures.Unknowns)} unknowns. {ok} of {result.Rows.Count} rows are ok.")
            + (result.AllOk ? "" : $" Not ok: {Others(result)}; they are marked in the tables and ringed in the plots.")
            + (result.Cancelled ? " The run was cancelled; what follows is what was finished." : "");
    }

    private static string Others(DriveResult result) => string.Join(", ", result.Rows.Where(r => r.Status != RowStatus.Ok)
        .GroupBy(r => r.Status).OrderBy(g => g.Key)
        .Select(g => string.Create(CultureInfo.InvariantCulture, $"{g.Count()} {CurvesCsv.StatusText(g.Key)}")));

    /// <summary>A whole number with thin spaces between thousands.</summary>
    public static string Grouped(long number) => number.ToString("N0", CultureInfo.InvariantCulture).Replace(',', '\u202f');

    private static string Sheet(SheetDevice device)
    {
        string text = device.Shape switch
        {
            "hall_bar" => "The sheet is a Hall bar",
            "outline" => "The sheet is a polygon",
            _ => $"The sheet is a {device.Shape}",
        };
        List<string> details = [];
        if (device.Thickness is { } thickness)
        {
            details.Add($"{SiScale.Text(thickness, "m")} thick");
        }

        if (device.DeadEdge > 0)
        {
            details.Add($"with a dead edge of {SiScale.Text(device.DeadEdge, "m")}");
        }

        return text + (details.Count > 0 ? ", " + string.Join(", ", details) : "") + ".";
    }

    private static string Count(int number, string thing) =>
        number.ToString(CultureInfo.InvariantCulture) + " " + thing + (number == 1 ? "" : "s");
}
