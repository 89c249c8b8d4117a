using System.Globalization;
using FieldSolve.Files;
using FieldSolve.Pictures;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Writes the results of a fit into its folder; each file appears whole or not at all.</summary>
internal static class FitFiles
{
    /// <returns>True when it was cancelled while the pictures were drawn; all else is written then.</returns>
    public static bool Write(FitResult result, string folder, FitOptions options, bool pictures, Screen screen, CancellationToken cancel)
    {
        Directory.CreateDirectory(folder);
        WholeFile.WriteText(Path.Combine(folder, "fit.json"), FitRecord.Text(result));
        WholeFile.WriteText(Path.Combine(folder, "fit-curves.csv"), FitCurvesCsv.Text(result));
        WholeFile.WriteText(Path.Combine(folder, "fitted.toml"), FittedDevice.Text(result, File.ReadAllText(result.Device.Path), folder).Text);
        var clock = new StageClock();
        bool cancelled = pictures && PictureStage.IsCancelled(clock, screen, () =>
        {
            IReadOnlyList<PictureFile> drawn = FitPictures.Write(result, Path.Combine(folder, "pictures"), cancel);
            FitReport.Write(result, drawn, Path.Combine(folder, "report.html"));
        });

        WholeFile.WriteText(Path.Combine(folder, "run.json"), FitRecord.RunText(
            result with { Stages = [.. result.Stages, .. clock.Times] },
            new Dictionary<string, string>
            {
                ["robust"] = options.Robust ? "true" : "false",
                ["suggest"] = options.Suggest.ToString(CultureInfo.InvariantCulture),
                ["starts"] = options.Starts.ToString(CultureInfo.InvariantCulture),
                ["intervals"] = options.AllIntervals ? "true" : "false",
                ["pictures"] = pictures ? "true" : "false",
            }));
        return cancelled;
    }
}
