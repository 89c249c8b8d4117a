using System.Diagnostics;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Sensitivity;
using FieldSolve.Sparse;

namespace FieldSolve.Sessions;

/// <summary>
/// A first answer on a coarse mesh and its split, with twice the difference of the two as error bar: at the ends of ideal contacts the error falls like the
/// size of the elements, so what is missing is about what the split changed. While the layout moves, the nodes of the mesh move along, so that readings glide and do not jump
/// from mesh to mesh. Not for several threads.
/// </summary>
internal sealed class QuickAnswer
{
    // Against the sizes that a drive begins with.
    private const double Stretch = 2;

    // Even parts fall more slowly: they were seen to miss up to 1.3 of that difference (disc with six contacts and a quadratic law).
    private const double Doubt = 2;

    private TriangleMesh? last;
    private MeshMover? mover;
    private MeshPair? before;  // its ordering serves again while the topology stays

    /// <summary>Solves the wirings that are looked at, at the largest current; the row at zero current gives a curve its other end.</summary>
    /// <param name="device">With a drive.</param>
    /// <param name="version">Version of the text.</param>
    /// <param name="wirings">Names; others are left out. Empty for the first wiring.</param>
    /// <param name="cancel">Stops the work.</param>
    public LayoutAnswer Of(SheetDevice device, int version, IReadOnlySet<string> wirings, CancellationToken cancel)
    {
        Stopwatch watch = Stopwatch.StartNew();
        Wiring[] chosen = [.. device.Wirings.Where(w => wirings.Contains(w.Name))];
        chosen = chosen.Length > 0 ? chosen : [.. device.Wirings.Take(1)];
        double largest = MeshRefinement.Largest(device.Drive!.Currents);
        SheetDevice reduced = device with { Wirings = chosen, Drive = new(0, largest, largest == 0 ? 1 : 2, device.Drive.BothSigns, [], 0) };
        try
        {
            TriangleMesh mesh = Mesh(device, cancel);
            MeshPair meshes = before = MeshPair.Build(reduced, mesh, new LabLaw(device.Law, device.Axis), cancel, like: before);
            var work = new DriveWork(reduced, new DriveOptions { Maps = MapChoice.None, ForPictures = false, Frames = true }, meshes, [.. chosen.Select(w => new ReadingPlan(w))]);
            if (work.Run(null, cancel))
            {
                throw new OperationCanceledException(cancel);
            }

            CurveRow[] rows = [.. work.Rows(new RowMaker(reduced, [])).Rows.Select(Widened)];
            PotentialFrame[] frames = [.. work.Frames.Where(f => f.CurrentIndex == reduced.Drive.Currents.Count - 1)];
            return new(version, device, false, rows, frames, null, watch.Elapsed.TotalMilliseconds, null);
        }
        catch (Exception e) when (e is FieldSpaceException or MeshException or PivotException)
        {
            (last, before) = (null, null);
            return new(version, device, false, [], [], e.Message.ReplaceLineEndings(" "), watch.Elapsed.TotalMilliseconds, null);
        }
    }

    private static CurveRow Widened(CurveRow row) =>
        row with { Readings = [.. row.Readings.Select(r => r with { Error = Doubt * r.Error, EvenError = Doubt * r.EvenError })] };

    private TriangleMesh Mesh(SheetDevice device, CancellationToken cancel)
    {
        if (last is not null && mover?.Move(device.Domain) is { } moved)
        {
            return moved;
        }

        last = Mesher.Generate(device.Domain, new StretchedSize(MeshSizes.First(device), Stretch), null, cancel);
        mover = new MeshMover(last);
        return last;
    }
}
