using FieldSolve.Readings;
using FieldSolve.Turning;

namespace FieldSolve.Pictures;

/// <summary>All pictures of a turn.</summary>
public static class TurnPictures
{
    private const string Everyone = "all directions";

    /// <summary>Draws the pictures and writes each as PNG and SVG; the same result always gives the same bytes.</summary>
    /// <param name="result">The turn; pictures that have nothing to show are left out.</param>
    /// <param name="folder">Where they go; made when missing.</param>
    /// <param name="cancel">Stops between pictures; those already written stay.</param>
    /// <returns>The pictures in the order of the report.</returns>
    /// <exception cref="OperationCanceledException">The run was cancelled.</exception>
    /// <exception cref="IOException">A file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be written.</exception>
    public static IReadOnlyList<PictureFile> Write(TurnResult result, string folder, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(folder);
        return PictureBatch.Write([.. Plans(result)], folder, cancel);
    }

    private static IEnumerable<PicturePlan> Plans(TurnResult result)
    {
        DriveResult drive = result.Drive;
        string formula = AnglePicture.HasFormula(result) ? " Dotted: the formulas for a uniform strip, fitted to the curves of small drive." : "";
        string axes = TurnQuantity.AxisA(result) is null ? "" : " a and b mark the crystal axes.";
        yield return new(
            "device", null, "device",
            result.Mode == TurnMode.Ring
                ? "The device as wired for the first direction; the other directions follow by stepping all its contacts round the ring. I+ and I− mark source and drain, ∥ the pair read along the current, ⊥ the pair read across it."
                : "The device as wired. I+ and I− mark source and drain, ∥ the pair read along the current, ⊥ the pair read across it; a and b are the crystal axes as in the device file.",
            () => DevicePicture.Draw(result.Mode == TurnMode.Ring ? drive.Device with { Wirings = [drive.Device.Wirings[0]] } : drive.Device));
        yield return new(
            "polar", null, "polar",
            "Voltages over the direction at the largest current; the distance from the middle is the size. Blue and solid: positive; orange and dashed: negative." + axes + formula,
            () => PolarPicture.Draw(result));
        yield return new(
            "angles", null, "angles",
            "The same over a straight scale, for several currents. Lines join computed points; error bars are numerical and shown where they can be seen; ringed points are not 'ok' in the table."
            + axes + formula,
            () => AnglePicture.Draw(result));
        yield return new(
            "potential", null, "potential",
            "Potential with equipotential lines at the last current for chosen directions, on one colour scale; each drain is at 0 V. Source orange, drain blue, other metal black.",
            () => TurnMapsPicture.Draw(result));
        yield return new(
            "ratios", null, "ratios",
            "Linear response of the same device at other anisotropy ratios with the same geometric mean of the two conductances. The across voltage vanishes at ratio 1 and along the crystal axes.",
            () => AnglePicture.Ratios(result));
        yield return new(
            "mesh", null, "mesh", "The triangles, before the last uniform split; they serve all directions.",
            () => drive.Mesh.TriangleCount == 0 ? null : MeshPicture.Mesh(drive));
        yield return new(
            "convergence", null, "convergence",
            "Largest estimated error of all directions, relative to what was wanted, from mesh to mesh.",
            () => MeshPicture.Convergence(drive with
            {
                Device = drive.Device with { Wirings = [drive.Device.Wirings[0] with { Name = Everyone }] },
                Levels = [.. drive.Levels.Select(l => l with { Estimates = [.. l.Estimates.Select(e => e with { Wiring = Everyone })] })],
            }));
    }
}
