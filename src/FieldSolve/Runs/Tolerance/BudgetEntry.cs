using FieldSolve.Device;

namespace FieldSolve.Runs;

/// <summary>What one cause does to one quantity.</summary>
/// <param name="Quantity">The quantity.</param>
/// <param name="Cause">The cause.</param>
/// <param name="Slope">First derivative, V (or 1 for the ratio) per SI unit of the cause.</param>
/// <param name="Curvature">Second derivative, per SI unit squared; null where the first order serves.</param>
/// <param name="Contribution">Slope times sigma; half the curvature times sigma squared where the first order vanishes. V, or 1.</param>
/// <param name="Error">Numerical error of the contribution: what the finer mesh changes of it.</param>
public sealed record BudgetEntry(ToleranceQuantity Quantity, SheetCause Cause, double Slope, double? Curvature, double Contribution, double Error)
{
    /// <summary>1, or 2 where the first order vanishes.</summary>
    public int Order => Curvature is null ? 1 : 2;
}

/// <summary>The budget: first derivatives times sigma, second order where the first vanishes.</summary>
internal static class Budget
{
    // The first order counts as vanishing below this part of what all causes together do, or of the reading itself (rounding).
    private const double VanishesOfAll = 1e-4;
    private const double VanishesOfAlong = 1e-10;

    /// <summary>Entries by quantity, the largest contribution first.</summary>
    public static IReadOnlyList<BudgetEntry> Of(ToleranceModel model, CancellationToken cancel)
    {
        int n = model.Quantities.Count, causes = model.Causes.Count;
        double along = model.States.Max(s => s.Row.Readings.Max(r => Math.Abs(r.Value)));
        double[] all = new double[n];
        for (int q = 0; q < n; q++)
        {
            double sum = 0;
            for (int c = 0; c < causes; c++)
            {
                sum += Square(model.Slopes[q, c] * model.Causes[c].Sigma);
            }

            all[q] = Math.Sqrt(sum);
        }

        bool Vanishes(int q, int c) => Math.Abs(model.Slopes[q, c]) * model.Causes[c].Sigma
            <= Math.Max(VanishesOfAll * all[q], VanishesOfAlong * (model.Quantities[q].IsRatio ? 1 : along));

        double[]?[] curvature = new double[]?[causes];
        int[] wanted = [.. Enumerable.Range(0, causes).Where(c => !model.WithoutSlope[c] && Enumerable.Range(0, n).Any(q => Vanishes(q, c)))];
        var solver = new SampleSolver(model);
        Parallel.For(0, wanted.Length, new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount }, k =>
        {
            int c = wanted[k];
            double[] x = new double[causes];
            x[c] = model.Causes[c].Sigma;
            SampleResult plus = solver.Solve(0, x, cancel);
            x[c] = -x[c];
            SampleResult minus = solver.Solve(0, x, cancel);
            if (plus.Status == SampleStatus.Ok && minus.Status == SampleStatus.Ok)
            {
                curvature[c] = [.. plus.Values.Select((v, q) => (v + minus.Values[q] - (2 * model.Values[q])) / Square(x[c]))];
            }
        });

        var list = new List<BudgetEntry>();
        for (int q = 0; q < n; q++)
        {
            var own = new List<(double Size, int Cause, BudgetEntry Entry)>();
            for (int c = 0; c < causes; c++)
            {
                double sigma = model.Causes[c].Sigma, slope = model.Slopes[q, c], error = Math.Abs(slope - model.CoarseSlopes[q, c]) * sigma;
                if (model.WithoutSlope[c])
                {
                    continue;
                }

                double? second = Vanishes(q, c) && curvature[c] is { } found ? found[q] : null;
                double contribution = second is { } d ? d * sigma * sigma / 2 : slope * sigma;
                if (second is not null)
                {
                    // A difference of solves, each good to about its residual.
                    error = Math.Max(error, 2 * SampleSolver.RelativeResidual * (model.Quantities[q].IsRatio ? 1 : along));
                }

                own.Add((Math.Abs(contribution), c, new(model.Quantities[q], model.Causes[c], slope, second, contribution, error)));
            }

            list.AddRange(own.OrderByDescending(e => e.Size).ThenBy(e => e.Cause).Select(e => e.Entry));
        }

        return list;
    }

    private static double Square(double x) => x * x;
}
