using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Readings;
using FieldSolve.Solving;

namespace FieldSolve.Runs;

/// <summary>
/// The main job: potential, field, current and probe voltages as the drive increases. Refines a mesh for all wirings at the largest
/// current, then follows every wiring with both signs on that mesh and its uniform split.
/// </summary>
public static class DriveRun
{
    /// <summary>Runs the drive of a device.</summary>
    /// <param name="device">With a drive and at least one wiring.</param>
    /// <param name="options">What to keep.</param>
    /// <param name="progress">Told about stages and finished rows; may be null.</param>
    /// <param name="cancel">When cancelled, the rows finished so far are returned with <see cref="DriveResult.Cancelled"/>;
    /// before the first mesh stands, the call throws.</param>
    /// <exception cref="ArgumentException">The device has no drive.</exception>
    /// <exception cref="OperationCanceledException">Cancelled before the mesh stood.</exception>
    /// <exception cref="FieldSpaceException">A part of the sheet is joined to the rest by no metal.</exception>
    public static DriveResult Execute(SheetDevice device, DriveOptions options, IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(options);
        return Run(device, options, progress, new StageClock(), cancel).Result;
    }

    /// <summary>The same, with the meshes that the answers come from and the errors measured there; for what builds on a drive.</summary>
    internal static (DriveResult Result, MeshRefinement Refinement) Run(
        SheetDevice device, DriveOptions options, IProgress<RunProgress>? progress, StageClock clock, CancellationToken cancel)
    {
        DriveSpec drive = device.Drive ?? throw new ArgumentException("The device has no [drive].", nameof(device));
        var law = new LabLaw(device.Law, device.Axis);
        ReadingPlan[] plans = [.. device.Wirings.Select(w => new ReadingPlan(w))];
        double largest = MeshRefinement.Largest(drive.Currents);
        int total = plans.Length * drive.Currents.Count;
        MeshRefinement refinement = MeshRefinement.Run(
            device, law, plans, largest, drive.BothSigns, stage => progress?.Report(new(stage, 0, total)), clock, cancel,
            oneCurve: options.OneCurve, given: options.Mesh);

        var work = new DriveWork(device, options, refinement.Meshes, plans);
        bool cancelled = clock.Time("solve", () => work.Run(progress, cancel));
        (List<CurveRow> rows, List<CurveRow> reversed) = work.Rows(new RowMaker(device, refinement.Goals));
        FieldLevel fine = refinement.Meshes.Fine;
        var result = new DriveResult
        {
            Device = device,
            Rows = rows,
            ReversedRows = reversed,
            Summaries = Summaries.Of(device, rows),
            Maps = work.Maps,
            Frames = work.Frames,
            Mesh = refinement.Meshes.Coarse.Space.Mesh,
            Levels = refinement.Levels,
            Cautions = Cautions.Of(device, [.. rows, .. reversed]),
            Warnings = DriveWarnings.Of(device, rows, work.Refusals),
            Figures = new(
                fine.Space.Size, fine.Space.Mesh.TriangleCount, fine.AtZero.NonZeros,
                work.Total.Factorisations + (2 * refinement.Levels.Count), work.Total.Solves, work.Total.Steps, work.LargestResidual),
            Points = work.Points,
            Stages = clock.Times,
            Cancelled = cancelled,
        };
        return (result, refinement);
    }
}
