using FieldSolve.Files;
using FieldSolve.Pictures;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Writes the results of the bands command into its folder; each file appears whole or not at all.</summary>
internal static class BandsFiles
{
    /// <returns>True if cancelled while the pictures were drawn; all else is written then.</returns>
    public static bool Write(BandsResult result, string folder, bool pictures, Screen screen, CancellationToken cancel)
    {
        ProfileCsv.Write(Path.Combine(folder, "profile.csv"), result);
        LawToml.Write(Path.Combine(folder, "law.toml"), result);
        var clock = new StageClock();
        bool cancelled = pictures && PictureStage.IsCancelled(clock, screen, () =>
        {
            IReadOnlyList<PictureFile> drawn = BandPictures.Write(result, Path.Combine(folder, "pictures"), cancel);
            BandsReport.Write(result, drawn, Path.Combine(folder, "report.html"));
        });

        BandsRecord.Write(
            Path.Combine(folder, "run.json"),
            result with { Stages = [.. result.Stages, .. clock.Times] },
            new Dictionary<string, string> { ["pictures"] = pictures ? "true" : "false" });
        return cancelled;
    }
}
