using System.Globalization;
using FieldSolve.Fields;
using FieldSolve.Files;
using FieldSolve.Pictures;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Writes the results of a drive into its folder; each file appears whole or not at all.</summary>
internal static class DriveFiles
{
    /// <summary>What to write, and what run.json says about how it came about.</summary>
    internal sealed record Choices(MapChoice Maps, bool AllSigns, bool Pictures, bool Quick, IReadOnlyList<string> Shifts);

    /// <returns>The result; marked as cancelled if that came while the pictures were drawn: all else is written then.</returns>
    public static DriveResult Write(
        DriveResult result, string folder, Choices choices, Screen screen, CancellationToken cancel)
    {
        CurvesCsv.Write(
            Path.Combine(folder, "curves.csv"), result.Device.Wirings, result.Rows, choices.AllSigns ? result.ReversedRows : null);
        var clock = new StageClock();
        clock.Time("maps", () => Maps(result, folder, choices.Maps, screen));
        bool cancelled = choices.Pictures && PictureStage.IsCancelled(clock, screen, () =>
        {
            IReadOnlyList<PictureFile> drawn = DrivePictures.Write(result, Path.Combine(folder, "pictures"), cancel);
            ReportPage.Write(result, drawn, Path.Combine(folder, "report.html"));
        });
        if (cancelled)
        {
            result = result with { Cancelled = true };
        }

        var options = new Dictionary<string, string>
        {
            ["maps"] = choices.Maps.ToString().ToLower(CultureInfo.InvariantCulture),
            ["all-signs"] = choices.AllSigns ? "true" : "false",
            ["pictures"] = choices.Pictures ? "true" : "false",
            ["quick"] = choices.Quick ? "true" : "false",
        };
        if (choices.Shifts.Count > 0)
        {
            options["shift"] = string.Join("; ", choices.Shifts);
        }

        RunRecord.Write(
            Path.Combine(folder, "run.json"),
            result with { Stages = [.. result.Stages, .. clock.Times] },
            "drive",
            options);
        return result;
    }

    private static void Maps(DriveResult result, string folder, MapChoice maps, Screen screen)
    {
        if (maps == MapChoice.None)
        {
            return;
        }

        int last = result.Device.Drive!.Currents.Count - 1;
        List<FieldMap> wanted = [.. result.Maps.Where(m => maps == MapChoice.All || m.CurrentIndex == last)];
        if (wanted.Count == 0)
        {
            return;
        }

        screen.Report(new("writing maps", 0, 0));
        string into = Path.Combine(folder, "maps");
        Directory.CreateDirectory(into);
        IReadOnlyList<string> names = SafeNames.Of(result.Device.Wirings.Select(w => w.Name));
        foreach (FieldMap map in wanted)
        {
            int wiring = result.Device.Wirings.Select(w => w.Name).ToList().IndexOf(map.Wiring);
            VtuFile.WriteMap(Path.Combine(into, SafeNames.Map(names[wiring], map.CurrentIndex)), map);
        }
    }
}
