using FieldSolve.Files;
using FieldSolve.Lockin;
using FieldSolve.Pictures;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Writes the results of an AC run into its folder; each file appears whole or not at all.</summary>
internal static class LockinFiles
{
    /// <returns>The result; marked as cancelled if that came while the pictures were drawn: all else is written then.</returns>
    public static LockinResult Write(LockinResult result, string folder, bool pictures, bool quick, Screen screen, CancellationToken cancel)
    {
        HarmonicsCsv.Write(Path.Combine(folder, "harmonics.csv"), result.Device.Wirings, result.Points);
        var clock = new StageClock();
        bool cancelled = pictures && PictureStage.IsCancelled(clock, screen, () =>
        {
            IReadOnlyList<PictureFile> drawn = LockinPictures.Write(result, Path.Combine(folder, "pictures"), cancel);
            LockinReport.Write(result, drawn, Path.Combine(folder, "report.html"));
        });
        if (cancelled)
        {
            result = result with { Cancelled = true };
        }

        LockinRecord.Write(
            Path.Combine(folder, "run.json"),
            result with { Stages = [.. result.Stages, .. clock.Times] },
            new Dictionary<string, string> { ["pictures"] = pictures ? "true" : "false", ["quick"] = quick ? "true" : "false" });
        return result;
    }
}
