using FieldSolve.Fields;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;

namespace FieldSolve.Lockin;

/// <summary>What a state is wanted for.</summary>
internal enum PhaseUse
{
    /// <summary>The coarse reading alone: the error of the phases does not depend on the mesh.</summary>
    Coarse,

    /// <summary>Also the fine solution, for a map.</summary>
    Map,

    /// <summary>Also the fine residual of the coarse solution and the law's guard, for the errors.</summary>
    Measure,
}

/// <summary>Follows one wiring with one sign of the current on both meshes, as the currents of the phases grow. One object per thread.</summary>
internal sealed class PhasePath
{
    private readonly MeshPair meshes;
    private readonly ReadingPlan plan;
    private readonly PeakFinder peaks;
    private readonly DrivePath coarsePath;
    private readonly DrivePath finePath;
    private readonly double[] carried;
    private readonly double[] surplus;   // (fine - carried coarse) / current at the last current
    private readonly double[][] adjoints;   // at zero field, for the guard

    /// <summary>Starts at rest.</summary>
    /// <param name="meshes">Both meshes.</param>
    /// <param name="plan">Wiring and pairs.</param>
    /// <param name="peaks">Of the fine mesh.</param>
    public PhasePath(MeshPair meshes, ReadingPlan plan, PeakFinder peaks)
    {
        this.meshes = meshes;
        this.plan = plan;
        this.peaks = peaks;
        coarsePath = new DrivePath(meshes.Coarse, plan.Wiring.Source, plan.Wiring.Drain);
        finePath = new DrivePath(meshes.Fine, plan.Wiring.Source, plan.Wiring.Drain);
        carried = new double[meshes.Fine.Equations.Length];
        surplus = new double[carried.Length];
        adjoints = meshes.Fine.Equations.Law.Guard is null
            ? [.. plan.Pairs.Select(_ => Array.Empty<double>())]
            : [.. plan.Vectors(meshes.Fine).Select(j => meshes.Fine.Adjoint(j))];
        meshes.Between.Apply(coarsePath.Unit, carried);
        for (int i = 0; i < surplus.Length; i++)
        {
            surplus[i] = finePath.Unit[i] - carried[i];
        }
    }

    /// <summary>Why the law refused, when it did.</summary>
    public string? Refusal { get; private set; }

    /// <summary>The state at a current; null when there is none.</summary>
    /// <param name="current">A.</param>
    /// <param name="use">What it is wanted for.</param>
    /// <param name="near">A cycle that holds the current, to guess from; may be null.</param>
    /// <param name="cancel">Checked at every step.</param>
    public PhaseState? Solve(double current, PhaseUse use, CycleStates? near, CancellationToken cancel)
    {
        double[] coarse = new double[meshes.Coarse.Equations.Length];
        NewtonOutcome outcome = coarsePath.Solve(current, coarse, near?.Guess(current, fine: false), cancel);
        if (!outcome.Converged)
        {
            Refusal = outcome.Refusal;
            return null;
        }

        var state = new PhaseState { Current = current, Coarse = coarse, CoarseValues = plan.Read(meshes.Coarse, coarse), Outcome = outcome };
        if (use == PhaseUse.Coarse)
        {
            return state;
        }

        meshes.Between.Apply(coarse, carried);
        double[] fine = near?.Guess(current, fine: true) ?? new double[carried.Length], residual = [];
        for (int i = 0; i < fine.Length && near is null; i++)
        {
            fine[i] = carried[i] + (current * surplus[i]);
        }

        if (use == PhaseUse.Measure)
        {
            residual = new double[fine.Length];
            try
            {
                meshes.Fine.Equations.Residual(carried, plan.Wiring.Source, plan.Wiring.Drain, current, residual);
            }
            catch (LawRefusedException e)
            {
                Refusal = e.Message;
                return null;
            }
        }

        outcome = outcome.Then(finePath.Solve(current, fine, fine, cancel));
        if (!outcome.Converged)
        {
            Refusal = outcome.Refusal;
            return null;
        }

        if (current != 0 && near is null)
        {
            for (int i = 0; i < fine.Length; i++)
            {
                surplus[i] = (fine[i] - carried[i]) / current;
            }
        }

        state = state with { Outcome = outcome, Fine = fine, FineValues = plan.Read(meshes.Fine, fine), Peak = peaks.Find(fine), Residual = residual };
        return use == PhaseUse.Map ? state : Guarded(state);
    }

    private PhaseState Guarded(PhaseState state)
    {
        GuardZone zone = GuardZone.Measure(meshes.Fine.Equations, state.Fine, adjoints);
        return state with { GuardShare = zone.Share, Exit = zone.Exit };
    }
}
