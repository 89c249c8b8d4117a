using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Laws;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;

namespace FieldSolve.Lockin;

/// <summary>
/// The AC drive: I(t) = I_dc + sqrt(2) I_rms sin(2 pi f t), the harmonics of every pair as a lock-in amplifier reads them. One mesh serves all wirings and
/// amplitudes; it is refined at the largest peak current. Without a gate capacitance the sheet has no memory and the frequency does not matter.
/// </summary>
public static class LockinRun
{
    // A run whose harmonics miss what is wanted is made again so often, on a mesh that aims at this share of it and at no less than the second.
    private const int MostRepeats = 2;
    private const double Room = 0.7, LeastShare = 0.1;

    /// <summary>What keeps a device from an AC run, with the place in its file; null when nothing does.</summary>
    public static Fault? Missing(SheetDevice device)
    {
        ArgumentNullException.ThrowIfNull(device);
        if (device.Drive is not { } drive)
        {
            return new(device.Path, 1, 1, "the file has no [drive]; add one, for example: current = { from = \"10 uA\", to = \"100 uA\", steps = 5 }");
        }

        Fault At(string message) => new(device.Path, drive.At.Line, drive.At.Column, message);
        return drive.Currents.Any(i => i < 0) ? At("an AC drive counts 'current' as RMS values, which are not negative; turn the sign by swapping source and drain")
            : device.GateCapacitance > 0 && drive.Frequencies.Count == 0 ? At("with a gate_capacitance an AC drive needs a 'frequency', for example frequency = \"17.77 Hz\"")
            : device.Wirings.Count == 0 ? At("an AC drive needs a [[wiring]]")
            : null;
    }

    /// <summary>Runs it.</summary>
    /// <param name="device">With a drive and at least one wiring; see <see cref="Missing"/>.</param>
    /// <param name="options">What to keep.</param>
    /// <param name="progress">Told about stages and finished amplitudes; may be null.</param>
    /// <param name="cancel">When cancelled, the points finished so far are returned with <see cref="LockinResult.Cancelled"/>;
    /// before the mesh stands, the call throws.</param>
    /// <exception cref="ArgumentException">The device cannot be driven with AC.</exception>
    /// <exception cref="OperationCanceledException">Cancelled before the mesh stood.</exception>
    /// <exception cref="FieldSpaceException">A part of the sheet is joined to the rest by no metal.</exception>
    public static LockinResult Execute(SheetDevice device, LockinOptions options, IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(options);
        if (Missing(device) is { } fault)
        {
            throw new ArgumentException(fault.Message, nameof(device));
        }

        DriveSpec drive = device.Drive!;
        var clock = new StageClock();
        var law = new LabLaw(device.Law, device.Axis);
        ReadingPlan[] plans = [.. device.Wirings.Select(w => new ReadingPlan(w))];
        double peak = (Math.Sqrt(2) * drive.Currents.Max()) + Math.Abs(drive.Offset);
        double largest = drive.Offset < 0 ? -peak : peak;
        int total = plans.Length * drive.Currents.Count;
        void Tell(string stage) => progress?.Report(new(stage, 0, total));
        bool bothSigns = !device.Law.IsLinear;
        MeshRefinement refinement = MeshRefinement.Run(device, law, plans, largest, bothSigns, Tell, clock, cancel, given: options.Mesh);
        double weakest = Math.Sqrt(2) * drive.Currents.Where(i => i > 0).DefaultIfEmpty(0).Min();
        if (options.Mesh is null && bothSigns && weakest > 0 && weakest < peak)
        {
            refinement = refinement.Extended(device, law, plans, weakest, bothSigns, Tell, clock, cancel);
        }

        var work = new LockinWork(device, options, refinement.Meshes, plans, law);
        bool cancelled = clock.Time("solve", () => work.Run(progress, cancel));
        IReadOnlyList<LockinPoint> points = work.Points();
        for (int round = 0; round < MostRepeats && !cancelled && options.Mesh is null && Miss(points) > 1; round++)
        {
            // The refinement looked at two currents, not at the harmonics of all.
            try
            {
                double share = Math.Max(Room / Miss(points), LeastShare);
                if (refinement.Tightened(device, law, plans, weakest > 0 && bothSigns ? [largest, weakest] : [largest], bothSigns, share, Tell, clock, cancel) is not { } finer)
                {
                    break;
                }

                var again = new LockinWork(device, options, finer.Meshes, plans, law);
                cancelled = clock.Time("solve", () => again.Run(progress, cancel));
                IReadOnlyList<LockinPoint> next = again.Points();
                if (cancelled || Miss(next) >= Miss(points) || Failed(next) > Failed(points))
                {
                    break; // what stood before stands
                }

                (refinement, work, points) = (finer, again, next);
            }
            catch (OperationCanceledException)
            {
                cancelled = true;
            }
        }

        FieldLevel fine = refinement.Meshes.Fine;
        return new LockinResult
        {
            Device = device,
            Points = points,
            Slopes = LockinSummaries.Slopes(points),
            Lines = LockinSummaries.Lines(device, points),
            Limits = work.Limits(),
            Frames = work.Frames,
            Mesh = refinement.Meshes.Coarse.Space.Mesh,
            Levels = refinement.Levels,
            Cautions = Cautions.Of(AsAc(device), [.. points.Select(AsRow)]),
            Warnings = LockinWarnings.Of(device, points, work.Refusals),
            Figures = new(
                fine.Space.Size, fine.Space.Mesh.TriangleCount, fine.Analysis.FactorNonZeros,
                work.Total.Factorisations + (2 * refinement.Levels.Count), work.Total.Solves, work.Total.Steps, work.LargestResidual),
            Stages = clock.Times,
            Cancelled = cancelled,
        };
    }

    private static double Miss(IReadOnlyList<LockinPoint> points) => points.Select(p => p.Miss).DefaultIfEmpty(0).Max();

    private static int Failed(IReadOnlyList<LockinPoint> points) => points.Count(p => p.Status == RowStatus.NotConverged);

    // The touch-safe limit is that of AC whether or not a frequency was given.
    private static SheetDevice AsAc(SheetDevice device) =>
        device.Drive!.Frequencies.Count > 0 ? device : device with { Drive = device.Drive with { Frequencies = [1] } };

    // For the cautions: the source's RMS voltage, DC part included.
    private static CurveRow AsRow(LockinPoint p)
    {
        double rms = Math.Sqrt(p.Readings.Where(r => r.Pair == ReadingPlan.Source).Sum(r => r.R * r.R));
        return new(
            p.Wiring, p.CurrentRms, p.Readings.Count == 0 ? [] : [new(ReadingPlan.Source, rms, 0, null, null, null, 0, 0)], p.Steps, p.Status, p.Exit,
            p.PeakSheetCurrent, p.PeakPower);
    }
}
