using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>
/// Lays a measured map on the computed one: shift, turn, perhaps scale, gain and offset by robust least squares within bounds, from several beginnings; then says where the two differ
/// by more than the noise.
/// </summary>
public static class OverlayRun
{
    private const int MostScreened = 500, ScreenSteps = 25, MostSteps = 80, NoiseRounds = 4, Neighbours = 12, MostPlaces = 5;

    // A median absolute deviation of normal noise is this much of its standard deviation (common statistics, no source).
    private const double MedianShare = 0.6745;

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
    public static OverlayResult Execute(SheetDevice device, MeasuredMap measured, OverlayOptions options, IProgress<RunProgress>? progress, CancellationToken cancel)
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
        DriveResult drive = clock.Time("drive", () => DriveRun.Execute(driven, new DriveOptions { Maps = MapChoice.Last, ForPictures = false }, progress, cancel));
        var found = new List<(OverlayCandidate Candidate, OverlayFunction Function, FitEnd End, double[] Sigma)>();
        (Point2 low, Point2 high) = drive.Maps.Count > 0 ? drive.Maps[0].Bounds() : default;
        var centre = new Point2((low.X + high.X) / 2, (low.Y + high.Y) / 2);
        double size = Math.Max(high.X - low.X, high.Y - low.Y);
        MapPoint[] near = [.. measured.Points.Where(q => Near(q, centre, high - low, options))];
        if (drive.Maps.Count > 0 && near.Length < MapTable.FewestPoints)
        {
            throw new FitException(string.Create(CultureInfo.InvariantCulture, $"Only {near.Length} points of the map can lie on the sheet; are its units right, and does its origin lie near that of the device file?"));
        }

        foreach (FieldMap map in drive.Maps)
        {
            progress?.Report(new($"registering on {map.Wiring}", 0, 0));
            double[] values = measured.Quantity == MapQuantity.Potential ? map.Potential : [.. map.Ex.Zip(map.Ey, (x, y) => Math.Sqrt((x * x) + (y * y)))];
            var function = new OverlayFunction(new MapSampler(map), map, values, near, centre, size);
            (FitEnd end, double[] sigma) = clock.Time("registration", () => Register(function, map, values, near, centre, size, options, cancel));
            double misfit = Math.Sqrt(Robust([.. near.Select((q, i) => Math.Pow((q.Value - end.Values[i]) / Reference(near, i, values), 2))]));
            found.Add((new(map.Wiring, map.Current, misfit), function, end, sigma));
        }

        if (found.Count == 0)
        {
            throw new FitException("No wiring has a solution at that current; drive less or extend the law.");
        }

        var best = found.OrderBy(f => f.Candidate.Misfit).First();
        return clock.Time("residuals", () => Result(device, drive, measured, near, options, best.Function, best.End, best.Sigma, [.. found.Select(f => f.Candidate).OrderBy(c => c.Misfit)], centre, size))
            with
        { Stages = clock.Times };
    }

    // Misfits of wirings are compared with one measure: the stated noise, or a hundredth of the range where none is stated.
    private static double Reference(MapPoint[] points, int i, double[] values) => points[i].Sigma ?? Math.Max(0.01 * (points.Max(q => q.Value) - points.Min(q => q.Value)), double.Epsilon);

    private static bool Near(MapPoint q, Point2 centre, Point2 extent, OverlayOptions options)
    {
        double room = options.MostShift * Math.Max(extent.X, extent.Y), turn = Math.Sin(Math.Min(options.MostTurn, Math.PI / 2)) * Math.Max(extent.X, extent.Y) / 2;
        return Math.Abs(q.X - centre.X) <= (extent.X / 2) + room + turn && Math.Abs(q.Y - centre.Y) <= (extent.Y / 2) + room + turn;
    }

    private static (FitEnd End, double[] Sigma) Register(
        OverlayFunction function, FieldMap map, double[] values, MapPoint[] points, Point2 centre, double size, OverlayOptions options, CancellationToken cancel)
    {
        // Without stated noise: a first guess from the range, then from the residuals.
        double range = points.Max(q => q.Value) - points.Min(q => q.Value);
        double[] sigma = [.. points.Select(q => q.Sigma ?? Math.Max(0.02 * range, double.Epsilon))];
        MapPoint[] few = [.. points.Where((_, i) => i % ((points.Length / MostScreened) + 1) == 0)];
        double[] fewSigma = [.. sigma.Where((_, i) => i % ((points.Length / MostScreened) + 1) == 0)];
        var screen = new OverlayFunction(new MapSampler(map), map, values, few, centre, size);
        (double low, double high) = screen.Range;

        // Gain and offset to begin with from the ranges; a far start wants wide sigmas, or the robust loss sees nothing but outliers.
        double gain = options.FixedGain ? 1 : Math.Clamp(high > low ? Spread([.. few.Select(q => q.Value)]) / Math.Max(Spread(Seen(screen, few, centre)), double.Epsilon) : 1, 0.02, 50);
        double[] wide = [.. fewSigma.Select(s => Math.Max(s, 0.05 * range))];
        FitEnd? best = null;
        double step = 0.5 * options.MostShift * size, turn = 0.5 * options.MostTurn;
        var starts = new List<double[]>();
        foreach (double sign in options.FixedGain || function.Range.Low >= 0 ? new[] { 1.0 } : [1.0, -1.0])
        {
            for (int k = 0; k < 27; k++)
            {
                double g = sign * gain, offset = options.FixedOffset ? 0 : Median([.. few.Select(q => q.Value)]) - (g * Median(Seen(screen, few, centre)));
                starts.Add([step * ((k % 3) - 1), step * ((k / 3 % 3) - 1), turn * ((k / 9) - 1), 1, g, offset]);
            }
        }

        foreach (double[] start in starts)
        {
            cancel.ThrowIfCancellationRequested();
            FitEnd? end = LeastSquares.Run(screen, Task(few, wide, size, options), start, ScreenSteps, cancel);
            best = end is not null && (best is null || end.Objective < best.Objective) ? end : best;
        }

        FitEnd last = LeastSquares.Run(function, Task(points, [.. sigma.Select(s => Math.Max(s, 0.02 * range))], size, options), best!.P, MostSteps, cancel)!;
        for (int round = 0; round < NoiseRounds; round++)
        {
            if (points.Any(q => q.Sigma is null))
            {
                double estimate = Median([.. points.Select((q, i) => Math.Abs(q.Value - last.Values[i]))]) / MedianShare;
                sigma = [.. points.Select((q, i) => q.Sigma ?? Math.Max(estimate, 1e-9 * range))];
            }
            else if (round > 0)
            {
                break;
            }

            last = LeastSquares.Run(function, Task(points, sigma, size, options), last.P, MostSteps, cancel)!;
        }

        return (last, sigma);
    }

    private static double[] Seen(OverlayFunction function, MapPoint[] points, Point2 centre)
    {
        double[] p = [0, 0, 0, 1, 1, 0];
        double[] seen = [.. points.Select(q => function.Inside(OverlayFunction.Place(p, q, centre))).OfType<double>()];
        return seen.Length > 0 ? seen : [0];
    }

    private static FitTask Task(MapPoint[] points, double[] sigma, double size, OverlayOptions options)
    {
        double shift = options.MostShift * size, infinite = double.PositiveInfinity;
        return new(
            [.. points.Select(q => q.Value)], sigma,
            [-shift, -shift, -options.MostTurn, 0.8, -1e6, -infinite], [shift, shift, options.MostTurn, 1.25, 1e6, infinite],
            new double[OverlayFunction.Count], [.. Enumerable.Repeat(infinite, OverlayFunction.Count)],
            [options.MostShift == 0, options.MostShift == 0, options.MostTurn == 0, !options.Scale, options.FixedGain, options.FixedOffset],
            [shift, shift, options.MostTurn, 0.2, infinite, infinite], new bool[OverlayFunction.Count], true);
    }

    private static OverlayResult Result(
        SheetDevice device, DriveResult drive, MeasuredMap measured, MapPoint[] near, OverlayOptions options, OverlayFunction function, FitEnd end, double[] sigma,
        IReadOnlyList<OverlayCandidate> candidates, Point2 centre, double size)
    {
        OverlaidPoint[] points = [.. near.Select((q, i) =>
        {
            Point2 at = OverlayFunction.Place(end.P, q, centre);
            double? inside = function.Inside(at);
            return new OverlaidPoint(q, at, inside is { } v ? (end.P[OverlayFunction.Gain] * v) + end.P[OverlayFunction.Offset] : null, sigma[i], end.Weights[i]);
        })];
        OverlaidPoint[] on = [.. points.Where(p => p.Model is not null)];
        if (on.Length < Math.Max(MapTable.FewestPoints, LeastOverlap * near.Length))
        {
            throw new FitException(string.Create(CultureInfo.InvariantCulture, $"Only {on.Length} of {near.Length} points of the map end on the sheet; are its units right, and does its origin lie near that of the device file?"));
        }

        double[] errors = Errors(points, function, end, sigma, Task(near, sigma, size, options).Held);
        double rms = Math.Sqrt(on.Average(p => p.Residual!.Value * p.Residual.Value)), noise = Math.Sqrt(on.Average(p => p.Sigma * p.Sigma));
        Registered Of(int k) => new(end.P[k], errors[k]);
        IReadOnlyList<OverlayPlace> places = Places(on);
        var warnings = new List<string>();
        double shift = options.MostShift * size;
        if ((shift > 0 && Math.Max(Math.Abs(end.P[0]), Math.Abs(end.P[1])) >= shift) || (options.MostTurn > 0 && Math.Abs(end.P[2]) >= options.MostTurn))
        {
            warnings.Add("The registration ended at the bound of its shift or turn; allow more (--most-shift, --most-turn), or look whether the map belongs to this device.");
        }

        if (candidates.Count > 1 && candidates[1].Misfit < 1.1 * candidates[0].Misfit)
        {
            warnings.Add($"Wiring '{candidates[1].Wiring}' describes the map nearly as well as '{candidates[0].Wiring}'; name the right one (--wiring).");
        }

        CurveRow row = drive.Rows.First(r => r.Wiring == function.Map.Wiring);
        if (row.Status != RowStatus.Ok)
        {
            warnings.Add("The computed map is not 'ok' (outside its law, or above the wanted error); its differences from the measured one may be its own.");
        }

        return new OverlayResult
        {
            Device = device,
            Measured = measured,
            Map = function.Map,
            Row = row,
            Candidates = candidates,
            ShiftX = Of(OverlayFunction.ShiftX),
            ShiftY = Of(OverlayFunction.ShiftY),
            Turn = Of(OverlayFunction.Turn),
            Scale = Of(OverlayFunction.Scale),
            Gain = Of(OverlayFunction.Gain),
            Offset = Of(OverlayFunction.Offset),
            Centre = centre,
            Points = points,
            Rms = rms,
            Noise = noise,
            NoiseIsEstimated = near.Any(q => q.Sigma is null),
            Places = places,
            Converged = end.Converged,
            Warnings = warnings,
            Stages = [],
        };
    }

    // Of the robust estimate: mean psi² over the squared mean psi' times the inverse of J'J (P. J. Huber, Robust Statistics (1981), section 7.6); a misfit of the model beyond the noise
    // is thereby in them.
    private static double[] Errors(OverlaidPoint[] points, OverlayFunction function, FitEnd end, double[] sigma, bool[] held)
    {
        int[] free = [.. Enumerable.Range(0, OverlayFunction.Count).Where(k => !held[k])];
        double psi = 0, slope = 0;
        int n = 0;
        double[] norm = new double[OverlayFunction.Count];
        for (int i = 0; i < points.Length; i++)
        {
            if (points[i].Residual is not { } r)
            {
                continue;
            }

            double z = r / sigma[i], w = LeastSquares.Weight(z, true);
            (psi, slope, n) = (psi + (w * z * w * z), slope + (w * (1 - (2 * z * z / (LeastSquares.Freedom + (z * z))))), n + 1);
            foreach (int k in free)
            {
                norm[k] += Math.Pow(end.Jacobian[i, k] / sigma[i], 2);
            }
        }

        var a = MathNet.Numerics.LinearAlgebra.Double.DenseMatrix.Create(free.Length, free.Length, (p, q) => Enumerable.Range(0, points.Length)
            .Where(i => points[i].Model is not null).Sum(i => end.Jacobian[i, free[p]] * end.Jacobian[i, free[q]] / (sigma[i] * sigma[i])) / Math.Sqrt(norm[free[p]] * norm[free[q]]));
        var inverse = a.Inverse();
        double factor = psi / n / Math.Pow(slope / n, 2);
        double[] errors = new double[OverlayFunction.Count];
        for (int k = 0; k < free.Length; k++)
        {
            errors[free[k]] = Math.Sqrt(factor * inverse[k, k] / norm[free[k]]);
        }

        return errors;
    }

    // Mean residual over each point's neighbours: a patch shows where single points drown in noise.
    private static List<OverlayPlace> Places(OverlaidPoint[] on)
    {
        var tree = new NetTopologySuite.Index.KdTree.KdTree<OverlaidPoint>();
        int count = Math.Min(Neighbours, on.Length);
        double low = on.Min(p => p.Place.X), high = on.Max(p => p.Place.X), bottom = on.Min(p => p.Place.Y), top = on.Max(p => p.Place.Y);
        double reach = 2.5 * Math.Sqrt((high - low) * (top - bottom) * count / on.Length / Math.PI);
        foreach (OverlaidPoint p in on)
        {
            tree.Insert(new NetTopologySuite.Geometries.Coordinate(p.Place.X, p.Place.Y), p);
        }

        var all = new List<OverlayPlace>();
        foreach (OverlaidPoint p in on)
        {
            (double Distance, OverlaidPoint Point)[] around =
            [
                .. tree.Query(new NetTopologySuite.Geometries.Envelope(p.Place.X - reach, p.Place.X + reach, p.Place.Y - reach, p.Place.Y + reach))
                    .Select(node => (Point2.Distance(node.Data.Place, p.Place), node.Data)).OrderBy(x => x.Item1).ThenBy(x => x.Item2.Point.Line).Take(count),
            ];
            double mean = around.Average(x => x.Point.Residual!.Value), error = Math.Sqrt(around.Sum(x => x.Point.Sigma * x.Point.Sigma)) / around.Length;
            all.Add(new(p.Place, mean, mean / error, around[^1].Distance));
        }

        // The worst, then the worst not beside it.
        var chosen = new List<OverlayPlace>();
        foreach (OverlayPlace place in all.OrderByDescending(x => Math.Abs(x.Significance)))
        {
            if (Math.Abs(place.Significance) < Significant || chosen.Count == MostPlaces)
            {
                break;
            }

            if (chosen.All(c => Point2.Distance(c.Place, place.Place) > 2 * (c.Radius + place.Radius)))
            {
                chosen.Add(place);
            }
        }

        return chosen;
    }

    private static double Median(double[] values)
    {
        double[] sorted = [.. values.Order()];
        return sorted.Length == 0 ? 0 : sorted[sorted.Length / 2];
    }

    // Between the 10 and the 90 % point: outliers at the rim play no part.
    private static double Spread(double[] values)
    {
        double[] sorted = [.. values.Order()];
        return sorted[(int)(0.9 * (sorted.Length - 1))] - sorted[(int)(0.1 * (sorted.Length - 1))];
    }

    private static double Robust(double[] squares) => Median(squares) / (MedianShare * MedianShare);
}
