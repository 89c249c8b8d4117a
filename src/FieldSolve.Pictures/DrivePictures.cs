using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Files;
using FieldSolve.Readings;

namespace FieldSolve.Pictures;

/// <summary>All pictures of a drive.</summary>
public static class DrivePictures
{
    /// <summary>Most wirings that get maps and cross-sections of their own; a drive with more would drown its report.</summary>
    public const int MostMappedWirings = 12;

    /// <summary>Draws the pictures and writes each as PNG and SVG; the same result always gives the same bytes.</summary>
    /// <param name="result">The drive; maps, mesh and rows may be empty, the pictures that need them are then left out.</param>
    /// <param name="folder">Where they go; made when missing.</param>
    /// <param name="cancel">Stops between pictures; those already written stay.</param>
    /// <returns>The pictures in the order of the report.</returns>
    /// <exception cref="OperationCanceledException">The run was cancelled.</exception>
    /// <exception cref="IOException">A file cannot be written.</exception>
    /// <exception cref="UnauthorizedAccessException">A file may not be written.</exception>
    public static IReadOnlyList<PictureFile> Write(DriveResult result, string folder, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(result);
        ArgumentNullException.ThrowIfNull(folder);

        return PictureBatch.Write([.. Plans(result)], folder, cancel);
    }

    private static IEnumerable<PicturePlan> Plans(DriveResult result)
    {
        SheetDevice device = result.Device;
        yield return new(
            "device", null, "device",
            "The device as wired. I+ and I− mark source and drain, ∥ the pair read along the current, ⊥ the pair read across it; a and b are the crystal axes."
            + (device.DeadEdge > 0 ? " Dashed: the rim as drawn, before the dead edge." : "")
            + (device.Wirings.Count > DevicePicture.MostPanels ? $" The first {DevicePicture.MostPanels} of {device.Wirings.Count} wirings." : ""),
            () => device.Wirings.Count == 0 ? null : DevicePicture.Draw(device));
        yield return new(
            "curves", null, "curves",
            "Read voltages against current, both signs where both were solved. Error bars are numerical and shown where they can be seen; ringed points are not 'ok' in the table.",
            () => CurvePicture.Draw(result));
        yield return new(
            "even", null, "even",
            "Even part of V_across against the square of the odd part of V_along, with a straight line fitted to all rows that are ok.",
            () => EvenPicture.Draw(result));

        IReadOnlyList<string> names = SafeNames.Of(device.Wirings.Select(w => w.Name));
        List<(FieldMap First, Lazy<(FineMesh Mesh, TriangleFinder Finder)> Made)> meshes = [];
        for (int w = 0; w < Math.Min(device.Wirings.Count, MostMappedWirings); w++)
        {
            string wiring = device.Wirings[w].Name;
            FieldMap[] maps = [.. result.Maps.Where(m => m.Wiring == wiring).OrderBy(m => m.CurrentIndex)];
            if (maps.Length == 0)
            {
                continue;
            }

            // The maps of a drive usually share one mesh; cut it only once.
            FieldMap last = maps[^1];
            int known = meshes.FindIndex(m => SameMesh(m.First, last));
            if (known < 0)
            {
                known = meshes.Count;
                meshes.Add((last, new(() =>
                {
                    FineMesh mesh = FineMesh.Of(last);
                    return (mesh, new(mesh));
                })));
            }

            Lazy<(FineMesh Mesh, TriangleFinder Finder)> made = meshes[known].Made;
            FieldMap[] alike = [.. maps.Where(m => SameMesh(m, last))];
            double? degrees = CurrentDirection.Vector(device, device.Wirings[w]) == default ? null : CurrentDirection.Degrees(device, device.Wirings[w]);
            yield return new(
                "potential", wiring, "potential-" + names[w],
                $"Potential with equipotential lines at the last current of wiring {wiring}; the drain is at 0 V. Source orange, drain blue, other metal black.",
                () => new DrawnMap(device, last, made.Value.Mesh, made.Value.Finder).Potential());
            yield return new(
                "field", wiring, "field-" + names[w],
                "Magnitude of the field on a logarithmic scale that spans the 1st to the 99th percentile of the sheet's area, at most two decades, and lines of the sheet current.",
                () => new DrawnMap(device, last, made.Value.Mesh, made.Value.Finder).Field());
            yield return new(
                "sections", wiring, "sections-" + names[w],
                $"Potential along two lines through the middle of the sheet: {(degrees is null ? "along x and along y" : "along the direction of the current and across it")}. Gaps: the line leaves the sheet.",
                () => SectionPicture.Draw(alike, made.Value.Mesh, made.Value.Finder, degrees));
        }

        yield return new(
            "mesh", null, "mesh", "The triangles, before the last uniform split.",
            () => result.Mesh.TriangleCount == 0 ? null : MeshPicture.Mesh(result));
        yield return new(
            "convergence", null, "convergence",
            "Largest estimated error of each wiring's voltages and of their even parts, relative to what was wanted, from mesh to mesh.",
            () => MeshPicture.Convergence(result));
    }

    private static bool SameMesh(FieldMap a, FieldMap b) =>
        (ReferenceEquals(a.Nodes, b.Nodes) || a.Nodes.AsSpan().SequenceEqual(b.Nodes))
        && (ReferenceEquals(a.X, b.X) || a.X.AsSpan().SequenceEqual(b.X))
        && (ReferenceEquals(a.Y, b.Y) || a.Y.AsSpan().SequenceEqual(b.Y));
}
