using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Meshing;
using FieldSolve.Quantities;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>
/// Lays a measured map on the computed one: shift, turn, perhaps scale, gain and offset by robust least squares within bounds, from several beginnings; then says where the two differ
/// by more than the noise.
/// </summary>
public static class OverlayRun
{
    private const int MostPlaces = 5;

    // The computed map's error may move a number by this share of what the noise does; else the mesh is split, while it has no more unknowns than this or the device's limit.
    private const double WantedShare = 0.5;
    private const int MostSplits = 3, MostUnknowns = 200_000;

    // Most of a map's points must end on the sheet.
    private const double LeastOverlap = 0.3;

    // One place in a map of thousands passes 4.5 standard deviations by chance once in a hundred maps or less.
    private const double Significant = 4.5;

    /// <summary>Runs an overlay.</summary>
    /// <param name="device">With a wiring and, unless a current is given, a drive.</param>
    /// <param name="measured">The map.</param>
    /// <param name="options">How.</param>
    /// <param name="progress">Told about stages; may be null.</param>
    /// <param name="cancel">Stops the run; nothing is returned then.</param>
    /// <exception cref="FitException">There is no such wiring, no current, no solution, or the map does not lie on the sheet.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public static OverlayResult Execute(SheetDevice device, MeasuredMap measured, OverlayOptions options, IProgress<RunProgress>? progress, CancellationToken cancel) =>
        Registered(device, measured, options, progress, cancel).Result;

    /// <summary>The same, with what was registered.</summary>
    internal static (OverlayResult Result, Registration Registration, ComputedMap Map) Registered(
        SheetDevice device, MeasuredMap measured, OverlayOptions options, IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(measured);
        ArgumentNullException.ThrowIfNull(options);
        var clock = new StageClock();
        Wiring[] wirings = [.. device.Wirings.Where(w => options.Wiring is null || w.Name == options.Wiring)];
        if (wirings.Length == 0)
        {
            throw new FitException(options.Wiring is null
                ? "The file has no [[wiring]]; the computed map needs a source and a drain."
                : $"There is no wiring '{options.Wiring}'{Suggest.Hint(options.Wiring, [.. device.Wirings.Select(w => w.Name)])}");
        }

        double current = options.Current ?? device.Drive?.Currents[^1] ?? throw new FitException("The file has no [drive]; give the current: --current \"100 uA\".");
        if (current == 0)
        {
            throw new FitException("The current is zero; a map of nothing can be matched anywhere. Give --current \"100 uA\".");
        }

        SheetDevice driven = device with { Wirings = wirings, Drive = new DriveSpec(current, current, 1, false, [], 0) };
        (DriveResult drive, MeshPair meshes) = Driven(driven, null, progress, clock, cancel);
        ComputedMap[] maps = [.. drive.Maps.Select(m => clock.Time("drive", () => ComputedMap.Of(meshes, m, wirings.First(w => w.Name == m.Wiring), measured.Quantity, cancel)))];
        if (maps.Length == 0)
        {
            throw new FitException("No wiring has a solution at that current; drive less or extend the law.");
        }

        MapPoint[] near = [.. measured.Points.Where(q => Near(q, maps[0].Centre, maps[0].Extent, options))];
        if (near.Length < MapTable.FewestPoints)
        {
            throw new FitException(string.Create(CultureInfo.InvariantCulture, $"Only {near.Length} points of the map can lie on the sheet; are its units right, and does its origin lie near that of the device file?")) { IsOfData = true };
        }

        double reference = Math.Max(0.01 * (near.Max(q => q.Value) - near.Min(q => q.Value)), double.Epsilon);
        var found = new List<(OverlayCandidate Candidate, Registration Registration)>();
        FitException? refused = null;
        foreach (ComputedMap map in maps)
        {
            progress?.Report(new($"registering on {map.Map.Wiring}", 0, 0));
            Registration r;
            try
            {
                r = clock.Time("registration", () => Registration.Run(map, near, options with { Patch = false }, null, cancel));
            }
            catch (FitException e) when (e.IsOfData)
            {
                // A wiring that this map says nothing of, as where no field reaches it, leaves the others.
                refused ??= e;
                continue;
            }

            // Misfits of wirings are compared with one measure: the stated noise, or a hundredth of the range where none is stated.
            double misfit = Registration.Median([.. near.Select((q, i) => Math.Abs(q.Value - r.End.Values[i]) / (q.Sigma ?? reference))]) / Registration.MedianShare;
            found.Add((new(map.Map.Wiring, map.Map.Current, misfit), r));
        }

        if (found.Count == 0)
        {
            throw refused!;
        }

        (OverlayCandidate best, Registration registration) = found.OrderBy(f => f.Candidate.Misfit).First();
        ComputedMap computed = maps.First(m => m.Map.Wiring == best.Wiring);
        Wiring wiring = wirings.First(w => w.Name == best.Wiring);
        if (registration.IsStructured && options.Patch)
        {
            progress?.Report(new("looking for a patch", 0, 0));
            registration = clock.Time("registration", () => Registration.Run(computed, near, options, registration.End.P, cancel));
        }

        for (int split = 0; split < MostSplits && !IsFine(registration) && 4 * meshes.Fine.Space.Size <= Math.Min(MostUnknowns, device.Mesh.MaxUnknowns); split++)
        {
            progress?.Report(new("splitting the mesh for the map", 0, 0));
            (drive, meshes) = Driven(driven with { Wirings = [wiring] }, meshes.Fine.Space.Mesh, progress, clock, cancel);
            if (drive.Maps.Count == 0)
            {
                throw new FitException("The split mesh has no solution at that current; drive less or extend the law.");
            }

            computed = clock.Time("drive", () => ComputedMap.Of(meshes, drive.Maps[0], wiring, measured.Quantity, cancel));
            registration = clock.Time("registration", () => Registration.Run(computed, near, options, registration.End.P, cancel));
        }

        OverlayResult result = clock.Time(
            "residuals", () => Result(device, drive, measured, near, options, computed, registration, [.. found.Select(f => f.Candidate).OrderBy(c => c.Misfit)]));
        return (result with { Stages = clock.Times }, registration, computed);
    }

    private static (DriveResult Result, MeshPair Meshes) Driven(SheetDevice device, TriangleMesh? mesh, IProgress<RunProgress>? progress, StageClock clock, CancellationToken cancel)
    {
        // The drive's own clock: its stages are one here.
        (DriveResult Result, MeshRefinement Refinement)? driven = null;
        clock.Time("drive", () => { driven = DriveRun.Run(device, new DriveOptions { Maps = MapChoice.Last, ForPictures = false, Mesh = mesh }, progress, new StageClock(), cancel); });

        // A drive that is cancelled ends with the rows it has; here nothing is made of them.
        cancel.ThrowIfCancellationRequested();
        return (driven!.Value.Result, driven.Value.Refinement.Meshes);
    }

    private static bool IsFine(Registration r) => Enumerable.Range(0, OverlayFunction.Count).All(k => r.Numerical[k] <= WantedShare * r.Noise[k]);

    private static bool Near(MapPoint q, Point2 centre, Point2 extent, OverlayOptions options)
    {
        double room = options.MostShift * Math.Max(extent.X, extent.Y), turn = Math.Sin(Math.Min(options.MostTurn, Math.PI / 2)) * Math.Max(extent.X, extent.Y) / 2;
        return Math.Abs(q.X - centre.X) <= (extent.X / 2) + room + turn && Math.Abs(q.Y - centre.Y) <= (extent.Y / 2) + room + turn;
    }

    private static OverlayResult Result(
        SheetDevice device, DriveResult drive, MeasuredMap measured, MapPoint[] near, OverlayOptions options, ComputedMap map, Registration registration, IReadOnlyList<OverlayCandidate> candidates)
    {
        FitEnd end = registration.End;
        OverlaidPoint[] points = [.. near.Select((q, i) => new OverlaidPoint(q, registration.Place(i), registration.Model(i), registration.Sigma[i], registration.On[i] ? end.Weights[i] : 0)
        {
            MapError = Math.Abs(registration.MapError[i]),
            OfPatch = registration.OfPatch(i),
        })];
        OverlaidPoint[] on = [.. points.Where(p => p.Model is not null)];
        if (on.Length < Math.Max(MapTable.FewestPoints, LeastOverlap * near.Length))
        {
            throw new FitException(string.Create(CultureInfo.InvariantCulture, $"Only {on.Length} of {near.Length} points of the map end on the sheet; are its units right, and does its origin lie near that of the device file?")) { IsOfData = true };
        }

        double rms = Math.Sqrt(on.Average(p => p.Residual!.Value * p.Residual.Value)), noise = Math.Sqrt(on.Average(p => p.Sigma * p.Sigma));
        Registered Of(int k) => new(end.P[k], registration.Free[k] ? registration.Error(k) : 0)
        {
            Noise = registration.Noise[k],
            Numerical = registration.Numerical[k],
            Weighting = registration.Weighting[k],
        };
        CurveRow row = drive.Rows.First(r => r.Wiring == map.Map.Wiring);
        return new OverlayResult
        {
            Device = device,
            Measured = measured,
            Map = map.Map,
            Row = row,
            Candidates = candidates,
            ShiftX = Of(OverlayFunction.ShiftX),
            ShiftY = Of(OverlayFunction.ShiftY),
            Turn = Of(OverlayFunction.Turn),
            Scale = Of(OverlayFunction.Scale),
            Gain = Of(OverlayFunction.Gain),
            Offset = Of(OverlayFunction.Offset),
            Centre = map.Centre,
            Points = points,
            Rms = rms,
            Noise = noise,
            NoiseIsEstimated = near.Any(q => q.Sigma is null),
            Rejected = registration.Rejected,
            Misfit = registration.Misfit,
            Structure = registration.Structure,
            IsStructured = registration.IsStructured,
            Patch = registration.HasPatch ? Patch(registration, Of) : null,
            Places = Places(on, registration.HasPatch),
            Converged = end.Converged,
            Warnings = Warnings(registration, map, options, candidates, row),
            Stages = [],
        };
    }

    // The exterior of an insulating disc of radius a in a wide isotropic sheet is a dipole of 2 pi a² K (from the potential E (r + a²/r) cos; common practice, no source).
    private static OverlayPatch Patch(Registration registration, Func<int, Registered> of)
    {
        (double kx, double ky) = registration.CurrentAtPatch;
        double k = double.Hypot(kx, ky), x = registration.End.P[OverlayFunction.MissingX], y = registration.End.P[OverlayFunction.MissingY];
        double missing = k > 0 ? ((x * kx) + (y * ky)) / k : 0;
        double error = k > 0 ? double.Hypot(kx * registration.Error(OverlayFunction.MissingX), ky * registration.Error(OverlayFunction.MissingY)) / k : 0;
        return new(of(OverlayFunction.PatchX), of(OverlayFunction.PatchY), new(missing, error), missing > 0 ? Math.Sqrt(missing / (2 * Math.PI * k)) : 0);
    }

    private static List<string> Warnings(Registration registration, ComputedMap map, OverlayOptions options, IReadOnlyList<OverlayCandidate> candidates, CurveRow row)
    {
        double[] p = registration.End.P;
        var warnings = new List<string>();
        double shift = options.MostShift * map.Size;
        if ((shift > 0 && Math.Max(Math.Abs(p[0]), Math.Abs(p[1])) >= shift) || (options.MostTurn > 0 && Math.Abs(p[2]) >= options.MostTurn))
        {
            warnings.Add("The registration ended at the bound of its shift or turn; allow more (--most-shift, --most-turn), or look whether the map belongs to this device.");
        }

        if (candidates.Count > 1 && candidates[1].Misfit < 1.1 * candidates[0].Misfit)
        {
            warnings.Add($"Wiring '{candidates[1].Wiring}' describes the map nearly as well as '{candidates[0].Wiring}'; name the right one (--wiring).");
        }

        if (registration.HasPatch)
        {
            warnings.Add(string.Create(CultureInfo.InvariantCulture, $"The map shows a patch of other conductance near {SiText.Place(p[OverlayFunction.PatchX], p[OverlayFunction.PatchY])}; it was fitted along with the registration. Residuals are those of the sheet without it."));
        }

        if (registration.IsStructured)
        {
            warnings.Add(string.Create(CultureInfo.InvariantCulture, $"The misfit has a pattern that noise does not make: {100 * registration.Rejected:F0} % of the points count nothing. The numbers are those of the part of the map that agrees with the sheet; their errors are scaled by {registration.Structure:G3} and hold how far another weighting moves them."));
        }

        if (!IsFine(registration))
        {
            warnings.Add("The computed map's own error is more than half of what the noise does to a number of the registration; its share is in the stated errors (numerical_error).");
        }

        if (row.Status != RowStatus.Ok)
        {
            warnings.Add("The computed map is not 'ok' (outside its law, or above the wanted error); its differences from the measured one may be its own.");
        }

        return warnings;
    }

    // Where the map differs from the sheet. A patch makes a difference upstream of it everywhere; so once it is known, only its own place is named, and what else remains beside it.
    private static List<OverlayPlace> Places(OverlaidPoint[] on, bool patch)
    {
        int[][] neighbours = new Neighbourhood([.. on.Select(p => p.Place)]).All;
        var chosen = new List<OverlayPlace>();
        Choose(chosen, Means(on, neighbours, p => p.Residual!.Value), patch ? 1 : MostPlaces);
        if (patch)
        {
            Choose(chosen, Means(on, neighbours, p => p.Residual!.Value - p.OfPatch), MostPlaces);
        }

        return chosen;
    }

    // Mean over each point's neighbours against what noise and the computed map's error make of it.
    private static IEnumerable<OverlayPlace> Means(OverlaidPoint[] on, int[][] neighbours, Func<OverlaidPoint, double> value)
    {
        for (int i = 0; i < on.Length; i++)
        {
            OverlaidPoint[] around = [.. neighbours[i].Select(n => on[n])];

            // The computed map's errors have one sign over neighbours: they do not average out.
            double mean = around.Average(value), map = around.Average(x => x.MapError), error = Math.Sqrt((around.Sum(x => x.Sigma * x.Sigma) / around.Length / around.Length) + (map * map));
            yield return new(on[i].Place, mean, mean / error, Point2.Distance(around[^1].Place, on[i].Place));
        }
    }

    // The worst, then the worst not beside it.
    private static void Choose(List<OverlayPlace> chosen, IEnumerable<OverlayPlace> all, int most)
    {
        foreach (OverlayPlace place in all.OrderByDescending(x => Math.Abs(x.Significance)))
        {
            if (Math.Abs(place.Significance) < Significant || chosen.Count == most)
            {
                break;
            }

            if (chosen.All(c => Point2.Distance(c.Place, place.Place) > 2 * (c.Radius + place.Radius)))
            {
                chosen.Add(place);
            }
        }
    }
}
