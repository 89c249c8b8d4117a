using FieldSolve.Geometry;
using FieldSolve.Measured;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace FieldSolve.Runs;

/// <summary>
/// Shift, turn, perhaps scale, gain and offset that carry a map onto the computed one. A robust loss from many beginnings finds the neighbourhood, an estimate with a redescending weight
/// the answer; the scale of the residuals decides what is an outlier (V. J. Yohai, Ann. Stat. 15, 642 (1987)). A patch that does not conduct raises the potential of all that lies
/// upstream of it, which no weight can tell from a larger gain: where the residuals have a pattern, one patch is looked for and fitted along (<see cref="PatchResponse"/>).
/// </summary>
internal sealed class Registration
{
    private const int MostScreened = 400, ScreenSteps = 25, MostSteps = 80, Rounds = 6;

    // A median absolute deviation of normal noise is this much of its standard deviation (common statistics, no source).
    public const double MedianShare = 0.6745;

    private OverlayFunction function;
    private readonly MapPoint[] points;
    private readonly OverlayOptions options;
    private readonly double range;

    private Registration(OverlayFunction function, MapPoint[] points, OverlayOptions options)
    {
        (this.function, this.points, this.options) = (function, points, options);
        range = points.Max(q => q.Value) - points.Min(q => q.Value);
        Sigma = [.. points.Select(q => q.Sigma ?? Math.Max(0.02 * range, double.Epsilon))];
    }

    /// <summary>Where it ended.</summary>
    public FitEnd End { get; private set; } = null!;

    /// <summary>Standard deviation of each point's noise: stated, or from the residuals.</summary>
    public double[] Sigma { get; private set; }

    /// <summary>Error that the computed map may have at each point, with the probe's gain and its sign.</summary>
    public double[] MapError { get; private set; } = [];

    /// <summary>Points that lie on the sheet.</summary>
    public bool[] On { get; private set; } = [];

    /// <summary>Residuals of those that are no outliers, over what noise and the computed map's error make of them; 1 when the noise is what was stated.</summary>
    public double Misfit { get; private set; } = 1;

    /// <summary>How much larger means over neighbouring points scatter than independent residuals would; 1 where nothing but noise is left.</summary>
    public double Structure { get; private set; } = 1;

    /// <summary>Share of the points on the sheet that count nothing.</summary>
    public double Rejected { get; private set; }

    /// <summary>The misfit has a pattern, so that the numbers depend on how it is weighted.</summary>
    public bool IsStructured { get; private set; }

    /// <summary>Which numbers are free.</summary>
    public bool[] Free { get; private set; } = [];

    /// <summary>Standard errors: noise (with the pattern of the residuals), the computed map's error, and the dependence on weights and on the patch's width.</summary>
    public double[] Noise { get; private set; } = [];

    /// <summary>What the computed map's error may do to each number.</summary>
    public double[] Numerical { get; private set; } = [];

    /// <summary>What another weighting of the points does to each number, where the misfit <see cref="IsStructured"/>, and another width of the patch, where there is one; else 0.</summary>
    public double[] Weighting { get; private set; } = [];

    /// <summary>All three in squares.</summary>
    public double Error(int k) => Math.Sqrt((Noise[k] * Noise[k]) + (Numerical[k] * Numerical[k]) + (Weighting[k] * Weighting[k]));

    /// <summary>Registers.</summary>
    /// <param name="map">The computed map.</param>
    /// <param name="points">Those of the measured map that can lie on the sheet.</param>
    /// <param name="options">How.</param>
    /// <param name="start">Numbers to begin with, from a coarser map; null to look everywhere.</param>
    /// <param name="cancel">Stops the work.</param>
    public static Registration Run(ComputedMap map, MapPoint[] points, OverlayOptions options, double[]? start, CancellationToken cancel)
    {
        var r = new Registration(new(map, points), points, options);
        r.Find(start?[..OverlayFunction.Count] ?? r.Screen(cancel), cancel);
        return r;
    }

    /// <summary>Whether a patch is part of the answer; its numbers follow those of the pose then.</summary>
    public bool HasPatch => function.Patch is not null;

    /// <summary>Undisturbed sheet current density where the patch lies, A/m.</summary>
    public (double X, double Y) CurrentAtPatch => function.Patch!.CurrentAt(new(End.P[OverlayFunction.PatchX], End.P[OverlayFunction.PatchY]));

    /// <summary>What the patch adds at a point, in the unit of the map.</summary>
    public double OfPatch(int i) => HasPatch ? End.Values[i] - (Model(i) ?? End.Values[i]) : 0;

    /// <summary>Where a point lies on the sheet.</summary>
    public Point2 Place(int i) => function.Place(End.P, points[i]);

    /// <summary>What the probe would show there; null off the sheet.</summary>
    public double? Model(int i) => function.Map.Value(Place(i)) is { } v ? (End.P[OverlayFunction.Gain] * v) + End.P[OverlayFunction.Offset] : null;

    // A far start wants wide sigmas, or the robust loss sees nothing but outliers. Gain and offset begin with the ranges.
    private double[] Screen(CancellationToken cancel)
    {
        int stride = (points.Length / MostScreened) + 1;
        MapPoint[] few = [.. points.Where((_, i) => i % stride == 0)];
        double[] wide = [.. Sigma.Where((_, i) => i % stride == 0).Select(s => Math.Max(s, 0.05 * range))];
        ComputedMap map = function.Map;
        var screen = new OverlayFunction(map, few);
        (double low, double high) = map.Range;
        double[] seen = [.. few.Select(q => map.Value(new(q.X, q.Y))).OfType<double>()], shown = [.. few.Select(q => q.Value)];
        seen = seen.Length > 0 ? seen : [0];
        double gain = options.FixedGain ? 1 : Math.Clamp(high > low ? Spread(shown) / Math.Max(Spread(seen), double.Epsilon) : 1, 0.02, 50);
        FitEnd? best = null;
        double step = 0.5 * options.MostShift * map.Size, turn = 0.5 * options.MostTurn;
        FitTask task = Task(few, wide, false);
        foreach (double sign in options.FixedGain || map.Quantity == MapQuantity.Field ? new[] { 1.0 } : [1.0, -1.0])
        {
            for (int k = 0; k < 27; k++)
            {
                cancel.ThrowIfCancellationRequested();
                double g = sign * gain, offset = options.FixedOffset ? 0 : Median(shown) - (g * Median(seen));
                FitEnd? end = LeastSquares.Run(screen, task, [step * ((k % 3) - 1), step * ((k / 3 % 3) - 1), turn * ((k / 9) - 1), 1, g, offset], ScreenSteps, cancel);
                best = end is not null && (best is null || end.Objective < best.Objective) ? end : best;
            }
        }

        return best!.P;
    }

    private void Find(double[] start, CancellationToken cancel)
    {
        FitEnd all = LeastSquares.Run(function, Task(points, [.. Sigma.Select(s => Math.Max(s, 0.02 * range))], false), start, MostSteps, cancel)!;
        Estimate(all.Values, null);
        all = LeastSquares.Run(function, Task(points, Total(all.P, 1), false), all.P, MostSteps, cancel)!;

        // What lies on the sheet now is what is compared from here on: points off it have no model.
        On = [.. points.Select(q => function.Map.Value(function.Place(all.P, q)) is not null)];
        if (!On.Contains(true))
        {
            throw new FitException("No point of the map ends on the sheet; are its units right, and does its origin lie near that of the device file?") { IsOfData = true };
        }

        double scale = Estimate(all.Values, null);
        Settle(all, scale, cancel);
        if (IsStructured && options.Patch && On.Count(o => o) >= FewestForPatch)
        {
            FindPatch(all, cancel);
        }
    }

    // From a robust fit to the estimate with a redescending weight.
    private void Settle(FitEnd from, double scale, CancellationToken cancel)
    {
        End = from;
        double last = double.NaN;
        for (int round = 0; round < Rounds && !(Math.Abs(scale - last) < 0.01 * scale); round++)
        {
            End = LeastSquares.Run(function, Task(points, Total(End.P, Math.Max(1, scale)), true), End.P, MostSteps, cancel)!;
            (last, scale) = (scale, Estimate(End.Values, End.Weights));
        }

        Misfit = scale;
        Judge(from, cancel);
    }

    // Everywhere on a net over the sheet: what is left of the squares when the numbers and a patch there are fitted together, linearised. From the best places the full fit.
    private void FindPatch(FitEnd all, CancellationToken cancel)
    {
        int[] on = [.. Enumerable.Range(0, points.Length).Where(i => On[i])];
        Point2[] at = [.. points.Select(q => function.Place(all.P, q))];
        double area = function.Map.Extent.X * function.Map.Extent.Y / on.Length;
        PatchResponse patch = function.Map.Patch(Math.Max(Math.Sqrt(area), LeastPatch * function.Map.Size), cancel);
        double[] total = Total(all.P, 1);
        int stride = (on.Length / MostScreened) + 1;
        int[] few = [.. on.Where((_, k) => k % stride == 0)];
        int[] pose = [.. Enumerable.Range(0, OverlayFunction.Count).Where(k => Free[k])];
        var left = new List<(Point2 At, double Squares, double X, double Y)>();
        foreach (Point2 place in Net(at, on))
        {
            cancel.ThrowIfCancellationRequested();
            (double[] x, double[] y) = patch.At(place.X, place.Y);
            var a = new DenseMatrix(few.Length, pose.Length + 2);
            var b = new DenseVector(few.Length);
            for (int r = 0; r < few.Length; r++)
            {
                int i = few[r];
                double z = (points[i].Value - all.Values[i]) / total[i];
                b[r] = z;
                for (int k = 0; k < pose.Length; k++)
                {
                    a[r, k] = all.Jacobian[i, pose[k]] / total[i];
                }

                a[r, pose.Length] = all.P[OverlayFunction.Gain] * patch.Value(x, at[i]) / total[i];
                a[r, pose.Length + 1] = all.P[OverlayFunction.Gain] * patch.Value(y, at[i]) / total[i];
            }

            double[] norm = [.. Enumerable.Range(0, a.ColumnCount).Select(k => Math.Max(a.Column(k).L2Norm(), double.Epsilon))];
            var scaled = DenseMatrix.Create(a.RowCount, a.ColumnCount, (r, k) => a[r, k] / norm[k]);
            Vector<double> p = scaled.QR(MathNet.Numerics.LinearAlgebra.Factorization.QRMethod.Thin).Solve(b);
            left.Add((place, (b - (scaled * p)).L2Norm(), p[pose.Length] / norm[pose.Length], p[pose.Length + 1] / norm[pose.Length + 1]));
        }

        OverlayFunction without = function;
        function = new(without.Map, points, patch);
        FitTask task = Task(points, total, false);
        FitEnd? best = null;
        foreach ((Point2 place, _, double x, double y) in left.Where(l => double.IsFinite(l.Squares)).OrderBy(l => l.Squares).Take(MostPatches))
        {
            FitEnd? end = LeastSquares.Run(function, task, [.. all.P, place.X, place.Y, x, y], MostSteps, cancel);
            best = end is not null && (best is null || end.Objective < best.Objective) ? end : best;
        }

        if (best is null || best.Objective > PatchGain * LeastSquares.Objective(task, best.P, all.Values))
        {
            function = without;
            return;
        }

        Settle(best, Estimate(best.Values, null), cancel);
        VaryPatch(cancel);
    }

    // A patch has a shape, and what stands for it here has another: the numbers may be off by as much as a bell of another width moves them.
    private void VaryPatch(CancellationToken cancel)
    {
        (OverlayFunction own, FitEnd end) = (function, End);
        function = new(own.Map, points, own.Map.Patch(OtherWidth * own.Patch!.Width, cancel));
        FitEnd? other = LeastSquares.Run(function, Task(points, Added(Math.Max(1, Misfit)), true), end.P, MostSteps, cancel);
        function = own;
        for (int k = 0; other is not null && k < function.Length; k++)
        {
            Weighting[k] = double.Hypot(Weighting[k], Free[k] ? other.P[k] - end.P[k] : 0);
        }
    }

    private const double OtherWidth = 1.6;

    // Fewer points cannot tell a patch from anything else.
    private const int FewestForPatch = 100;

    // A patch that explains less than this share of the misfit is not called one.
    private const double PatchGain = 0.6;

    // Of the size of the sheet.
    private const double LeastPatch = 0.025;
    private const int MostPatches = 3, NetPoints = 120;

    // One point of the map in each box of a net over the sheet.
    private IEnumerable<Point2> Net(Point2[] at, int[] on)
    {
        double box = Math.Sqrt(function.Map.Extent.X * function.Map.Extent.Y / NetPoints);
        return on.Select(i => at[i]).GroupBy(p => (Math.Floor(p.X / box), Math.Floor(p.Y / box))).Select(g => g.First());
    }

    // Points that play no part keep this many times their sigma.
    private const double Far = 1e4;

    // Scale of the residuals by their median; where no noise was stated it becomes the noise. With weights, of what is not rejected.
    private double Estimate(double[] values, double[]? weights)
    {
        bool Counts(int i) => (On.Length == 0 || On[i]) && (weights is null || weights[i] > 0.05);
        int[] own = [.. Enumerable.Range(0, points.Length).Where(Counts)];
        if (own.Length == 0)
        {
            return 1;
        }

        if (points.Any(q => q.Sigma is null))
        {
            double found = Math.Max(Median([.. own.Select(i => Math.Abs(points[i].Value - values[i]))]) / MedianShare, 1e-9 * range);
            Sigma = [.. points.Select(q => q.Sigma ?? found)];
            return 1;
        }

        double[] total = MapError.Length == 0 ? Sigma : Added(1);
        return Median([.. own.Select(i => Math.Abs(points[i].Value - values[i]) / total[i])]) / MedianShare;
    }

    // Noise with the computed map's error at these numbers; off the sheet, once that is settled, next to nothing is known.
    private double[] Total(double[] p, double scale)
    {
        MapError = [.. points.Select(q => p[OverlayFunction.Gain] * function.Map.Error(function.Place(p, q)))];
        return Added(scale);
    }

    private double[] Added(double scale) =>
        [.. Sigma.Select((s, i) => (On.Length == 0 || On[i] ? 1 : Far) * scale * Math.Sqrt((s * s) + (MapError[i] * MapError[i])))];

    private FitTask Task(MapPoint[] of, double[] sigma, bool redescending)
    {
        ComputedMap map = function.Map;
        bool patch = function.Patch is not null;
        double[] With(double[] pose, params double[] more) => patch ? [.. pose, .. more] : pose;
        double shift = options.MostShift * function.Map.Size, infinite = double.PositiveInfinity;
        return new(
            [.. of.Select(q => q.Value)], sigma,
            With([-shift, -shift, -options.MostTurn, 0.8, -1e6, -infinite], map.Centre.X - (map.Extent.X / 2), map.Centre.Y - (map.Extent.Y / 2), -infinite, -infinite),
            With([shift, shift, options.MostTurn, 1.25, 1e6, infinite], map.Centre.X + (map.Extent.X / 2), map.Centre.Y + (map.Extent.Y / 2), infinite, infinite),
            new double[function.Length], [.. Enumerable.Repeat(infinite, function.Length)],
            [options.MostShift == 0, options.MostShift == 0, options.MostTurn == 0, !options.Scale, options.FixedGain, options.FixedOffset, .. new bool[function.Length - OverlayFunction.Count]],
            With([shift, shift, options.MostTurn, 0.2, infinite, infinite], 0.1 * map.Size, 0.1 * map.Size, infinite, infinite), new bool[function.Length], true)
        {
            Redescending = redescending,
        };
    }

    // Of the robust estimate: A^-1 B A^-1 with A the sum of psi' J'J and B that of psi² J'J (P. J. Huber, Robust Statistics (1981), section 7.6). The computed map's error moves the numbers
    // by A^-1 times the sum of J w e, all of it at once: it has one sign over large parts.
    private void Judge(FitEnd all, CancellationToken cancel)
    {
        double[] total = Total(End.P, Math.Max(1, Misfit));
        FitTask task = Task(points, total, true);
        Free = [.. task.Held.Select(h => !h)];
        int[] free = [.. Enumerable.Range(0, function.Length).Where(k => Free[k])], on = [.. Enumerable.Range(0, points.Length).Where(i => On[i])];
        int rejected = 0;
        double[] norm = [.. free.Select(k => Math.Max(Math.Sqrt(on.Sum(i => Math.Pow(End.Jacobian[i, k] / total[i], 2))), double.Epsilon))];
        double[] z = [.. points.Select((q, i) => (q.Value - End.Values[i]) / total[i])];
        var a = new DenseMatrix(free.Length, free.Length);
        var b = new DenseMatrix(free.Length, free.Length);
        var push = new DenseVector(free.Length);
        foreach (int i in on)
        {
            double w = task.Weight(z[i]), u = z[i] * z[i] / (LeastSquares.Reach * LeastSquares.Reach), slope = u < 1 ? (1 - u) * (1 - (5 * u)) : 0;
            rejected += u >= 1 ? 1 : 0;
            for (int k = 0; k < free.Length; k++)
            {
                double jk = End.Jacobian[i, free[k]] / total[i] / norm[k];
                push[k] += w * jk * MapError[i] / total[i];
                for (int l = 0; l < free.Length; l++)
                {
                    double jj = jk * End.Jacobian[i, free[l]] / total[i] / norm[l];
                    a[k, l] += slope * jj;
                    b[k, l] += w * w * z[i] * z[i] * jj;
                }
            }
        }

        Rejected = (double)rejected / on.Length;
        Structure = Pattern(on, z);
        IsStructured = Structure > MostPattern || Misfit > MostMisfit;
        (Noise, Numerical, Weighting) = (new double[function.Length], new double[function.Length], new double[function.Length]);
        if (free.Length == 0)
        {
            // The pose, gain and offset are given: the maps are only compared.
            return;
        }

        if (!(a.ConditionNumber() < MostCondition))
        {
            throw new FitException("The map does not determine the registration: some of shift, turn, gain and offset do the same to it. Hold some of them (--fixed-gain, --fixed-offset, --most-shift 0, --most-turn \"0 deg\"), or map more of the sheet.") { IsOfData = true };
        }

        Matrix<double> inverse = a.Inverse(), spread = inverse * b * inverse;
        Vector<double> moved = inverse * push;
        FitEnd? other = IsStructured ? LeastSquares.Run(function, Task(points, Added(1), false), all.P, MostSteps, cancel) : null;
        for (int k = 0; k < free.Length; k++)
        {
            Noise[free[k]] = Structure * Math.Sqrt(spread[k, k]) / norm[k];
            Numerical[free[k]] = Math.Abs(moved[k]) / norm[k];
            Weighting[free[k]] = other is null ? 0 : Math.Abs(other.P[free[k]] - End.P[free[k]]);
        }
    }

    // Of the normal matrix scaled to ones on its diagonal: beyond it rounding makes the errors.
    private const double MostCondition = 1e12;

    // Beyond these the residuals are no noise any more (chance makes the first 1.0 to 1.2).
    private const double MostPattern = 1.4, MostMisfit = 1.5;

    // Means over neighbours that are no outliers; of single outliers nothing is seen, of a patch all around it.
    private double Pattern(int[] on, double[] z)
    {
        var near = new Neighbourhood([.. on.Select(Place)]);
        double squares = 0;
        foreach (int[] around in near.All)
        {
            double mean = around.Average(n => Math.Clamp(z[on[n]], -LeastSquares.Reach, LeastSquares.Reach));
            squares += mean * mean * around.Length;
        }

        return Math.Max(1, Math.Sqrt(squares / on.Length));
    }

    internal static double Median(double[] values)
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
}
