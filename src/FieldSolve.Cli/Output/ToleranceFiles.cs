using System.Globalization;
using FieldSolve.Files;
using FieldSolve.Pictures;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Writes the results of a tolerance run into its folder; each file appears whole or not at all.</summary>
internal static class ToleranceFiles
{
    /// <returns>The result; marked as cancelled if that came while the pictures were drawn: all else is written then.</returns>
    public static ToleranceResult Write(
        ToleranceResult result, string folder, ToleranceOptions options, bool pictures, Screen screen, CancellationToken cancel)
    {
        Directory.CreateDirectory(folder);
        WholeFile.WriteText(Path.Combine(folder, "budget.csv"), BudgetCsv.Text(result));
        if (result.Samples.Count > 0)
        {
            SamplesCsv.Write(Path.Combine(folder, "samples.csv"), result);
        }

        var clock = new StageClock();
        bool cancelled = pictures && PictureStage.IsCancelled(clock, screen, () =>
        {
            IReadOnlyList<PictureFile> drawn = TolerancePictures.Write(result, Path.Combine(folder, "pictures"), cancel);
            ToleranceReport.Write(result, drawn, Path.Combine(folder, "report.html"));
        });
        if (cancelled)
        {
            result = result with { Cancelled = true };
        }

        ToleranceRecord.Write(
            Path.Combine(folder, "run.json"),
            result with { Stages = [.. result.Stages, .. clock.Times] },
            new Dictionary<string, string>
            {
                ["samples"] = options.Samples.ToString(CultureInfo.InvariantCulture),
                ["seed"] = options.Seed.ToString(CultureInfo.InvariantCulture),
                ["confidence"] = options.Confidence?.ToString("R", CultureInfo.InvariantCulture) ?? "none",
                ["explain_V"] = options.Explain?.ToString("R", CultureInfo.InvariantCulture) ?? "none",
                ["wanted_V"] = options.Wanted?.ToString("R", CultureInfo.InvariantCulture) ?? "none",
                ["pictures"] = pictures ? "true" : "false",
            });
        return result;
    }
}
