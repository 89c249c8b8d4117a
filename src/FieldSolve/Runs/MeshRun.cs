using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>The mesh alone: refined for the readings of a device's drive, or by its shape where nothing is driven.</summary>
public static class MeshRun
{
    /// <summary>Makes the mesh.</summary>
    /// <param name="device">With or without a drive.</param>
    /// <param name="progress">Told about stages; may be null.</param>
    /// <param name="cancel">Checked between and within levels.</param>
    /// <returns>The mesh whose uniform split a drive would answer from; the history of refinement, empty without a drive; whether every reading meets its wanted error.</returns>
    /// <exception cref="MeshException">The device cannot be meshed as asked.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public static (TriangleMesh Mesh, IReadOnlyList<RefinementLevel> Levels, bool IsMet) Make(
        SheetDevice device, IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(device);
        if (device.Drive is not { } drive || device.Wirings.Count == 0)
        {
            return (FirstMesh.Make(device, cancel), [], true);
        }

        ReadingPlan[] plans = [.. device.Wirings.Select(w => new ReadingPlan(w))];
        MeshRefinement refinement = MeshRefinement.Run(
            device, new LabLaw(device.Law, device.Axis), plans, MeshRefinement.Largest(drive.Currents), drive.BothSigns,
            stage => progress?.Report(new(stage, 0, 0)), new StageClock(), cancel);
        return (refinement.Meshes.Coarse.Space.Mesh, refinement.Levels, refinement.IsMet);
    }
}
