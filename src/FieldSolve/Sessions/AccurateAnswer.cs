using System.Diagnostics;
using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Sensitivity;

namespace FieldSolve.Sessions;

/// <summary>
/// Accurate answers: those of <see cref="DriveRun"/>, and, sooner, of the wirings on show alone, on the mesh of the last drive with its nodes moved. Errors are
/// measured there anew; the rates of convergence are trusted as far as on that mesh before. Not for several threads.
/// </summary>
internal sealed class AccurateAnswer
{
    // A moved mesh may miss the wanted error by this much before one is made for the layout; the bars say what was reached.
    private const double Reached = 1.25;

    // Where the sheet's own tensor is changed by more than this share, nothing of the last drive is trusted.
    private const double SameLaw = 0.2;

    private MeshRefinement? last;
    private MeshMover? mover;
    private Tensor2 tensor;
    private bool linear;

    /// <summary>The whole drive.</summary>
    /// <param name="device">With a drive.</param>
    /// <param name="shown">The layout that the answer is for, with wirings that <paramref name="device"/> may lack.</param>
    /// <param name="version">Version of the text.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public LayoutAnswer Drive(SheetDevice device, SheetDevice shown, int version, CancellationToken cancel)
    {
        Stopwatch watch = Stopwatch.StartNew();
        try
        {
            (DriveResult result, MeshRefinement refinement) = DriveRun.Run(device, Options, null, new StageClock(), cancel);
            if (result.Cancelled)
            {
                throw new OperationCanceledException(cancel);
            }

            (last, mover, tensor, linear) = (refinement, null, device.Law.AtZeroField, device.Law.IsLinear);
            return new(version, shown, true, result.Rows, [.. result.Frames.Where(f => f.CurrentIndex == Last(device))], null, watch.Elapsed.TotalMilliseconds, result);
        }
        catch (Exception e) when (NoAnswer.Because(e) is { } why)
        {
            return new(version, shown, true, [], [], why, watch.Elapsed.TotalMilliseconds, null);
        }
    }

    /// <summary>Prepares the mesh of the last drive for moves, while nobody waits.</summary>
    public void Prepare() => mover ??= last is null ? null : new MeshMover(last.Meshes.Coarse.Space.Mesh);

    /// <summary>The wirings on show, on the mesh of the last drive; null when that does not serve or the wanted errors are missed there.</summary>
    /// <param name="device">With a drive.</param>
    /// <param name="wirings">What is looked at.</param>
    /// <param name="version">Version of the text.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public LayoutAnswer? Moved(SheetDevice device, Wiring[] wirings, int version, CancellationToken cancel)
    {
        Stopwatch watch = Stopwatch.StartNew();
        Prepare();
        if (last is null || !last.Meshes.Serves(device) || linear != device.Law.IsLinear || !Close(device.Law.AtZeroField, tensor)
            || mover!.Move(device.Domain) is not { } mesh)
        {
            return null;
        }

        try
        {
            MeshPair meshes = last.Meshes.Moved(device, mesh, new LabLaw(device.Law, device.Axis));
            SheetDevice reduced = device with { Wirings = wirings };
            ReadingPlan[] plans = [.. wirings.Select(w => new ReadingPlan(w))];
            DriveSpec drive = device.Drive!;
            double largest = MeshRefinement.Largest(drive.Currents);
            double[] currents = [.. plans.Select(_ => largest == 0 ? 1 : largest)];
            double[] lower = [.. drive.Currents.Select(Math.Abs).Where(c => c > 0).Distinct().OrderDescending()];
            GoalMeasure[] goals = [.. MeshRefinement.Measure(reduced, meshes, plans, null, currents, lower, drive.BothSigns, cancel).Select(Tried)];
            if (goals.Any(g => !(g.Error.Bar <= Reached * g.Wanted)))
            {
                return null;
            }

            var work = new DriveWork(reduced, Options, meshes, plans);
            if (work.Run(null, cancel))
            {
                throw new OperationCanceledException(cancel);
            }

            return new(
                version, device, true, work.Rows(new RowMaker(reduced, goals)).Rows, [.. work.Frames.Where(f => f.CurrentIndex == Last(device))], null,
                watch.Elapsed.TotalMilliseconds, null);
        }
        catch (Exception e) when (NoAnswer.Because(e) is not null)
        {
            return null;
        }
    }

    private static DriveOptions Options => new() { Maps = MapChoice.None, ForPictures = false, Frames = true };

    private static int Last(SheetDevice device) => device.Drive!.Currents.Select((c, k) => (Math.Abs(c), k)).Max().k;

    private GoalMeasure Tried(GoalMeasure goal)
    {
        GoalMeasure? before = last!.Goals.FirstOrDefault(g => g.IsEven == goal.IsEven && g.Plan.Wiring.Name == goal.Plan.Wiring.Name && g.Plan.Pairs[g.Pair].Name == goal.Plan.Pairs[goal.Pair].Name);
        return before is null ? goal.Untried() : goal.TriedAs(before);
    }

    private static bool Close(Tensor2 a, Tensor2 b)
    {
        double scale = SameLaw * Math.Min(Math.Abs(b.Aa), Math.Abs(b.Bb));
        return Math.Abs(a.Aa - b.Aa) <= scale && Math.Abs(a.Ab - b.Ab) <= scale && Math.Abs(a.Ba - b.Ba) <= scale && Math.Abs(a.Bb - b.Bb) <= scale;
    }
}
