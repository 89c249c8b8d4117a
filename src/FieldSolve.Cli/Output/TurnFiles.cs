using System.Globalization;
using FieldSolve.Cli.Commands;
using FieldSolve.Files;
using FieldSolve.Pictures;
using FieldSolve.Runs;
using FieldSolve.Turning;

namespace FieldSolve.Cli.Output;

/// <summary>Writes the results of a turn into its folder; each file appears whole or not at all.</summary>
internal static class TurnFiles
{
    /// <returns>The result; marked as cancelled if that came while the pictures were drawn: all else is written then.</returns>
    public static TurnResult Write(TurnResult result, TurnCommand.Choices choices, Screen screen, CancellationToken cancel)
    {
        string folder = choices.Folder;
        AnglesCsv.Write(Path.Combine(folder, "angles.csv"), result.Drive.Device.Wirings, result.Rows);
        if (result.Fit is not null)
        {
            AngleFitJson.Write(Path.Combine(folder, "angle-fit.json"), result);
        }

        if (result.Ratios.Count > 0)
        {
            RatiosCsv.Write(Path.Combine(folder, "ratios.csv"), result.Ratios);
        }

        var clock = new StageClock();
        bool cancelled = choices.Pictures && !result.Drive.Cancelled && PictureStage.IsCancelled(clock, screen, () =>
        {
            IReadOnlyList<PictureFile> drawn = TurnPictures.Write(result, Path.Combine(folder, "pictures"), cancel);
            TurnReport.Write(result, drawn, Path.Combine(folder, "report.html"));
        });
        if (cancelled)
        {
            result = result with { Drive = result.Drive with { Cancelled = true } };
        }

        RunRecord.Write(
            Path.Combine(folder, "run.json"),
            result.Drive with { Stages = [.. result.Drive.Stages, .. clock.Times] },
            "turn",
            new Dictionary<string, string>
            {
                ["turn-axis"] = choices.AxisSteps.ToString(CultureInfo.InvariantCulture),
                ["wiring"] = choices.Wiring ?? "",
                ["ratio"] = string.Join(",", choices.Ratios.Select(r => r.ToString("R", CultureInfo.InvariantCulture))),
                ["pictures"] = choices.Pictures ? "true" : "false",
                ["quick"] = choices.Quick ? "true" : "false",
            },
            figures: new Dictionary<string, double> { ["solved_points"] = result.SolvedPoints, ["wall_s_per_point"] = result.SecondsPerPoint });
        return result;
    }
}
