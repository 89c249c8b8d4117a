namespace FieldSolve.Solving;

/// <summary>
/// Follows the solution of one wiring as the current grows. The guess for a new current continues the earlier solutions as a
/// polynomial of the current (through zero current, where the sheet is at rest); when Newton's iteration fails, the step in current is halved.
/// </summary>
public sealed class DrivePath
{
    private const int MostHalvings = 5;

    private readonly FieldLevel level;
    private readonly NewtonSolver newton;
    private readonly int source;
    private readonly int drain;
    private readonly double[] unit;
    private readonly CurrentSeries past;

    /// <summary>Starts at rest.</summary>
    public DrivePath(FieldLevel level, int source, int drain)
    {
        ArgumentNullException.ThrowIfNull(level);
        this.level = level;
        this.source = source;
        this.drain = drain;
        newton = new NewtonSolver(level);
        unit = level.UnitSolution(source, drain);
        past = new CurrentSeries(unit);
    }

    /// <summary>Potentials for one ampere in the limit of small drive.</summary>
    public ReadOnlySpan<double> Unit => unit;

    /// <summary>The iteration, for its factor.</summary>
    public NewtonSolver Newton => newton;

    /// <summary>Takes over a solution that is known already; guesses pass through it.</summary>
    public void Know(double current, double[] u) => past.Anchor(current, u);

    /// <summary>Solves at a current.</summary>
    /// <param name="current">A.</param>
    /// <param name="u">Out: potentials.</param>
    /// <param name="guess">A guess from elsewhere, or null.</param>
    /// <param name="cancel">Checked at every step.</param>
    public NewtonOutcome Solve(double current, double[] u, double[]? guess, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(u);
        if (level.Equations.Law.IsLinear)
        {
            for (int i = 0; i < u.Length; i++)
            {
                u[i] = current * unit[i];
            }

            return Polish(current, u, cancel);
        }

        if (guess is not null)
        {
            guess.CopyTo(u, 0);
        }
        else
        {
            past.Predict(current, u);
        }

        NewtonOutcome outcome = newton.Solve(u, source, drain, current, cancel);
        if (!outcome.Converged)
        {
            outcome = Creep(current, u, outcome, cancel);
        }

        if (outcome.Converged)
        {
            past.Remember(current, u);
        }

        return outcome;
    }

    // One step of iterative refinement; a linear law needs no more.
    private NewtonOutcome Polish(double current, double[] u, CancellationToken cancel) =>
        newton.Solve(u, source, drain, current, cancel);

    private NewtonOutcome Creep(double current, double[] u, NewtonOutcome failed, CancellationToken cancel)
    {
        // A polynomial through currents close to the last that the sheet carries swings below them.
        past.ForgetBeyond(current);
        double from = past.LastCurrent * current > 0 && Math.Abs(past.LastCurrent) < Math.Abs(current) ? past.LastCurrent : 0;
        double step = (current - from) / 2;
        NewtonOutcome sum = failed;
        for (int halvings = 0; halvings < MostHalvings;)
        {
            double target = Math.Abs(from + step) >= Math.Abs(current) * (1 - 1e-9) ? current : from + step;
            newton.Restart();
            past.Predict(target, u);
            NewtonOutcome outcome = newton.Solve(u, source, drain, target, cancel);
            sum = sum.Then(outcome);
            if (!outcome.Converged)
            {
                step /= 2;
                halvings++;
                continue;
            }

            if (target == current)
            {
                return sum;
            }

            past.Remember(target, u);
            from = target;
        }

        return sum;
    }
}
