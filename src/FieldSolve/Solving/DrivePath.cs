namespace FieldSolve.Solving;

/// <summary>
/// Follows the solution of one wiring as the current grows. The guess for a new current continues the earlier solutions as a
/// polynomial of the current (through zero current, where the sheet is at rest); when Newton's iteration fails, the step in current is halved.
/// </summary>
public sealed class DrivePath
{
    private const int MostHalvings = 5;
    private const int MostPast = 4;

    private readonly FieldLevel level;
    private readonly NewtonSolver newton;
    private readonly int source;
    private readonly int drain;
    private readonly double[] unit;
    private readonly List<(double Current, double[] U)> past = [];

    /// <summary>Starts at rest.</summary>
    public DrivePath(FieldLevel level, int source, int drain)
    {
        ArgumentNullException.ThrowIfNull(level);
        this.level = level;
        this.source = source;
        this.drain = drain;
        newton = new NewtonSolver(level);
        unit = level.UnitSolution(source, drain);
    }

    /// <summary>Potentials for one ampere in the limit of small drive.</summary>
    public ReadOnlySpan<double> Unit => unit;

    /// <summary>The iteration, for its factor.</summary>
    public NewtonSolver Newton => newton;

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
            Predict(current, u);
        }

        NewtonOutcome outcome = newton.Solve(u, source, drain, current, cancel);
        if (!outcome.Converged)
        {
            outcome = Creep(current, u, outcome, cancel);
        }

        if (outcome.Converged)
        {
            Remember(current, u);
        }

        return outcome;
    }

    // One step of iterative refinement; a linear law needs no more.
    private NewtonOutcome Polish(double current, double[] u, CancellationToken cancel) =>
        newton.Solve(u, source, drain, current, cancel);

    private NewtonOutcome Creep(double current, double[] u, NewtonOutcome failed, CancellationToken cancel)
    {
        double from = past.Count > 0 && past[^1].Current * current > 0 && Math.Abs(past[^1].Current) < Math.Abs(current)
            ? past[^1].Current
            : 0;
        double step = (current - from) / 2;
        NewtonOutcome sum = failed;
        for (int halvings = 0; halvings < MostHalvings;)
        {
            double target = Math.Abs(from + step) >= Math.Abs(current) * (1 - 1e-9) ? current : from + step;
            newton.Restart();
            Predict(target, u);
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

            Remember(target, u);
            from = target;
        }

        return sum;
    }

    private void Remember(double current, double[] u)
    {
        if (current == 0 || past.Any(p => p.Current == current))
        {
            return;
        }

        double[] copy = past.Count == MostPast ? past[0].U : new double[u.Length];
        if (past.Count == MostPast)
        {
            past.RemoveAt(0);
        }

        u.CopyTo(copy, 0);
        past.Add((current, copy));
    }

    // u(I)/I is smooth and known at zero current (the unit solution): interpolate it, Lagrange's formula.
    private void Predict(double current, double[] u)
    {
        Array.Clear(u);
        (double Current, double[] U)[] nodes = [(0, unit), .. past];
        foreach ((double at, double[] value) in nodes)
        {
            double weight = current / (at == 0 ? 1 : at);
            foreach ((double other, _) in nodes)
            {
                if (other != at)
                {
                    weight *= (current - other) / (at - other);
                }
            }

            for (int i = 0; i < u.Length; i++)
            {
                u[i] += weight * value[i];
            }
        }
    }
}
