using FieldSolve.Fields;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Lockin;

/// <summary>What a state is wanted for.</summary>
internal enum PhaseUse
{
    /// <summary>The coarse reading alone: the error of the phases does not depend on the mesh.</summary>
    Coarse,

    /// <summary>Also the fine solution, for a map.</summary>
    Map,

    /// <summary>Also the fine reading, its error and its lag.</summary>
    Measure,
}

/// <summary>Follows one wiring with one sign of the current on both meshes, as the currents of the phases grow. One object per thread.</summary>
internal sealed class PhasePath
{
    private readonly MeshPair meshes;
    private readonly ReadingPlan plan;
    private readonly PeakFinder peaks;
    private readonly double[]? charge;
    private readonly DrivePath coarsePath;
    private readonly DrivePath finePath;
    private readonly double[] carried;
    private readonly double[] surplus;   // (fine - carried coarse) / current at the last current
    private readonly double[] jacobian;
    private readonly double[][] vectors;
    private SparseLu? factor;

    /// <summary>Starts at rest.</summary>
    /// <param name="meshes">Both meshes.</param>
    /// <param name="plan">Wiring and pairs.</param>
    /// <param name="peaks">Of the fine mesh.</param>
    /// <param name="charge">Values of the gate's charge matrix on the fine mesh; null without a gate.</param>
    public PhasePath(MeshPair meshes, ReadingPlan plan, PeakFinder peaks, double[]? charge)
    {
        this.meshes = meshes;
        this.plan = plan;
        this.peaks = peaks;
        this.charge = charge;
        coarsePath = new DrivePath(meshes.Coarse, plan.Wiring.Source, plan.Wiring.Drain);
        finePath = new DrivePath(meshes.Fine, plan.Wiring.Source, plan.Wiring.Drain);
        carried = new double[meshes.Fine.Equations.Length];
        surplus = new double[carried.Length];
        jacobian = new double[meshes.Fine.Space.Pattern.Count + 1];
        vectors = plan.Vectors(meshes.Fine);
        meshes.Between.Apply(coarsePath.Unit, carried);
        for (int i = 0; i < surplus.Length; i++)
        {
            surplus[i] = finePath.Unit[i] - carried[i];
        }
    }

    /// <summary>Why the law refused, when it did.</summary>
    public string? Refusal { get; private set; }

    /// <summary>The state at a current; null when there is none.</summary>
    public PhaseState? Solve(double current, PhaseUse use, CancellationToken cancel)
    {
        double[] coarse = new double[meshes.Coarse.Equations.Length];
        NewtonOutcome outcome = coarsePath.Solve(current, coarse, null, cancel);
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
        double[] fine = new double[carried.Length], residual = [];
        for (int i = 0; i < fine.Length; i++)
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

        if (current != 0)
        {
            for (int i = 0; i < fine.Length; i++)
            {
                surplus[i] = (fine[i] - carried[i]) / current;
            }
        }

        state = state with { Outcome = outcome, Fine = fine, FineValues = plan.Read(meshes.Fine, fine), Peak = peaks.Find(fine), Residual = residual };
        return use == PhaseUse.Map ? state : Measured(state, cancel);
    }

    // Adjoints at the state itself, and what follows from them. Null when the Jacobian is not positive definite.
    private PhaseState? Measured(PhaseState state, CancellationToken cancel)
    {
        FieldLevel level = meshes.Fine;
        int n = level.Space.Size;
        if (state.Current == 0 && charge is null)
        {
            // At rest there is no residual to weigh.
            return state with { Details = [.. vectors.Select(_ => new double[meshes.Between.Parent.Length])], GuardShare = new double[plan.Count] };
        }

        SparseLu lu = level.AtZero;
        if (!level.Equations.Law.IsLinear && state.Current != 0)
        {
            factor ??= new SparseLu(level.Analysis);
            level.Equations.Jacobian(state.Fine, jacobian);
            try
            {
                factor.Factor(jacobian.AsSpan(0, jacobian.Length - 1), cancel);
            }
            catch (PivotException)
            {
                return null;
            }

            lu = factor;
        }

        double[] charged = charge is null ? [] : Charged(lu);
        double[][] adjoints = new double[plan.Count][], details = new double[plan.Count][];
        double[] lag = new double[charge is null ? 0 : plan.Count];
        for (int k = 0; k < plan.Count; k++)
        {
            double[] z = new double[n + 1];
            lu.SolveTransposed(vectors[k].AsSpan(0, n), z.AsSpan(0, n));
            adjoints[k] = z;
            details[k] = new double[meshes.Between.Parent.Length];
            meshes.Between.Detail(z, details[k]);
            for (int i = 0; i < n && charge is not null; i++)
            {
                lag[k] -= z[i] * charged[i];
            }
        }

        GuardZone zone = GuardZone.Measure(level.Equations, state.Fine, adjoints);
        return state with { Details = details, GuardShare = zone.Share, Exit = zone.Exit, Lag = lag };
    }

    // C du/dI: the charge that moves per ampere.
    private double[] Charged(SparseLu lu)
    {
        FieldLevel level = meshes.Fine;
        int n = level.Space.Size;
        double[] fed = new double[n + 1], response = new double[n], product = new double[n];
        fed[level.Space.ContactUnknown[plan.Wiring.Source]] += 1;
        fed[level.Space.ContactUnknown[plan.Wiring.Drain]] -= 1;
        lu.Solve(fed.AsSpan(0, n), response);
        SparseProduct.Multiply(level.Space.Pattern, charge.AsSpan(0, level.Space.Pattern.Count), response, product);
        return product;
    }
}
