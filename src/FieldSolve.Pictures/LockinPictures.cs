using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Lockin;
using FieldSolve.Readings;

namespace FieldSolve.Pictures;

/// <summary>All pictures of an AC run.</summary>
public static class LockinPictures
{
    /// <summary>Draws the pictures and writes each as PNG and SVG; the same result always gives the same bytes.</summary>
    /// <param name="result">The run; what it lacks (frames, points) is left out.</param>
    /// <param name="folder">Where they go; made when missing.</param>
    /// <param name="cancel">Stops between pictures; those already written stay.</param>
    /// <returns>The pictures in the order of the report.</returns>
    /// <exception cref="OperationCanceledException">The run was cancelled.</exception>
    /// <exception cref="IOException">A file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be written.</exception>
    public static IReadOnlyList<PictureFile> Write(LockinResult result, string folder, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(folder);
        return PictureBatch.Write([.. Plans(result)], folder, cancel);
    }

    private static IEnumerable<PicturePlan> Plans(LockinResult result)
    {
        SheetDevice device = result.Device;
        DriveResult common = result.Common();
        yield return new(
            "device", null, "device",
            "The device as wired. I+ and I− mark source and drain, ∥ the pair read along the current, ⊥ the pair read across it; a and b are the crystal axes.",
            () => DevicePicture.Draw(device));
        yield return new(
            "waves", null, "waves",
            "Voltages over two cycles of the drive at the largest current, put together from their harmonics; the current goes like sin, so it crosses zero upwards at whole cycles.",
            () => WavePicture.Draw(result));
        yield return new(
            "second", null, "second-harmonic",
            "Second harmonic across against the square of the first harmonic along, RMS both, with a straight line. If V_across = k V_along² at every moment, the slope is −k/√2.",
            () => SecondHarmonicPicture.Draw(result));

        IReadOnlyList<string> names = SafeNames.Of(device.Wirings.Select(w => w.Name));
        for (int w = 0; w < Math.Min(device.Wirings.Count, DrivePictures.MostMappedWirings); w++)
        {
            string wiring = device.Wirings[w].Name;
            yield return new(
                "harmonics", wiring, "harmonics-" + names[w],
                "RMS of the harmonics against the RMS current. Dashed: slopes 1, 2 and 3 through the smallest current, as a weak non-linearity gives them. Only readings above their error bar; ringed ones are not ok.",
                () => HarmonicPicture.Draw(result, wiring));
            yield return new(
                "spectrum", wiring, "frequency-" + names[w],
                "Parts along sin and cos of the first and second harmonic against the frequency, at the largest current; the gate's charge turns and shrinks them.",
                () => SpectrumPicture.Draw(result, wiring));
            yield return new(
                "cycle", wiring, "cycle-" + names[w],
                "Potential and magnitude of the field at three phases of the cycle, largest current; each row on one scale, that of the field logarithmic.",
                () => CyclePicture.Draw(result, wiring));
        }

        yield return new(
            "mesh", null, "mesh", "The triangles, before the last uniform split.",
            () => result.Mesh.TriangleCount == 0 ? null : MeshPicture.Mesh(common));
        yield return new(
            "convergence", null, "convergence",
            "Largest estimated error of each wiring's voltages and of their even parts at the largest peak current, relative to what was wanted, from mesh to mesh.",
            () => MeshPicture.Convergence(common));
    }
}
