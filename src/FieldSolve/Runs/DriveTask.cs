using FieldSolve.Fields;
using FieldSolve.Readings;
using FieldSolve.Solving;

namespace FieldSolve.Runs;

/// <summary>What one wiring reads at one current of one sign.</summary>
/// <param name="Outcome">How the fine solve ended.</param>
/// <param name="Values">Readings on the fine mesh, V; null when not converged.</param>
/// <param name="Difference">Fine minus coarse, V.</param>
/// <param name="Zone">Where the law was left.</param>
/// <param name="Peak">Largest |K| and E.K away from singular points.</param>
internal sealed record StateResult(
    NewtonOutcome Outcome, double[]? Values, double[]? Difference, GuardZone? Zone, (double SheetCurrent, double Power) Peak);

/// <summary>The drive of one wiring with one sign of the current: a coarse and a fine path side by side.</summary>
internal sealed class DriveTask
{
    private readonly MeshPair meshes;
    private readonly ReadingPlan plan;
    private readonly PeakFinder peaks;
    private readonly double[][] adjoints;
    private readonly DrivePath coarsePath;
    private readonly DrivePath finePath;
    private readonly double[] coarse;
    private readonly double[] fine;
    private readonly double[] guess;
    private readonly double[] carried;
    private readonly double[] surplus;  // fine - carried coarse
    private readonly CurrentSeries surpluses;

    public DriveTask(MeshPair meshes, ReadingPlan plan, PeakFinder peaks)
    {
        this.meshes = meshes;
        this.plan = plan;
        this.peaks = peaks;
        adjoints = meshes.Fine.Equations.Law.Guard is null
            ? [.. plan.Pairs.Select(_ => Array.Empty<double>())]
            : [.. plan.Vectors(meshes.Fine).Select(j => meshes.Fine.Adjoint(j))];
        coarsePath = new DrivePath(meshes.Coarse, plan.Wiring.Source, plan.Wiring.Drain);
        finePath = new DrivePath(meshes.Fine, plan.Wiring.Source, plan.Wiring.Drain);
        coarse = new double[meshes.Coarse.Equations.Length];
        fine = new double[meshes.Fine.Equations.Length];
        guess = new double[fine.Length];
        carried = new double[fine.Length];
        surplus = new double[fine.Length];
        meshes.Between.Apply(coarsePath.Unit, carried);
        for (int i = 0; i < fine.Length; i++)
        {
            surplus[i] = finePath.Unit[i] - carried[i];
        }

        surpluses = new CurrentSeries([.. surplus]);
    }

    /// <summary>Starts from what the refinement solved at a current, if it did.</summary>
    public void Know(double current)
    {
        if (meshes.Known(plan, current) is not { } known)
        {
            return;
        }

        coarsePath.Know(current, known.Coarse);
        double[] difference = new double[fine.Length];
        meshes.Between.Apply(known.Coarse, difference);
        for (int i = 0; i < fine.Length; i++)
        {
            difference[i] = known.Fine[i] - difference[i];
        }

        surpluses.Anchor(current, difference);
    }

    /// <summary>Solves at a current.</summary>
    /// <param name="current">A.</param>
    /// <param name="keep">Receives the fine solution when it converged.</param>
    /// <param name="cancel">Checked at every step.</param>
    public StateResult Solve(double current, Action<double[]>? keep, CancellationToken cancel)
    {
        NewtonOutcome coarseOutcome = coarsePath.Solve(current, coarse, null, cancel);
        if (!coarseOutcome.Converged)
        {
            return new(coarseOutcome, null, null, null, default);
        }

        meshes.Between.Apply(coarse, carried);
        surpluses.Predict(current, guess);
        for (int i = 0; i < fine.Length; i++)
        {
            guess[i] += carried[i];
        }

        NewtonOutcome outcome = coarseOutcome.Then(finePath.Solve(current, fine, guess, cancel));
        if (!outcome.Converged)
        {
            return new(outcome, null, null, null, default);
        }

        for (int i = 0; i < fine.Length; i++)
        {
            surplus[i] = fine[i] - carried[i];
        }

        surpluses.Remember(current, surplus);

        keep?.Invoke(fine);
        double[] values = plan.Read(meshes.Fine, fine), difference = plan.Read(meshes.Coarse, coarse);
        for (int k = 0; k < values.Length; k++)
        {
            difference[k] = values[k] - difference[k];
        }

        return new(outcome, values, difference, GuardZone.Measure(meshes.Fine.Equations, fine, adjoints), peaks.Find(fine));
    }
}
