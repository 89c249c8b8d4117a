using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Readings;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Runs;

/// <summary>Estimated error of one reading, or of its even part, on one pair of meshes at the largest current.</summary>
/// <param name="Plan">Wiring and pairs.</param>
/// <param name="Pair">Index of the pair.</param>
/// <param name="IsEven">The even part, else the reading itself.</param>
/// <param name="Current">Current the sheet was measured at, A.</param>
/// <param name="Value">V.</param>
/// <param name="Difference">Fine minus coarse, V.</param>
/// <param name="Error">Its origin and size.</param>
/// <param name="WeakDifference">Difference per ampere in the limit of small drive, ohm; 0 for an even part.</param>
/// <param name="WeakError">Origin and size of the error per ampere in the limit of small drive, ohm; null for an even part.</param>
/// <param name="Exponent">Per vertex of the domain: p of an error like h^p around it.</param>
internal sealed record GoalMeasure(
    ReadingPlan Plan, int Pair, bool IsEven, double Current, double Value, double Difference, GoalError Error, double WeakDifference, GoalError? WeakError,
    double[] Exponent)
{
    /// <summary>Error that was asked for, V; set once all readings are known.</summary>
    public double Wanted { get; init; }

    /// <summary>Reading per ampere in the limit of small drive, ohm; 0 for an even part.</summary>
    public double WeakValue { get; init; }

    /// <summary>Value with the correction, V.</summary>
    public double Corrected => Value + Error.Correction;

    /// <summary>The same with a bar that minds how far the reading moved since the mesh before; where it was not measured there at the same current, it is untried.</summary>
    public GoalMeasure AfterMove(IReadOnlyList<GoalMeasure> before)
    {
        GoalMeasure? last = before.FirstOrDefault(g => g.Plan == Plan && g.Pair == Pair && g.IsEven == IsEven && g.Current == Current);
        return before.Count == 0 ? this : last is null ? Untried() : this with
        {
            Error = Error.AfterMove(last.Error, Corrected - last.Corrected),
            WeakError = (WeakError, last.WeakError) is ({ } own, { } weak) ? own.AfterMove(weak, WeakValue + own.Correction - last.WeakValue - weak.Correction) : WeakError,
        };
    }

    /// <summary>The same with bars for a mesh that nothing can be compared with yet.</summary>
    public GoalMeasure Untried() => this with { Error = Error.Untried(), WeakError = WeakError?.Untried() };

    /// <summary>The same with bars that trust the corrections as far as those of the same reading did on these triangles before they were moved a little.</summary>
    /// <param name="before">The goals there.</param>
    public GoalMeasure TriedAs(IReadOnlyList<GoalMeasure> before) => TriedAs(before.FirstOrDefault(g => g.Plan == Plan && g.Pair == Pair && g.IsEven == IsEven));

    /// <summary>The same for one goal.</summary>
    /// <param name="before">The same reading there, perhaps of a plan made anew; null where there was none.</param>
    public GoalMeasure TriedAs(GoalMeasure? before) => before is null ? Untried() : this with
    {
        Error = Error.TriedAs(before.Error),
        WeakError = before.WeakError is { } weak ? WeakError?.TriedAs(weak) : WeakError?.Untried(),
    };
}

/// <summary>Estimates the errors of all readings of one wiring at the largest current, by coarse and fine solutions at +I and -I.</summary>
internal static class LevelMeasure
{
    private const int MostHalvings = 20;

    // Where the split changes the largest reading by more than this, no rate of convergence is reached. On meshes that resolve the sheet it is far below a hundredth.
    private const double UnresolvedChange = 0.02;

    /// <summary>Measures one wiring.</summary>
    /// <param name="meshes">Coarse and fine mesh.</param>
    /// <param name="plan">Wiring and pairs.</param>
    /// <param name="current">Largest current, A; lowered where the sheet cannot carry it.</param>
    /// <param name="lower">The drive's currents by size, the largest first: where to look when the sheet cannot carry <paramref name="current"/>.</param>
    /// <param name="bothSigns">Measure the even parts too.</param>
    /// <param name="cancel">Checked at every step.</param>
    /// <param name="solved">Told of each state solved, from the threads that did so.</param>
    public static IReadOnlyList<GoalMeasure> Of(
        MeshPair meshes, ReadingPlan plan, double current, IReadOnlyList<double> lower, bool bothSigns, CancellationToken cancel, Action? solved = null)
    {
        State weak = State.Weak(meshes, plan, cancel);
        solved?.Invoke();
        GoalError[] weakErrors = [.. weak.Details.Select((d, k) => GoalError.Of(
            meshes.Between, meshes.Shares, weak.Fine[k] - weak.Coarse[k], [(1, weak.Residual, d)]))];
        double change = weak.Fine.Zip(weak.Coarse, (f, c) => Math.Abs(f - c)).DefaultIfEmpty(0).Max() / weak.Fine.Select(Math.Abs).DefaultIfEmpty(0).Max();
        GoalError Judged(GoalError error, double value, double difference) =>
            change > UnresolvedChange ? error.Unresolved(Math.Max(Math.Abs(difference), change * Math.Abs(value))) : error;
        weakErrors = [.. weakErrors.Select((e, k) => Judged(e, weak.Fine[k], weak.Fine[k] - weak.Coarse[k]))];
        if (meshes.Fine.Equations.Law.IsLinear)
        {
            return [.. weakErrors.Select((e, k) => new GoalMeasure(
                plan, k, false, current, current * weak.Fine[k], current * (weak.Fine[k] - weak.Coarse[k]), e.Times(current),
                weak.Fine[k] - weak.Coarse[k], e, meshes.Exponent)
            { WeakValue = weak.Fine[k] })];
        }

        (State? plus, State? minus) = (null, null);
        double reached = current;
        for (int halvings = 0; plus is null || (bothSigns && minus is null); halvings++)
        {
            if (halvings > 0)
            {
                double next = lower.FirstOrDefault(c => c < 0.99 * Math.Abs(reached));
                reached = next > 0 ? Math.CopySign(next, reached) : reached / 2;
            }

            if (halvings == MostHalvings)
            {
                return [];
            }

            cancel.ThrowIfCancellationRequested();
            Side(meshes, plan, reached, bothSigns, solved, cancel, out plus, out minus);
        }

        ErrorShares evenShares = meshes.EvenShares(plus.EvenExponent);
        var list = new List<GoalMeasure>();
        for (int k = 0; k < plan.Count; k++)
        {
            list.Add(new(
                plan, k, false, reached, plus.Fine[k], plus.Fine[k] - plus.Coarse[k],
                Judged(GoalError.Of(meshes.Between, meshes.Shares, plus.Fine[k] - plus.Coarse[k], [(1, plus.Residual, plus.Details[k])]), plus.Fine[k], plus.Fine[k] - plus.Coarse[k])
                    .Beside(weakErrors[k], reached),
                weak.Fine[k] - weak.Coarse[k], weakErrors[k], meshes.Exponent)
            { WeakValue = weak.Fine[k] });
            if (minus is not null && plan.HasEven[k])
            {
                double fine = (plus.Fine[k] + minus.Fine[k]) / 2, coarse = (plus.Coarse[k] + minus.Coarse[k]) / 2;
                list.Add(new(
                    plan, k, true, reached, fine, fine - coarse,
                    Judged(
                        GoalError.Of(
                            meshes.Between, evenShares, fine - coarse,
                            [(0.5, plus.Residual, plus.Details[k]), (0.5, minus.Residual, minus.Details[k])]),
                        fine, fine - coarse),
                    0, null, plus.EvenExponent));
            }
        }

        return list;
    }

    // Both signs side by side, where memory allows.
    private static void Side(MeshPair meshes, ReadingPlan plan, double current, bool bothSigns, Action? solved, CancellationToken cancel, out State? plus, out State? minus)
    {
        State?[] found = new State?[bothSigns ? 2 : 1];
        Parallel.For(0, found.Length, new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = SharedCores.Jobs(meshes.Fine.Space.Size) }, k =>
        {
            found[k] = State.Solve(meshes, plan, k == 0 ? current : -current, cancel);
            solved?.Invoke();
        });
        (plus, minus) = (found[0], bothSigns && found[0] is not null ? found[1] : null);
    }

    // A coarse and a fine solution with the fine residual of the coarse one and the details of the adjoints.
    private sealed record State(double[] Coarse, double[] Fine, double[] Residual, double[][] Details, double[] EvenExponent)
    {
        // In the limit of small drive, for one ampere.
        public static State Weak(MeshPair meshes, ReadingPlan plan, CancellationToken cancel)
        {
            (int source, int drain) = (plan.Wiring.Source, plan.Wiring.Drain);
            cancel.ThrowIfCancellationRequested();
            double[] coarse = meshes.Coarse.UnitSolution(source, drain), fine = meshes.Fine.UnitSolution(source, drain);
            double[] carried = new double[fine.Length], residual = new double[fine.Length];
            meshes.Between.Apply(coarse, carried);
            meshes.Fine.ZeroFieldProduct(carried, residual);
            residual[meshes.Fine.Space.ContactUnknown[source]] -= 1;
            residual[meshes.Fine.Space.ContactUnknown[drain]] += 1;
            residual[^1] = 0;
            double[][] details = [.. plan.Vectors(meshes.Fine).Select(j =>
            {
                cancel.ThrowIfCancellationRequested();
                double[] detail = new double[meshes.Between.Parent.Length];
                meshes.Between.Detail(meshes.Fine.Adjoint(j), detail);
                return detail;
            })];
            return new(plan.Read(meshes.Coarse, coarse), plan.Read(meshes.Fine, fine), residual, details, meshes.Exponent);
        }

        public static State? Solve(MeshPair meshes, ReadingPlan plan, double current, CancellationToken cancel)
        {
            (int source, int drain) = (plan.Wiring.Source, plan.Wiring.Drain);
            double[] coarse = new double[meshes.Coarse.Equations.Length];
            var coarsePath = new DrivePath(meshes.Coarse, source, drain);
            bool reached = coarsePath.Solve(current, coarse, null, cancel).Converged;
            coarsePath.Newton.Release();
            if (!reached)
            {
                return null;
            }

            double[] fine = new double[meshes.Fine.Equations.Length], residual = new double[fine.Length];
            meshes.Between.Apply(coarse, fine);
            var path = new DrivePath(meshes.Fine, source, drain);
            try
            {
                meshes.Fine.Equations.Residual(fine, source, drain, current, residual);
            }
            catch (LawRefusedException)
            {
                return null;
            }

            double[][]? details = path.Solve(current, fine, fine, cancel).Converged ? AdjointDetails(meshes, plan, path.Newton, fine, cancel) : null;
            path.Newton.Release();
            if (details is null)
            {
                return null;
            }

            meshes.Keep(plan, current, coarse, fine);
            return new(plan.Read(meshes.Coarse, coarse), plan.Read(meshes.Fine, fine), residual, details, EvenRates.Exponents(meshes, coarse));
        }

        // The adjoints at the state itself: its Jacobian, transposed. Null when it is not positive definite.
        private static double[][]? AdjointDetails(MeshPair meshes, ReadingPlan plan, NewtonSolver newton, double[] fine, CancellationToken cancel)
        {
            if (newton.FactorAt(fine, cancel) is not { } factor)
            {
                return null;
            }

            int n = meshes.Fine.Space.Size;
            double[] z = new double[n + 1];
            double[][] vectors = plan.Vectors(meshes.Fine), details = new double[plan.Count][];
            for (int k = 0; k < plan.Count; k++)
            {
                cancel.ThrowIfCancellationRequested();
                factor.SolveTransposed(vectors[k].AsSpan(0, n), z.AsSpan(0, n));
                details[k] = new double[meshes.Between.Parent.Length];
                meshes.Between.Detail(z, details[k]);
            }

            return details;
        }
    }
}
