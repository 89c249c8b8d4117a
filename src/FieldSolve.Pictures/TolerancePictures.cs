using FieldSolve.Files;
using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>All pictures of a tolerance run.</summary>
public static class TolerancePictures
{
    /// <summary>Most wirings that get bars and histograms of their own.</summary>
    public const int MostWirings = 12;

    /// <summary>Draws the pictures and writes each as PNG and SVG; the same result always gives the same bytes.</summary>
    /// <param name="result">The run.</param>
    /// <param name="folder">Where they go; made when missing.</param>
    /// <param name="cancel">Stops between pictures; those already written stay.</param>
    /// <returns>The pictures in the order of the report.</returns>
    /// <exception cref="OperationCanceledException">The run was cancelled.</exception>
    /// <exception cref="IOException">A file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be written.</exception>
    public static IReadOnlyList<PictureFile> Write(ToleranceResult result, string folder, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(folder);
        return PictureBatch.Write([.. Plans(result)], folder, cancel);
    }

    private static IEnumerable<PicturePlan> Plans(ToleranceResult result)
    {
        yield return new("device", null, "device", "The device with its contacts and crystal axis as in its file, as wired.", () => result.Device.Wirings.Count == 0 ? null : DevicePicture.Draw(result.Device));
        yield return new(
            "share", null, "contacts",
            "Each contact shaded by the share of the variance of the odd part of V_across that its own causes carry; what is missing to 100 % comes from the sheet, the law and common shifts.",
            () => SharePicture.Draw(result));
        IReadOnlyList<string> names = SafeNames.Of(result.Device.Wirings.Select(w => w.Name));
        for (int w = 0; w < Math.Min(names.Count, MostWirings); w++)
        {
            string wiring = result.Device.Wirings[w].Name;
            yield return new(
                "budget", wiring, "budget-" + names[w],
                "The ten largest contributions to each reading, each for one standard deviation of its cause, with its sign.",
                () => BudgetPicture.Draw(result, wiring));
            yield return new(
                "histogram", wiring, "samples-" + names[w],
                "Sampled devices with all causes at once, each solved in full; the curve is what first derivatives predict, with the sampled number of devices.",
                () => HistogramPicture.Draw(result, wiring));
        }
    }
}
