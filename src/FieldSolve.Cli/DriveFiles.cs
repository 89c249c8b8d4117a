using System.Globalization;
using FieldSolve.Fields;
using FieldSolve.Files;
using FieldSolve.Pictures;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Cli;

/// <summary>Writes the results of a drive into its folder; each file appears whole or not at all.</summary>
internal static class DriveFiles
{
    public static void Write(
        DriveResult result, string folder, MapChoice maps, bool allSigns, bool pictures, Terminal terminal, CancellationToken cancel)
    {
        CurvesCsv.Write(
            Path.Combine(folder, "curves.csv"), result.Device.Wirings, result.Rows, allSigns ? result.ReversedRows : null);
        var clock = new StageClock();
        clock.Time("maps", () => Maps(result, folder, maps, terminal));
        if (pictures)
        {
            terminal.Report(new("drawing pictures", 0, 0));
            clock.Time("pictures", () =>
            {
                IReadOnlyList<PictureFile> drawn = DrivePictures.Write(result, Path.Combine(folder, "pictures"), cancel);
                ReportPage.Write(result, drawn, Path.Combine(folder, "report.html"));
            });
        }

        RunRecord.Write(
            Path.Combine(folder, "run.json"),
            result with { Stages = [.. result.Stages, .. clock.Times] },
            "drive",
            new Dictionary<string, string>
            {
                ["maps"] = maps.ToString().ToLower(CultureInfo.InvariantCulture),
                ["all-signs"] = allSigns ? "true" : "false",
                ["pictures"] = pictures ? "true" : "false",
            });
    }

    private static void Maps(DriveResult result, string folder, MapChoice maps, Terminal terminal)
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

        terminal.Report(new("writing maps", 0, 0));
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
