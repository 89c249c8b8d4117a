using FieldSolve.Fields;
using FieldSolve.Sparse;

namespace FieldSolve.Solving;

/// <summary>
/// Newton's iteration for one wiring. A step first tries the factor at hand (at zero field, or of an earlier Jacobian); when that no longer
/// contracts the residual well, the exact Jacobian is factored and the step is damped by a line search on the residual.
/// Kept factors change how fast the residual falls, not what it falls to. J. E. Dennis, R. B. Schnabel, Numerical Methods for Unconstrained Optimization
/// and Nonlinear Equations (1983), chapters 5 and 6. One object per thread.
/// </summary>
public sealed class NewtonSolver
{
    private const double Tolerance = 1e-12;

    // A solve that stalls below this, or below the rounding of its own residual, is as good as it gets. That rounding is large beside the current
    // where the sheet lies far above the drain behind a large contact resistance, or conducts far better one way than the other.
    private const double StallTolerance = 1e-11;
    private const double MostRounding = 1e-6;

    // A step that does not bring the residual down to this share of itself calls for a new factor, or for damping.
    private const double GoodContraction = 0.35;

    // A new Jacobian with its factor costs about as much as three steps with a kept one and then saves all but three or four steps (measured on
    // 32,000 unknowns: residual 0.9 ms, solve 3 ms, Jacobian 3.3 ms, factor 5.5 ms).
    private const double WorthNewFactor = 7;

    // Of a few thousand unknowns a factor costs as much as 15 steps (layout page: 0.3 ms against 4.5 ms at 3,600).
    private const double GoodContractionKept = 0.6, WorthNewFactorKept = 15;
    private const int MostSteps = 80;
    private const int MostHalvings = 12;

    private readonly FieldLevel level;
    private readonly double tolerance;
    private readonly double[] residual;
    private readonly double[] trialResidual;
    private readonly double[] step;
    private readonly double[] trial;
    private readonly StepMixer mixer;
    private JacobianRoom? own;

    private SparseLu? start;

    /// <summary>Makes a solver.</summary>
    /// <param name="level">Mesh and equations.</param>
    /// <param name="start">A factor to start with, for instance of the same state on a mesh that lies a little differently; null for the level's
    /// own at zero field.</param>
    /// <param name="relativeResidual">Residual over current at which a solve ends.</param>
    public NewtonSolver(FieldLevel level, SparseLu? start = null, double relativeResidual = Tolerance)
    {
        ArgumentNullException.ThrowIfNull(level);
        this.level = level;
        this.start = start;
        tolerance = relativeResidual;
        residual = new double[level.Equations.Length];
        trialResidual = new double[residual.Length];
        step = new double[residual.Length];
        trial = new double[residual.Length];
        mixer = new StepMixer(level.Space.Size);
        Factor = start ?? level.AtZero;
    }

    /// <summary>Prefers more steps to a new factor, as suits small meshes.</summary>
    internal bool KeepsFactor { get; init; }

    /// <summary>The factor that the last step used.</summary>
    public SparseLu Factor { get; private set; }

    /// <summary>Solves R(u) = 0.</summary>
    /// <param name="u">In: guess; out: the solution when converged, else the best found. The last entry stays 0.</param>
    /// <param name="source">Contact the current enters the sheet at.</param>
    /// <param name="drain">Contact it leaves at.</param>
    /// <param name="current">A.</param>
    /// <param name="cancel">Checked at every step.</param>
    public NewtonOutcome Solve(double[] u, int source, int drain, double current, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(u);
        if (current == 0)
        {
            Array.Clear(u);
            return new(true, 0, 0, 0, 0, null);
        }

        int steps = 0, factorisations = 0, solves = 0;
        double scale = Math.Abs(current) * Math.Sqrt(2), norm;
        NewtonOutcome Outcome(bool converged, string? refusal = null) =>
            new(converged, steps, norm / scale, factorisations, solves, refusal);

        norm = double.PositiveInfinity;
        if (!TryResidual(u, source, drain, current, residual, out norm, out string? refused))
        {
            return Outcome(false, refused);
        }

        (double contraction, double worth) = KeepsFactor ? (GoodContractionKept, WorthNewFactorKept) : (GoodContraction, WorthNewFactor);
        bool fresh = false;
        mixer.Reset();
        while (norm > tolerance * scale)
        {
            cancel.ThrowIfCancellationRequested();
            if (steps++ >= MostSteps)
            {
                return Outcome(norm <= Floor(u, scale));
            }

            // A step with a kept factor is combined with the steps before it; one with a fresh factor is Newton's own.
            Step(u, 1, mix: !fresh);
            solves++;
            bool valid = TryResidual(trial, source, drain, current, trialResidual, out double next, out refused);
            if (valid && next <= contraction * norm)
            {
                double stepsLeft = Math.Log(tolerance * scale / next) / Math.Log(next / norm);
                norm = Accept(u, next);
                fresh = false;
                if (stepsLeft > worth && TryFactor(u, cancel))
                {
                    factorisations++;
                    fresh = true;
                    mixer.Reset();
                }

                continue;
            }

            if (norm <= Floor(u, scale))
            {
                if (valid && next < norm)
                {
                    norm = Accept(u, next);
                }

                return Outcome(true);
            }

            if (!fresh)
            {
                if (!TryFactor(u, cancel))
                {
                    return Outcome(false);
                }

                factorisations++;
                fresh = true;
                mixer.Reset();
                continue;
            }

            // A fresh factor and still no good step: damp it.
            double damp = 1;
            for (int k = 0; !(valid && next <= (1 - (1e-4 * damp)) * norm); k++)
            {
                if (k == MostHalvings)
                {
                    return Outcome(false, refused);
                }

                damp /= 2;
                Step(u, damp, mix: false);
                valid = TryResidual(trial, source, drain, current, trialResidual, out next, out refused);
            }

            norm = Accept(u, next);
            fresh = false;
        }

        return Outcome(true);
    }

    /// <summary>Forgets the factor of an earlier Jacobian and starts again with the first one.</summary>
    public void Restart() => Factor = start ?? level.AtZero;

    /// <summary>Starts again with another factor.</summary>
    public void Restart(SparseLu factor) => Factor = start = factor;

    /// <summary>
    /// Factors the Jacobian at a state; null when it is not positive definite there or the law cannot be evaluated. Valid until the next solve.
    /// </summary>
    public SparseLu? FactorAt(double[] u, CancellationToken cancel) => TryFactor(u, cancel) ? Factor : null;

    /// <summary>Gives the storage of the solver's own factor to other solvers; it starts again with the factor at zero field.</summary>
    public void Release()
    {
        Restart();
        if (own is not null)
        {
            level.Return(own);
            own = null;
        }
    }

    private void Step(double[] u, double damp, bool mix)
    {
        int n = level.Space.Size;
        if (damp == 1)
        {
            Factor.Solve(residual.AsSpan(0, n), step.AsSpan(0, n));
            for (int i = 0; i < n; i++)
            {
                step[i] = -step[i];
            }

            if (mix)
            {
                mixer.Mix(u, step.AsSpan(0, n));
            }
        }

        for (int i = 0; i < n; i++)
        {
            trial[i] = u[i] + (damp * step[i]);
        }
    }

    // Norm of the residual, A, below which a stalled iteration has nothing left to gain.
    private double Floor(double[] u, double scale) =>
        Math.Max(StallTolerance * scale, Math.Min(MostRounding * scale, level.ResidualRounding(u)));

    private double Accept(double[] u, double norm)
    {
        trial.CopyTo(u, 0);
        trialResidual.CopyTo(residual, 0);
        return norm;
    }

    private bool TryResidual(
        double[] at, int source, int drain, double current, double[] result, out double norm, out string? refusal)
    {
        try
        {
            level.Equations.Residual(at, source, drain, current, result);
        }
        catch (LawRefusedException e)
        {
            norm = double.PositiveInfinity;
            refusal = e.Message;
            return false;
        }

        double sum = 0;
        for (int i = 0; i < result.Length; i++)
        {
            sum += result[i] * result[i];
        }

        norm = Math.Sqrt(sum);
        refusal = null;
        return double.IsFinite(norm);
    }

    private bool TryFactor(double[] u, CancellationToken cancel)
    {
        own ??= level.Rent();
        try
        {
            level.Equations.Jacobian(u, own.Values);
            SharedCores.Factor(own.Factor, own.Values.AsSpan(0, level.Space.Pattern.Count), cancel);
        }
        catch (Exception e) when (e is PivotException or LawRefusedException)
        {
            Restart();
            return false;
        }

        Factor = own.Factor;
        return true;
    }
}
