using FieldSolve.Runs;

namespace FieldSolve.Pictures;

/// <summary>All pictures of a fit.</summary>
public static class FitPictures
{
    private const int MostWirings = 2;

    /// <summary>Draws the pictures and writes each as PNG and SVG; the same result always gives the same bytes.</summary>
    /// <param name="result">The fit.</param>
    /// <param name="folder">Where they go; made when missing.</param>
    /// <param name="cancel">Stops between pictures; those already written stay.</param>
    /// <returns>The pictures in the order of the report.</returns>
    /// <exception cref="OperationCanceledException">The run was cancelled.</exception>
    /// <exception cref="IOException">A file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be written.</exception>
    public static IReadOnlyList<PictureFile> Write(FitResult result, string folder, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(folder);
        return PictureBatch.Write(
        [
            new("device", null, "device", "The device with its contacts and crystal axis as in its file, and the first wirings of the data.", () => Device(result) is { Wirings.Count: > 0 } device ? DevicePicture.Draw(device) : null),
            new("fit-curves", null, "fit-curves", "Measured voltages with their standard deviations against current; the lines join the fitted model at the same currents.", () => FitCurvePicture.Draw(result)),
            new(
                "fit-directions", null, "fit-directions", "Voltage over current at the largest current against the direction of the current, from source to drain; the open squares are the fitted model.",
                () => FitDirectionPicture.Draw(result)),
            new(
                "fit-residuals", null, "fit-residuals", "Measured less model in standard deviations, in the order of the data, and how often; the curve is the normal distribution. Ringed points are more than four deviations off.",
                () => FitResidualPicture.Draw(result)),
            new("fit-correlations", null, "fit-correlations", "Correlations of the fitted numbers in per cent: near 100 or −100 the data know a combination better than either number.", () => CorrelationPicture.Draw(result)),
        ], folder, cancel);
    }

    // Wirings stand in the data: those of the file serve only where the data name them.
    private static Device.SheetDevice Device(FitResult result) =>
        result.Device with { Wirings = [.. result.Measured.Circuits.Select(c => c.Wiring).DistinctBy(w => w.Name).Take(MostWirings)] };

    /// <summary>"V_along", "2nd harmonic of V_across".</summary>
    internal static string Quantity(string pair, int? harmonic) => harmonic switch
    {
        null => $"V_{pair}",
        0 => $"DC part of V_{pair}",
        1 => $"1st harmonic of V_{pair}",
        2 => $"2nd harmonic of V_{pair}",
        3 => $"3rd harmonic of V_{pair}",
        { } n => FormattableString.Invariant($"{n}th harmonic of V_{pair}"),
    };
}
