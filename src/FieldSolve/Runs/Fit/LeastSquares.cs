using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace FieldSolve.Runs;

/// <summary>A model whose numbers are to be found.</summary>
public interface IFitFunction
{
    /// <summary>What the model says at some numbers; null where it says nothing (the device cannot be built, no solution).</summary>
    double[]? Values(double[] p, CancellationToken cancel);

    /// <summary>Derivatives at the numbers of the last call of <see cref="Values"/> that is given: one row per value, one column per number.</summary>
    double[,] Jacobian(double[] p, CancellationToken cancel);
}

/// <summary>Measured values and what is known of the numbers beforehand.</summary>
/// <param name="Value">Measured values.</param>
/// <param name="Sigma">Their standard deviations.</param>
/// <param name="Least">Lower bounds of the numbers.</param>
/// <param name="Most">Upper bounds.</param>
/// <param name="PriorMean">Prior means.</param>
/// <param name="PriorSigma">Prior standard deviations; infinite for none.</param>
/// <param name="Held">Numbers that keep their value.</param>
/// <param name="LargestStep">Largest change of each number in one step; infinite for any. Positive numbers beside change by no more than a factor of five.</param>
/// <param name="IsPositive">Numbers greater than zero by their nature.</param>
/// <param name="Robust">Outliers count less.</param>
public sealed record FitTask(
    double[] Value, double[] Sigma, double[] Least, double[] Most, double[] PriorMean, double[] PriorSigma, bool[] Held, double[] LargestStep, bool[] IsPositive,
    bool Robust)
{
    /// <summary>
    /// Outliers count nothing at all beyond <see cref="LeastSquares.Reach"/> standard deviations (Tukey's biweight). Such a fit has more than one end: begin it near the right one.
    /// </summary>
    public bool Redescending { get; init; }

    /// <summary>Loss of one residual over sigma.</summary>
    public double Loss(double z)
    {
        if (!Redescending)
        {
            return LeastSquares.Loss(z, Robust);
        }

        double u = 1 - Math.Min(1, z * z / (LeastSquares.Reach * LeastSquares.Reach));
        return LeastSquares.Reach * LeastSquares.Reach / 3 * (1 - (u * u * u));
    }

    /// <summary>Weight of a residual over sigma.</summary>
    public double Weight(double z)
    {
        if (!Redescending)
        {
            return LeastSquares.Weight(z, Robust);
        }

        double u = 1 - Math.Min(1, z * z / (LeastSquares.Reach * LeastSquares.Reach));
        return u * u;
    }
}

/// <summary>Where a least-squares fit ended.</summary>
/// <param name="P">The numbers.</param>
/// <param name="Values">The model there.</param>
/// <param name="Jacobian">Its derivatives there.</param>
/// <param name="Objective">Sum of squared residuals over sigma, or of the robust loss, with the priors.</param>
/// <param name="Weights">Weight of each value, 1 unless robust.</param>
/// <param name="Steps">Steps taken.</param>
/// <param name="Converged">Nothing is gained by further steps.</param>
public sealed record FitEnd(double[] P, double[] Values, double[,] Jacobian, double Objective, double[] Weights, int Steps, bool Converged);

/// <summary>
/// Levenberg-Marquardt with bounds and priors. D. W. Marquardt, J. Soc. Ind. Appl. Math. 11, 431 (1963); the step is the least-squares solution of the
/// residuals with the damping as further rows (J. J. Moré, Lecture Notes in Mathematics 630, 105 (1978)). A number at a bound that wants to leave is held for the step. The
/// robust loss is that of Student's t with four degrees of freedom (K. L. Lange, R. J. A. Little, J. M. G. Taylor, J. Am. Stat. Assoc. 84, 881 (1989)).
/// </summary>
public static class LeastSquares
{
    /// <summary>Degrees of freedom of the robust loss.</summary>
    public const double Freedom = 4;

    /// <summary>Where Tukey's biweight ends, in standard deviations: 95 % efficient for normal noise (A. E. Beaton, J. W. Tukey, Technometrics 16, 147 (1974)).</summary>
    public const double Reach = 4.685;

    private const double FirstDamping = 1e-3, LeastDamping = 1e-9, MostDamping = 1e8;
    private const double Factor = 5;

    // A number whose largest step changes the values by less than this, in standard deviations, has a derivative of rounding alone (the axis of an isotropic sheet).
    private const double Rounding = 1e-6;

    // A step that is expected to lower the sum of squares by less than this ends the fit: the numbers are then within a hundredth of their standard errors.
    private const double LeastGain = 1e-4;

    // After tries that failed every step is short, and short steps gain little; what a long one promises says whether there is something to gain.
    private const double LeastLeft = 1e3 * LeastGain;

    /// <summary>Loss of one residual over sigma, scaled so that small ones count as squares.</summary>
    public static double Loss(double z, bool robust) => robust ? Freedom * Math.Log(1 + (z * z / Freedom)) : z * z;

    /// <summary>Weight of a residual over sigma.</summary>
    public static double Weight(double z, bool robust) => robust ? 1 / (1 + (z * z / Freedom)) : 1;

    /// <summary>Runs the fit; null when the model says nothing at the start.</summary>
    public static FitEnd? Run(IFitFunction model, FitTask task, double[] start, int mostSteps, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(model);
        ArgumentNullException.ThrowIfNull(task);
        ArgumentNullException.ThrowIfNull(start);
        double[] p = [.. start.Select((v, j) => Math.Clamp(v, task.Least[j], task.Most[j]))];
        if (model.Values(p, cancel) is not { } values)
        {
            return null;
        }

        double[,] jacobian = model.Jacobian(p, cancel);
        double objective = Objective(task, p, values), damping = FirstDamping;
        int steps = 0;
        bool converged = false;
        while (steps < mostSteps && !converged)
        {
            bool better = false, failed = false;
            while (!better && damping <= MostDamping)
            {
                cancel.ThrowIfCancellationRequested();
                (double[] next, double gain) = Step(task, p, values, jacobian, damping);
                if (gain < LeastGain)
                {
                    converged = !failed || Step(task, p, values, jacobian, FirstDamping).Gain < LeastLeft;
                    break;
                }

                double[]? tried = model.Values(next, cancel);
                double there = tried is null ? double.PositiveInfinity : Objective(task, next, tried);
                if (there < objective)
                {
                    double got = objective - there;
                    damping = Math.Max(LeastDamping, damping * (got > 0.75 * gain ? 0.1 : got > 0.25 * gain ? 0.3 : 2));
                    (p, values, objective, better) = (next, tried!, there, true);
                }
                else
                {
                    // Rounding and the tolerance of the solves: a step that gains next to nothing is as good as none.
                    if (gain < LeastLeft && there - objective < LeastGain * (1 + objective))
                    {
                        converged = true;
                        break;
                    }

                    failed = true;
                    damping *= damping < 1e-4 ? 100 : 8;
                }
            }

            if (!better)
            {
                break;
            }

            jacobian = model.Jacobian(p, cancel);
            steps++;
        }

        return new(p, values, jacobian, objective, [.. values.Select((v, i) => task.Weight((task.Value[i] - v) / task.Sigma[i]))], steps, converged);
    }

    /// <summary>Sum of the losses with the priors.</summary>
    public static double Objective(FitTask task, double[] p, double[] values)
    {
        ArgumentNullException.ThrowIfNull(task);
        ArgumentNullException.ThrowIfNull(p);
        ArgumentNullException.ThrowIfNull(values);
        double sum = 0;
        for (int i = 0; i < values.Length; i++)
        {
            sum += task.Loss((task.Value[i] - values[i]) / task.Sigma[i]);
        }

        for (int j = 0; j < p.Length; j++)
        {
            double z = (p[j] - task.PriorMean[j]) / task.PriorSigma[j];
            sum += z * z;
        }

        return sum;
    }

    private static (double[] Next, double Gain) Step(FitTask task, double[] p, double[] values, double[,] jacobian, double damping)
    {
        int n = values.Length, m = p.Length;
        double[] root = new double[n], z = new double[n];
        for (int i = 0; i < n; i++)
        {
            z[i] = (task.Value[i] - values[i]) / task.Sigma[i];
            root[i] = Math.Sqrt(task.Weight(z[i]));
        }

        // Gradient of the sum of squares over -2, which tells who pushes against a bound.
        bool[] held = [.. task.Held];
        double[] norm = new double[m];
        for (int j = 0; j < m; j++)
        {
            double push = (task.PriorMean[j] - p[j]) / (task.PriorSigma[j] * task.PriorSigma[j]), square = 1 / (task.PriorSigma[j] * task.PriorSigma[j]);
            for (int i = 0; i < n; i++)
            {
                double s = root[i] * jacobian[i, j] / task.Sigma[i];
                push += s * root[i] * z[i];
                square += s * s;
            }

            norm[j] = Math.Sqrt(square);
            held[j] |= (p[j] <= task.Least[j] && push < 0) || (p[j] >= task.Most[j] && push > 0) || !(norm[j] > 0) || norm[j] * task.LargestStep[j] < Rounding;
        }

        int[] free = [.. Enumerable.Range(0, m).Where(j => !held[j])];
        if (free.Length == 0)
        {
            return (p, 0);
        }

        var a = new DenseMatrix(n + (2 * free.Length), free.Length);
        var b = new DenseVector(n + (2 * free.Length));
        for (int i = 0; i < n; i++)
        {
            b[i] = root[i] * z[i];
            for (int k = 0; k < free.Length; k++)
            {
                a[i, k] = root[i] * jacobian[i, free[k]] / task.Sigma[i] / norm[free[k]];
            }
        }

        double damp = Math.Sqrt(damping);
        for (int k = 0; k < free.Length; k++)
        {
            int j = free[k];
            a[n + k, k] = 1 / (task.PriorSigma[j] * norm[j]);
            b[n + k] = (task.PriorMean[j] - p[j]) / task.PriorSigma[j];
            a[n + free.Length + k, k] = damp;
        }

        Vector<double> step = a.QR(MathNet.Numerics.LinearAlgebra.Factorization.QRMethod.Thin).Solve(b);
        double[] next = [.. p];
        for (int k = 0; k < free.Length; k++)
        {
            int j = free[k];
            double change = Math.Clamp(step[k] / norm[j], -task.LargestStep[j], task.LargestStep[j]);
            double to = p[j] + change;
            to = task.IsPositive[j] ? Math.Clamp(to, p[j] / Factor, p[j] * Factor) : to;
            next[j] = Math.Clamp(to, task.Least[j], task.Most[j]);
            step[k] = (next[j] - p[j]) * norm[j];
        }

        Vector<double> left = b - (a * step);
        double before = 0, after = 0;
        for (int i = 0; i < n + free.Length; i++)
        {
            before += b[i] * b[i];
            after += left[i] * left[i];
        }

        return (next, before - after);
    }
}
