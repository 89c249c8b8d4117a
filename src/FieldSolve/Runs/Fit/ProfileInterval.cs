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
    /// <returns>The interval (an end is null where the profile stays below its limit up to the bound, or up to where the model says nothing), and the rises of the sum of squares on the way, over <paramref name="widen"/>, by value.</returns>
    public static ((double? Low, double? High) Interval, IReadOnlyList<LikelihoodPoint> Points) Of(IFitFunction model, FitTask task, FitEnd best, double[,] covariance, double widen, int j, CancellationToken cancel)
    {
        double limit = Math.Sqrt(widen * ChiSquared.InvCDF(1, 0.95)), error = Math.Sqrt(covariance[j, j]);
        FitTask held = task with { Held = [.. task.Held.Select((h, k) => h || k == j)] };
        List<LikelihoodPoint> points = [new(best.P[j], 0)];
        (double? Low, double? High) interval = (Side(-1), Side(1));
        foreach (double? end in (double?[])[interval.Low, interval.High])
        {
            // One more point halfway to each end, so that the curve between them is seen and not only assumed.
            if (end is { } far && LeastSquares.Run(model, held, Along(best.P, (best.P[j] + far) / 2), MostSteps, cancel) is { } half)
            {
                points.Add(new(half.P[j], Math.Max(0, half.Objective - best.Objective) / widen));
            }
        }

        return (interval, [.. points.OrderBy(p => p.Value)]);

        // Where the others lie when the number is held at a value, to first order.
        double[] Along(double[] from, double value) =>
            [.. from.Select((v, k) => k == j ? value : Math.Clamp(v + (covariance[k, j] / covariance[j, j] * (value - from[j])), task.Least[k], task.Most[k]))];

        double? Side(int sign)
        {
            // The root of the rise is nearly proportional to the distance: secant on it.
            double at = best.P[j] + (sign * 1.96 * error), inner = best.P[j], innerRise = 0;
            double[] from = best.P, innerP = best.P;
            bool solved = false;
            for (int trial = 0; trial < MostTrials; trial++)
            {
                bool bound = at <= task.Least[j] || at >= task.Most[j];
                at = Math.Clamp(at, task.Least[j], task.Most[j]);
                if (LeastSquares.Run(model, held, Along(from, at), MostSteps, cancel) is not { } end)
                {
                    at = (at + inner) / 2;
                    solved = false;
                    continue;
                }

                solved = true;
                double rise = Math.Sqrt(Math.Max(0, end.Objective - best.Objective));
                points.Add(new(at, rise * rise / widen));
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

            return solved ? at : null;
        }
    }
}
