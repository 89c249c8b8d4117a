using System.Globalization;
using FieldSolve.Files;
using FieldSolve.Pictures;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Writes the results of an overlay into its folder; each file appears whole or not at all.</summary>
internal static class OverlayFiles
{
    /// <returns>True when it was cancelled while the pictures were drawn; all else is written then.</returns>
    public static bool Write(OverlayResult result, string folder, OverlayOptions options, bool pictures, Screen screen, CancellationToken cancel)
    {
        Directory.CreateDirectory(folder);
        WholeFile.WriteText(Path.Combine(folder, "overlay.json"), OverlayRecord.Text(result));
        WholeFile.WriteText(Path.Combine(folder, "overlay.csv"), OverlayCsv.Text(result));
        var clock = new StageClock();
        bool cancelled = pictures && PictureStage.IsCancelled(clock, screen, () =>
        {
            IReadOnlyList<PictureFile> drawn = OverlayPictures.Write(result, Path.Combine(folder, "pictures"), cancel);
            OverlayReport.Write(result, drawn, Path.Combine(folder, "report.html"));
        });

        string Number(double v) => v.ToString("R", CultureInfo.InvariantCulture);
        WholeFile.WriteText(Path.Combine(folder, "run.json"), OverlayRecord.RunText(
            result with { Stages = [.. result.Stages, .. clock.Times] },
            new Dictionary<string, string>
            {
                ["wiring"] = options.Wiring ?? "any",
                ["current_A"] = options.Current is { } c ? Number(c) : "last of the drive",
                ["scale"] = options.Scale ? "true" : "false",
                ["fixed_gain"] = options.FixedGain ? "true" : "false",
                ["fixed_offset"] = options.FixedOffset ? "true" : "false",
                ["most_shift"] = Number(options.MostShift),
                ["most_turn_deg"] = Number(options.MostTurn * 180 / Math.PI),
                ["pictures"] = pictures ? "true" : "false",
            }));
        return cancelled;
    }
}
