using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Measured;
using FieldSolve.Meshing;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>
/// Numbers of a device from measured voltages. The fit runs on one mesh with exact derivatives; what that mesh lacks of every datum is known from its uniform split at the
/// numbers the mesh was made for, and is measured anew where the fit ended until nothing moves (defect correction).
/// </summary>
public static class FitRun
{
    private const int MostRounds = 4, MostSteps = 40, MostThinSteps = 12;

    // What a gate adds depends on the numbers more than the error of a mesh does; the derivatives leave that out.
    private const int MostRoundsWithMemory = 15;

    // Rounds end when the new correction moves no number by more than this share of its standard error.
    private const double Settled = 0.05;

    // The axis turns by no more than this in one step, rad: beyond, the tensor is far from linear in it.
    private const double LargestTurn = 0.35;

    // Share of the allowed numerical error that the interpolation between currents may take.
    private const double MostBetween = 0.25;

    // What RobustFactor makes of normal noise of the stated size.
    private const double NormalFactor = 0.910;

    // A start that describes the thinned data this well (in standard deviations of chi squared) needs no rivals.
    private const double GoodStart = 5;

    /// <summary>Runs a fit.</summary>
    /// <param name="device">With a [fit] that leaves at least one number free.</param>
    /// <param name="measured">The data.</param>
    /// <param name="options">How.</param>
    /// <param name="progress">Told about stages; may be null.</param>
    /// <param name="cancel">Stops the run; nothing is returned then.</param>
    /// <exception cref="FitException">There is nothing to fit, or the model has no solution where the fit starts.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public static FitResult Execute(SheetDevice device, MeasuredVoltages measured, FitOptions options, IProgress<RunProgress>? progress, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(measured);
        ArgumentNullException.ThrowIfNull(options);
        if (device.Fit is not { Parameters.Count: > 0 } spec)
        {
            throw new FitException("The file leaves nothing free; add a table [fit], for example: [fit] a = true, b = true, axis = { min = \"0 deg\", max = \"90 deg\" }");
        }

        var clock = new StageClock();
        void Tell(string stage) => progress?.Report(new(stage, 0, 0));
        bool gated = device.GateCapacitance > 0 && measured.Data.Any(d => d.Harmonic is not null && d.Current > 0);
        if (gated && options.Memory is null)
        {
            throw new FitException("The data hold harmonics of a sheet over a gate, and nothing was given that knows what its charge does to them.");
        }

        var problem = new FitProblem(device, spec.Parameters, measured, measured.Data, memory: gated ? options.Memory : null);
        if (problem.States.Count == 0)
        {
            throw new FitException("All currents of the data are zero; there is nothing to fit.");
        }

        FitTask task = TaskOf(problem, options.Robust);
        double[] p = problem.Start;
        FitReference reference = Reached(() =>
        {
            problem.RefuseJumps(p);
            return FitReference.Refine(problem, p, spec.NumericalShare, Tell, clock, cancel);
        });
        (IReadOnlyList<FitStart> starts, p) = clock.Time("starts", () => Starts(problem, reference, p, options, Tell, cancel));
        (int States, int Adjoints) solves = (0, 0);
        while (true)
        {
            (FitEnd end, FitModel model, reference, (int States, int Adjoints) more) = Rounds(problem, task, reference, p, spec.NumericalShare, Tell, clock, cancel);
            solves = (solves.States + more.States, solves.Adjoints + more.Adjoints);

            // More points in the current where the interpolation would take a good part of the numerical error that is allowed.
            double[] between = problem.InterpolationErrors(model.ReadingsAt(end.P, cancel));
            if (problem.Nodes < FitProblem.MostNodes && between.Where((e, i) => e > spec.NumericalShare * MostBetween * problem.Data[i].Sigma).Any())
            {
                (problem, p) = (problem.With(2 * problem.Nodes), end.P);
                reference = reference.For(problem);
                continue;
            }

            Tell("statistics");
            double[] bars = [.. reference.Bars.Zip(between, (a, b) => a + b)];
            FitResult result = clock.Time("statistics", () => Result(device, problem, task, options, end, model, reference, bars, starts, solves, cancel));
            return result with { Stages = clock.Times };
        }
    }

    internal static FitTask TaskOf(FitProblem problem, bool robust)
    {
        IReadOnlyList<FitParameter> q = problem.Parameters;
        return new(
            [.. problem.Data.Select(d => d.Value)], [.. problem.Data.Select(d => d.Sigma)], [.. q.Select(x => x.Least)], [.. q.Select(x => x.Most)],
            [.. q.Select(x => x.PriorMean)], [.. q.Select(x => x.PriorSigma ?? double.PositiveInfinity)], new bool[q.Count],
            [.. q.Select(x => x.Kind.Effect == CauseEffect.Axis ? LargestTurn : double.PositiveInfinity)], [.. q.Select(x => x.IsPositive)], robust);
    }

    private static T Reached<T>(Func<T> work)
    {
        try
        {
            return work();
        }
        catch (Exception e) when (e is LayoutException or LawException)
        {
            throw new FitException($"The device cannot be built where the fit starts: {e.Message}", e);
        }
    }

    private static (IReadOnlyList<FitStart> Starts, double[] Best) Starts(
        FitProblem problem, FitReference reference, double[] start, FitOptions options, Action<string> tell, CancellationToken cancel)
    {
        int axis = problem.Parameters.ToList().FindIndex(q => q.Kind.Effect == CauseEffect.Axis);
        if (axis < 0 || options.Starts <= 1)
        {
            return ([new(axis < 0 ? null : start[axis], null)], start);
        }

        FitProblem thin = problem.With(Thin(problem.Data));

        // Nuisance numbers stay at their start: far from the truth they would only follow what the others still miss.
        FitTask task = TaskOf(thin, options.Robust);
        task = task with { Held = [.. problem.Parameters.Select((q, j) => q.PriorSigma is not null && j != axis)] };
        double least = task.Least[axis], most = task.Most[axis];
        bool bounded = most - least < Math.PI;
        double[] angles = [.. Enumerable.Range(0, options.Starts).Select(k => k == 0 ? start[axis]
            : bounded ? least + ((most - least) * (k - 0.5) / (options.Starts - 1)) : start[axis] + (Math.PI * k / options.Starts))];
        var found = new List<(FitStart Start, double[] P)>();
        for (int k = 0; k < angles.Length; k++)
        {
            tell(string.Create(CultureInfo.InvariantCulture, $"start {k + 1} of {angles.Length}"));
            double[] from = [.. start];
            from[axis] = angles[k];
            var model = new FitModel(thin, reference.Meshes.Coarse, reference.Of(thin));
            FitEnd? end = LeastSquares.Run(model, task, from, MostThinSteps, cancel);
            found.Add((new(angles[k], end?.Objective), end?.P ?? from));
            if (end?.Objective < thin.Data.Count + (GoodStart * Math.Sqrt(2.0 * thin.Data.Count)))
            {
                break;
            }
        }

        (FitStart Start, double[] P) best = found.Where(f => f.Start.Objective is not null).OrderBy(f => f.Start.Objective!.Value * (1 + 1e-6)).FirstOrDefault();
        return ([.. found.Select(f => f.Start)], best.P ?? throw new FitException("The model has no solution at any start; begin nearer to the truth (start = …) or drive less."));
    }

    // Of every pair and harmonic the largest current of either sign.
    private static List<MeasuredVoltage> Thin(IReadOnlyList<MeasuredVoltage> data)
    {
        var kept = new HashSet<MeasuredVoltage>(ReferenceEqualityComparer.Instance);
        foreach (IGrouping<(int, int, int?, bool), MeasuredVoltage> g in data.GroupBy(d => (d.Circuit, d.Pair, d.Harmonic, d.Current > 0)))
        {
            kept.Add(g.MaxBy(d => Math.Abs(d.Current))!);
        }

        return [.. data.Where(kept.Contains)];
    }

    private static (FitEnd End, FitModel Model, FitReference Reference, (int, int) Solves) Rounds(
        FitProblem problem, FitTask task, FitReference reference, double[] p, double share, Action<string> tell, StageClock clock, CancellationToken cancel)
    {
        (int states, int adjoints) = (0, 0);
        FitModel? before = null;
        for (int round = 0; ; round++)
        {
            tell(string.Create(CultureInfo.InvariantCulture, $"fit, round {round + 1}"));
            var model = new FitModel(problem, reference.Meshes.Coarse, reference.Missing, before);
            before = model;
            FitEnd end = clock.Time("fit", () => LeastSquares.Run(model, task, p, MostSteps, cancel))
                ?? throw new FitException("The model has no solution where the fit starts; begin nearer to the truth (start = …) or drive less.");
            (states, adjoints) = (states + model.Solves, adjoints + model.Adjoints);
            tell("numerical error");
            FitReference next = clock.Time("numerical error", () => Next(problem, model, reference, end.P, share, tell, clock, cancel));

            // What the new correction would move, to first order.
            double moved = Shift(problem, task, end, next.Missing.Zip(reference.Missing, (a, b) => a - b).ToArray());
            if ((moved > Settled || !end.Converged) && round < (problem.Memory is null ? MostRounds : MostRoundsWithMemory) - 1)
            {
                (reference, p) = (next, end.P);
                continue;
            }

            return (end with { Converged = end.Converged && moved <= Settled }, model, next, (states, adjoints));
        }
    }

    private static FitReference Next(FitProblem problem, FitModel model, FitReference reference, double[] p, double share, Action<string> tell, StageClock clock, CancellationToken cancel)
    {
        TriangleMesh? mesh = model.MeshAt(problem.DeviceAt(p));
        FitReference? again = mesh is null ? null : reference.Again(p, mesh, share, cancel);
        return again is { } good && good.LargestShare <= share ? good : FitReference.Refine(problem, p, share, tell, clock, cancel);
    }

    // Largest change of a number over its standard error when the model changes by so much.
    private static double Shift(FitProblem problem, FitTask task, FitEnd end, double[] change)
    {
        double[] scales = [.. Enumerable.Range(0, end.P.Length).Select(_ => 1.0)];
        int n = change.Length, m = end.P.Length;
        double[] norm = [.. Enumerable.Range(0, m).Select(j => Math.Sqrt(Enumerable.Range(0, n).Sum(i => Math.Pow(end.Jacobian[i, j] / task.Sigma[i], 2)) + Math.Pow(task.PriorSigma[j], -2)))];
        int[] seen = [.. Enumerable.Range(0, m).Where(j => norm[j] > 0)];
        if (seen.Length == 0)
        {
            return 0;
        }

        // In units of one over the norm; directions that nothing is known of take no part.
        var a = MathNet.Numerics.LinearAlgebra.Double.DenseMatrix.Create(n + seen.Length, seen.Length, (i, k) => i < n
            ? Math.Sqrt(end.Weights[i]) * end.Jacobian[i, seen[k]] / task.Sigma[i] / norm[seen[k]]
            : i - n == k ? Math.Sqrt(Math.Pow(task.PriorSigma[seen[k]] * norm[seen[k]], -2) + 1e-12) : 0);
        var b = MathNet.Numerics.LinearAlgebra.Double.DenseVector.Create(n + seen.Length, i => i < n ? Math.Sqrt(end.Weights[i]) * change[i] / task.Sigma[i] : 0);
        var svd = a.QR(MathNet.Numerics.LinearAlgebra.Factorization.QRMethod.Thin);
        var x = svd.Solve(b);
        var inverse = svd.R.Inverse();
        return Enumerable.Range(0, seen.Length).Max(k => Math.Abs(x[k]) / inverse.Row(k).L2Norm());
    }

    private static FitResult Result(
        SheetDevice device, FitProblem problem, FitTask task, FitOptions options, FitEnd end, FitModel model, FitReference reference, double[] bars,
        IReadOnlyList<FitStart> starts, (int, int) solves, CancellationToken cancel)
    {
        IReadOnlyList<FitParameter> q = problem.Parameters;
        (end, double? openAxis) = IsotropicEnd.Of(problem, model, task, end, cancel);
        SheetDevice fittedDevice = problem.DeviceAt(end.P);
        double largestVoltage = problem.Data.Max(d => Math.Abs(d.Value));
        double[] scales = FitScales.Of(fittedDevice, q, end.P, largestVoltage);
        IReadOnlyList<FitDirection> directions = Identifiability.Of(q, end.Jacobian, task.Sigma, end.Weights, scales, end.P);
        directions = openAxis is { } open ? IsotropicEnd.Explain(directions, q, open) : directions;
        double[,] covariance = Identifiability.Covariance(directions, scales);
        double widen = options.Robust ? RobustFactor(task, end, q.Count(x => x.PriorSigma is null)) : 1;
        int m = q.Count;
        for (int i = 0; i < m; i++)
        {
            for (int j = 0; j < m; j++)
            {
                covariance[i, j] *= widen;
            }
        }

        bool[] determined = [.. Enumerable.Range(0, m).Select(j => Math.Sqrt(covariance[j, j]) <= Identifiability.MostDeviation * scales[j])];
        double[] numerical = NumericalErrors(problem, task, end, covariance, widen, bars);
        var parameters = new FittedParameter[m];
        for (int j = 0; j < m; j++)
        {
            bool atBound = end.P[j] <= task.Least[j] || end.P[j] >= task.Most[j];
            bool asked = q[j].Interval || (options.AllIntervals && q[j].PriorSigma is null);
            ((double? Low, double? High) Interval, IReadOnlyList<LikelihoodPoint> Points)? profile =
                determined[j] && asked ? ProfileInterval.Of(model, task, end, covariance, widen, j, cancel) : null;
            parameters[j] = new(q[j], determined[j] ? end.P[j] : null, determined[j] ? Math.Sqrt(covariance[j, j]) : null, profile?.Interval, atBound)
            {
                Ended = end.P[j],
                Profile = profile?.Points ?? [],
                NumericalError = determined[j] ? numerical[j] : 0,
            };
        }

        double[,] correlation = new double[m, m];
        for (int i = 0; i < m; i++)
        {
            for (int j = 0; j < m; j++)
            {
                correlation[i, j] = determined[i] && determined[j] ? covariance[i, j] / Math.Sqrt(covariance[i, i] * covariance[j, j]) : 0;
            }
        }

        FittedVoltage[] data = [.. problem.Data.Select((d, i) => new FittedVoltage(
            d, problem.Measured.Circuits[d.Circuit], problem.Measured.Circuits[d.Circuit].Pairs[d.Pair], end.Values[i], bars[i], end.Weights[i]))];
        double share = data.Max(d => d.NumericalError / d.Datum.Sigma);
        int free = Enumerable.Range(0, m).Count(j => q[j].PriorSigma is null) - directions.Count(d => !d.Determined);
        FitQuality quality = FitChecks.Of(data, Math.Max(0, free));
        return new FitResult
        {
            Device = device,
            Fitted = fittedDevice,
            Measured = problem.Measured,
            Parameters = parameters,
            Correlation = correlation,
            Covariance = covariance,
            Data = data,
            Quality = quality,
            Directions = directions,
            Next = NextWiring.Of(model, problem, end.P, end.Jacobian, task.Sigma, end.Weights, scales, options.Suggest, cancel),
            Formulas = FormulaEstimate.Of(fittedDevice, problem.Measured, parameters),
            Starts = starts,
            NumericalShare = share,
            WantedShare = device.Fit!.NumericalShare,
            Robust = options.Robust,
            Converged = end.Converged,
            Steps = end.Steps,
            Solves = solves,
            Unknowns = (reference.Meshes.Coarse.Space.Size, reference.Meshes.Fine.Space.Size),
            Warnings = [.. FitWarnings.Of(device, parameters, directions, quality, share, end, options), .. FitWarnings.Guarded(problem, model, end.P, device.Fit.NumericalShare, cancel)],
            Stages = [],
        };
    }

    // To first order dp = C J' W dV / sigma², with C the inverse of the curvature. The lack of a mesh is a smooth function of the current of each reading, so there it cannot
    // average out; between readings the worst is taken.
    private static double[] NumericalErrors(FitProblem problem, FitTask task, FitEnd end, double[,] covariance, double widen, double[] bars)
    {
        int m = end.P.Length;
        double[] errors = new double[m];
        foreach (IGrouping<(int, int, int?), int> reading in Enumerable.Range(0, bars.Length)
            .GroupBy(i => (problem.Data[i].Circuit, problem.Data[i].Pair, problem.Data[i].Harmonic)))
        {
            for (int j = 0; j < m; j++)
            {
                errors[j] += Math.Abs(reading.Sum(i =>
                    Enumerable.Range(0, m).Sum(k => covariance[j, k] / widen * end.Jacobian[i, k]) * end.Weights[i] * Math.Sign(problem.Data[i].Current) * bars[i]
                    / (task.Sigma[i] * task.Sigma[i])));
            }
        }

        return errors;
    }

    // Of the estimate, not of the data: mean of psi² over the squared mean of psi' (P. J. Huber, Robust Statistics (1981), section 7.6). The directions were measured with
    // the weights, whose mean is put back. Residuals are smaller than the noise by what the free numbers took of them, and a few may be small by chance: the stated sigmas are the least.
    private static double RobustFactor(FitTask task, FitEnd end, int free)
    {
        double psi = 0, slope = 0, weight = 0;
        int n = end.Values.Length;
        for (int i = 0; i < n; i++)
        {
            double z = (task.Value[i] - end.Values[i]) / task.Sigma[i], w = LeastSquares.Weight(z, true);
            psi += w * z * w * z;
            slope += w * (1 - (2 * z * z / (LeastSquares.Freedom + (z * z))));
            weight += w;
        }

        (psi, slope, weight) = (psi / Math.Max(1, n - free), slope / n, weight / n);
        return slope > 0 ? Math.Max(psi / (slope * slope) * weight, NormalFactor) : 1;
    }
}
