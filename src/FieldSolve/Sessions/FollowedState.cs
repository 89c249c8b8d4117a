using FieldSolve.Fields;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Sessions;

/// <summary>
/// One wiring at one sign of the current while a layout changes little by little: every solve starts from the last solution and from the factor of an earlier
/// Jacobian, of which Newton's iteration makes a new one only when it no longer contracts well. Not for several threads.
/// </summary>
internal sealed class FollowedState
{
    // A reading is then off by about this part of the largest, far below what a coarse mesh lacks; its bar has it.
    private const double RelativeResidual = 1e-6;

    private readonly ReadingPlan plan;
    private readonly double[] coarse;
    private readonly double[] fine;
    private double current;
    private SparseLu? coarseFactor;
    private SparseLu? fineFactor;

    /// <param name="plan">What is read.</param>
    /// <param name="meshes">Give the numbers of unknowns.</param>
    public FollowedState(ReadingPlan plan, MeshPair meshes)
    {
        this.plan = plan;
        coarse = new double[meshes.Coarse.Equations.Length];
        fine = new double[meshes.Fine.Equations.Length];
    }

    /// <summary>The solution on the fine mesh, V.</summary>
    public double[] Fine => fine;

    /// <summary>Solves on meshes with the same unknowns as before.</summary>
    /// <param name="meshes">The meshes as they lie now, under the law as it is now.</param>
    /// <param name="now">What is read now, between the same source and drain.</param>
    /// <param name="to">A; 0 for a sheet at rest.</param>
    /// <param name="cancel">Checked at every step.</param>
    public StateResult Solve(MeshPair meshes, ReadingPlan now, double to, CancellationToken cancel)
    {
        if (to == 0)
        {
            (coarseFactor, fineFactor) = (null, null);
            fine.AsSpan().Clear();
            return AtRest(now);
        }

        NewtonOutcome outcome = default;
        if (fineFactor is null || !Follow(meshes, to, cancel, out outcome))
        {
            (coarseFactor, fineFactor) = (null, null);
            outcome = Afresh(meshes, to, cancel);
        }

        if (!outcome.Converged)
        {
            return new(outcome, null, null, null, default);
        }

        current = to;
        double[] values = now.Read(meshes.Fine, fine), difference = now.Read(meshes.Coarse, coarse);
        for (int k = 0; k < values.Length; k++)
        {
            difference[k] = values[k] - difference[k];
        }

        return new(outcome, values, difference, Zone(meshes, now), default);
    }

    /// <summary>What is read without a current.</summary>
    public static StateResult AtRest(ReadingPlan plan) =>
        new(new(true, 0, 0, 0, 0, null), new double[plan.Count], new double[plan.Count], new GuardZone(null, new double[plan.Count]), default);

    private bool Follow(MeshPair meshes, double to, CancellationToken cancel, out NewtonOutcome outcome)
    {
        double scale = to / current;
        double[] change = new double[coarse.Length], carried = new double[fine.Length];
        for (int i = 0; i < coarse.Length; i++)
        {
            coarse[i] *= scale;
            change[i] = -coarse[i];
        }

        outcome = Step(meshes.Coarse, coarse, ref coarseFactor, to, cancel);
        if (!outcome.Converged)
        {
            return false;
        }

        // The fine solution changes about as the coarse one does.
        for (int i = 0; i < coarse.Length; i++)
        {
            change[i] += coarse[i];
        }

        meshes.Between.Apply(change, carried);
        for (int i = 0; i < fine.Length; i++)
        {
            fine[i] = (scale * fine[i]) + carried[i];
        }

        outcome = outcome.Then(Step(meshes.Fine, fine, ref fineFactor, to, cancel));
        return outcome.Converged;
    }

    private NewtonOutcome Step(FieldLevel level, double[] u, ref SparseLu? factor, double to, CancellationToken cancel)
    {
        var newton = new NewtonSolver(level, factor, RelativeResidual) { KeepsFactor = true };
        NewtonOutcome outcome = newton.Solve(u, plan.Wiring.Source, plan.Wiring.Drain, to, cancel);
        factor = newton.Factor;
        return outcome;
    }

    private NewtonOutcome Afresh(MeshPair meshes, double to, CancellationToken cancel)
    {
        var coarsePath = new DrivePath(meshes.Coarse, plan.Wiring.Source, plan.Wiring.Drain);
        NewtonOutcome outcome = coarsePath.Solve(to, coarse, null, cancel);
        if (!outcome.Converged)
        {
            return outcome;
        }

        meshes.Between.Apply(coarse, fine);
        var finePath = new DrivePath(meshes.Fine, plan.Wiring.Source, plan.Wiring.Drain);
        outcome = outcome.Then(finePath.Solve(to, fine, [.. fine], cancel));
        if (outcome.Converged)
        {
            // Of a linear sheet the factor at zero field is the Jacobian's.
            bool linear = meshes.Fine.Equations.Law.IsLinear;
            coarseFactor = (linear ? null : coarsePath.Newton.FactorAt(coarse, cancel)) ?? coarsePath.Newton.Factor;
            fineFactor = (linear ? null : finePath.Newton.FactorAt(fine, cancel)) ?? finePath.Newton.Factor;
        }

        return outcome;
    }

    // The adjoints are those of the factor at hand: what a guard does is told to a few per cent.
    private GuardZone Zone(MeshPair meshes, ReadingPlan now)
    {
        GuardZone zone = GuardZone.Measure(meshes.Fine.Equations, fine, []);
        if (zone.Exit is null)
        {
            return new(null, new double[now.Count]);
        }

        int n = meshes.Fine.Space.Size;
        double[][] adjoints = [.. now.Vectors(meshes.Fine).Select(j =>
        {
            double[] z = new double[n + 1];
            fineFactor!.SolveTransposed(j.AsSpan(0, n), z.AsSpan(0, n));
            return z;
        })];
        return GuardZone.Measure(meshes.Fine.Equations, fine, adjoints);
    }
}
