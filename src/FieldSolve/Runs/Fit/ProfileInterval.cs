using MathNet.Numerics.Distributions;

namespace FieldSolve.Runs;

/// <summary>
/// 95 % interval of one number by profile likelihood: where the least sum of squares with that number held rises by the 95 % point of chi squared with one degree of
/// freedom (D. J. Venzon, S. H. Moolgavkar, Appl. Stat. 37, 87 (1988)).
/// </summary>
internal static class ProfileInterval
{
    private const int MostTrials = 5, MostSteps = 12;
    private const double CloseEnough = 0.01;

    /// <param name="model">The model.</param>
    /// <param name="task">Data and bounds.</param>
    /// <param name="best">The fit.</param>
    /// <param name="covariance">Of the numbers at the fit.</param>
    /// <param name="widen">By how much the covariance of a robust fit exceeds the inverse of its objective's curvature; 1 for squares.</param>
    /// <param name="j">Which number.</param>
    /// <param name="cancel">Stops the work.</param>
    public static (double? Low, double? High) Of(IFitFunction model, FitTask task, FitEnd best, double[,] covariance, double widen, int j, CancellationToken cancel)
    {
        double limit = Math.Sqrt(widen * ChiSquared.InvCDF(1, 0.95)), error = Math.Sqrt(covariance[j, j]);
        FitTask held = task with { Held = [.. task.Held.Select((h, k) => h || k == j)] };
        return (Side(-1), Side(1));

        double? Side(int sign)
        {
            // The root of the rise is nearly proportional to the distance: secant on it.
            double at = best.P[j] + (sign * 1.96 * error), inner = best.P[j], innerRise = 0;
            double[] from = best.P, innerP = best.P;
            for (int trial = 0; trial < MostTrials; trial++)
            {
                bool bound = at <= task.Least[j] || at >= task.Most[j];
                at = Math.Clamp(at, task.Least[j], task.Most[j]);
                double[] start = [.. from.Select((v, k) => k == j ? at : Math.Clamp(v + (covariance[k, j] / covariance[j, j] * (at - from[j])), task.Least[k], task.Most[k]))];
                if (LeastSquares.Run(model, held, start, MostSteps, cancel) is not { } end)
                {
                    at = (at + inner) / 2;
                    continue;
                }

                double rise = Math.Sqrt(Math.Max(0, end.Objective - best.Objective));
                if (Math.Abs(rise - limit) < CloseEnough)
                {
                    return at;
                }

                if (bound && rise < limit)
                {
                    return null;
                }

                double next = rise > innerRise ? inner + ((at - inner) * (limit - innerRise) / (rise - innerRise)) : at + (sign * error);
                if (rise < limit)
                {
                    (inner, innerRise, innerP) = (at, rise, end.P);
                }

                from = rise < limit ? end.P : innerP;
                at = sign * (next - best.P[j]) > 0 ? next : (at + inner) / 2;
            }

            return at;
        }
    }
}
