using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;

namespace FieldSolve.Turning;

/// <summary>
/// Turns the current over all directions, or the crystal under one wiring. One mesh serves all directions; the curves are then
/// fitted with the formulas for a strip and with the response of the device itself.
/// </summary>
public static class TurnRun
{
    /// <summary>Runs the turn of a device.</summary>
    /// <param name="device">With a drive and at least one wiring.</param>
    /// <param name="options">What to turn, and what to keep.</param>
    /// <param name="progress">Told about stages and finished rows; may be null.</param>
    /// <param name="cancel">When cancelled, the rows finished so far are returned with <see cref="DriveResult.Cancelled"/> and without fits; before the first
    /// mesh stands, the call throws.</param>
    /// <exception cref="ArgumentException">The device has no drive.</exception>
    /// <exception cref="TurnException">There are fewer than two directions, a wiring has none, or the wanted wiring does not exist.</exception>
    /// <exception cref="OperationCanceledException">Cancelled before the mesh stood.</exception>
    /// <exception cref="FieldSpaceException">A part of the sheet is joined to the rest by no metal.</exception>
    public static TurnResult Execute(SheetDevice device, TurnOptions options, IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(options);
        if (device.Drive is null)
        {
            throw new ArgumentException("The device has no [drive].", nameof(device));
        }

        var clock = new StageClock();
        Solved solved = options.AxisSteps > 0
            ? TurnTheAxis(device, options, progress, clock, cancel)
            : TurnTheCurrent(device, options, progress, clock, cancel);
        DriveResult drive = solved.Drive;
        AngleFit? fit = null;
        IReadOnlyList<RatioCurve> ratios = [];
        double spent = clock.Times.Sum(t => t.Seconds);
        if (!drive.Cancelled)
        {
            try
            {
                progress?.Report(new("fitting", 0, 0));
                AngleDatum[] data = [.. solved.Places.Select((p, k) => Datum(p, [.. solved.Rows[k]], device.Law.IsLinear))];
                fit = clock.Time("fit", () => AngleFitter.Of(device, solved.Meshes.Fine, data, cancel));
                ratios = options.Ratios.Count == 0 ? [] : clock.Time("ratios", () => RatioSweep.Of(device, solved.Meshes, options.Ratios, solved.Places, cancel));
            }
            catch (OperationCanceledException)
            {
                drive = drive with { Cancelled = true };
            }
        }

        int nonZero = device.Drive.Currents.Count(c => c != 0), points = solved.SolvedPlaces * nonZero * (device.Drive.BothSigns ? 2 : 1);
        return new()
        {
            Mode = options.AxisSteps > 0 ? TurnMode.Axis : device.Turn?.Around is not null ? TurnMode.Ring : TurnMode.Wirings,
            Drive = drive with { Stages = clock.Times, Warnings = Shortened(drive.Warnings) },
            Rows = [.. solved.Places.SelectMany((p, k) => solved.Rows[k].Select(r => new TurnRow(p.DirectionDegrees, p.AxisDegrees(device), r)))],
            Maps = solved.Maps,
            Frames = solved.Frames,
            Fit = fit,
            Ratios = ratios,
            SolvedPoints = points,
            SecondsPerPoint = points > 0 ? spent / points : 0,
        };
    }

    private sealed record Solved(
        DriveResult Drive, MeshPair Meshes, IReadOnlyList<TurnPlace> Places, IReadOnlyList<IReadOnlyList<CurveRow>> Rows, IReadOnlyList<TurnMap> Maps,
        IReadOnlyList<TurnFrame> Frames, int SolvedPlaces);

    private static Solved TurnTheCurrent(
        SheetDevice device, TurnOptions options, IProgress<RunProgress>? progress, StageClock clock, CancellationToken cancel)
    {
        SheetDevice turned = device with { Wirings = Directions.Of(device) };
        TurnPlace[] places = [.. turned.Wirings.Select(w => new TurnPlace(w, CurrentDirection.Degrees(device, w), 0))];
        var drive = new DriveOptions { Maps = options.ForPictures ? MapChoice.Last : MapChoice.None, ForPictures = false, OneCurve = true, Mesh = options.Mesh };
        (DriveResult result, MeshRefinement refinement) = DriveRun.Run(turned, drive, progress, clock, cancel);
        MeshPair meshes = refinement.Meshes;
        List<CurveRow>[] rows = [.. places.Select(p => result.Rows.Where(r => r.Wiring == p.Wiring.Name).ToList())];
        TurnMap[] maps = [.. Mapped(places).Select(k => result.Maps.FirstOrDefault(m => m.Wiring == places[k].Wiring.Name) is { } map
            ? new TurnMap(places[k].DirectionDegrees, places[k].AxisDegrees(device), map)
            : null).OfType<TurnMap>()];
        TurnFrame[] frames = [.. Framed(places, meshes, options).Select(k => result.Maps.FirstOrDefault(m => m.Wiring == places[k].Wiring.Name) is { } map
            ? new TurnFrame(places[k].DirectionDegrees, places[k].AxisDegrees(device), PotentialFrame.Of(map))
            : null).OfType<TurnFrame>()];
        return new(result with { Maps = [] }, meshes, places, rows, maps, frames, places.Length);
    }

    private static Solved TurnTheAxis(
        SheetDevice device, TurnOptions options, IProgress<RunProgress>? progress, StageClock clock, CancellationToken cancel)
    {
        Wiring wiring = options.Wiring is null
            ? device.Wirings[0]
            : device.Wirings.FirstOrDefault(w => w.Name == options.Wiring)
                ?? throw new TurnException($"there is no wiring '{options.Wiring}'; the file has {string.Join(", ", device.Wirings.Select(w => $"'{w.Name}'"))}");
        Directions.RequireDirection(device, wiring);
        SheetDevice one = device with { Wirings = [wiring] };
        double direction = CurrentDirection.Degrees(device, wiring);
        TurnPlace[] places = [.. Enumerable.Range(0, options.AxisSteps).Select(k => new TurnPlace(wiring, direction, 360.0 * k / options.AxisSteps))];

        DriveSpec drive = device.Drive!;
        AxisMesh mesh = AxisMesh.Make(one, places, options.Mesh, stage => progress?.Report(new(stage, 0, places.Length * drive.Currents.Count)), clock, cancel);
        var work = new AxisWork(one, places, mesh, options.ForPictures ? Mapped(places) : [], Framed(places, mesh.Meshes, options));
        bool cancelled = clock.Time("solve", () => work.Run(progress, cancel));
        (List<(int Place, CurveRow Row)> rows, List<CurveRow> reversed) = work.Rows();
        FieldLevel fine = mesh.Meshes.Fine;
        NewtonOutcome total = work.States.Aggregate(default(NewtonOutcome), (sum, s) => sum.Then(s.Outcome));
        CurveRow[] all = [.. rows.Select(r => r.Row)];
        var result = new DriveResult
        {
            Device = one,
            Rows = all,
            ReversedRows = reversed,
            Summaries = [],
            Maps = [],
            Mesh = mesh.Meshes.Coarse.Space.Mesh,
            Levels = mesh.Levels,
            Cautions = Cautions.Of(one, [.. all, .. reversed]),
            Warnings = DriveWarnings.Of(device, all, work.Refusals),
            Figures = new(
                fine.Space.Size, fine.Space.Mesh.TriangleCount, fine.Analysis.FactorNonZeros,
                total.Factorisations + (2 * mesh.Levels.Count) + (2 * work.SolvedPlaces), total.Solves, total.Steps,
                work.States.Where(s => s.Values is not null).Select(s => s.Outcome.RelativeResidual).DefaultIfEmpty().Max()),
            Stages = [],
            Cancelled = cancelled,
        };
        List<CurveRow>[] perPlace = [.. places.Select((_, k) => rows.Where(r => r.Place == k).Select(r => r.Row).ToList())];
        TurnMap[] maps = [.. Mapped(places).Where(k => work.MapOf(k) is not null)
            .Select(k => new TurnMap(direction, places[k].AxisDegrees(device), work.MapOf(k)!))];
        TurnFrame[] frames = [.. Enumerable.Range(0, places.Length).Where(k => work.FrameOf(k) is not null)
            .Select(k => new TurnFrame(direction, places[k].AxisDegrees(device), work.FrameOf(k)!))];
        return new(result, mesh.Meshes, places, perPlace, maps, frames, work.SolvedPlaces);
    }

    // The first direction, and those nearest to 45 and 90 degrees further on: along an axis, between the axes and along the other axis if the first is on one.
    private static int[] Mapped(TurnPlace[] places)
    {
        double Angle(int k) => places[k].DirectionDegrees - places[k].TurnDegrees;
        return [.. new[] { 0.0, 45, 90 }.Select(further => Enumerable.Range(0, places.Length)
            .MinBy(k => (Math.Min(
                Degrees.Apart(Angle(k), Angle(0) + further), places[0].TurnDegrees == places[^1].TurnDegrees ? 360 : Degrees.Apart(Angle(k), Angle(0) - further)), k)))
            .Distinct()];
    }

    // Every direction while that fits, else as many as fit, evenly spread.
    private static int[] Framed(TurnPlace[] places, MeshPair meshes, TurnOptions options)
    {
        int each = Math.Max(1, PotentialFrame.MostNodalValues / meshes.Fine.Space.NodeCount), stride = (places.Length + each - 1) / each;
        return options.ForPictures ? [.. Enumerable.Range(0, places.Length).Where(k => k % stride == 0)] : [];
    }

    private static AngleDatum Datum(TurnPlace place, CurveRow[] rows, bool linear) => new(
        place.Wiring, Degrees.ToRadians(place.DirectionDegrees), place.Turn,
        WeakLimit.Of(rows, "along", linear), WeakLimit.Of(rows, "across", linear));

    // Many directions that miss the same thing need not say so one by one.
    private static IReadOnlyList<string> Shortened(IReadOnlyList<string> warnings)
    {
        const int Most = 3;
        return warnings.Count <= Most
            ? warnings
            : [.. warnings.Take(Most), string.Create(CultureInfo.InvariantCulture, $"{warnings.Count - Most} more warnings of the same kinds for other directions; the column 'status' of angles.csv marks every row.")];
    }
}
