using FieldSolve.Runs;

namespace FieldSolve.Tests.FitTests;

public class LeastSquaresTests
{
    // y = p0 exp(-p1 x): residuals are zero at the truth, so any sound method finds it to rounding.
    private sealed class Decay(double[] x) : IFitFunction
    {
        public double[]? Values(double[] p, CancellationToken cancel) => [.. x.Select(t => p[0] * Math.Exp(-p[1] * t))];

        public double[,] Jacobian(double[] p, CancellationToken cancel)
        {
            double[,] j = new double[x.Length, 2];
            for (int i = 0; i < x.Length; i++)
            {
                j[i, 0] = Math.Exp(-p[1] * x[i]);
                j[i, 1] = -x[i] * p[0] * Math.Exp(-p[1] * x[i]);
            }

            return j;
        }
    }

    private static readonly double[] X = [.. Enumerable.Range(0, 20).Select(k => 0.1 * k)];

    private static FitTask Task(double[] y, double sigma, bool robust = false, double most = 1e9) => new(
        y, [.. y.Select(_ => sigma)], [-1e9, -1e9], [1e9, most], [0, 0], [double.PositiveInfinity, double.PositiveInfinity], new bool[2],
        [double.PositiveInfinity, double.PositiveInfinity], new bool[2], robust);

    [Fact]
    public void Finds_numbers_that_describe_the_data_without_noise()
    {
        double[] y = [.. X.Select(t => 3 * Math.Exp(-1.7 * t))];
        FitEnd end = LeastSquares.Run(new Decay(X), Task(y, 1e-3), [1, 0.2], 50, default)!;
        Assert.True(end.Converged);

        // A fit ends within a hundredth of the standard errors, here some 1e-3.
        Assert.Equal(3, end.P[0], 2e-5);
        Assert.Equal(1.7, end.P[1], 2e-5);
    }

    [Fact]
    public void Stays_at_a_bound_that_the_data_push_against_and_fits_the_rest()
    {
        double[] y = [.. X.Select(t => 3 * Math.Exp(-1.7 * t))];
        FitEnd end = LeastSquares.Run(new Decay(X), Task(y, 1e-3, most: 1.5), [1, 0.2], 50, default)!;
        Assert.Equal(1.5, end.P[1]);

        // With the rate held the amplitude is a linear least-squares problem: sum(y f)/sum(f f).
        double[] f = [.. X.Select(t => Math.Exp(-1.5 * t))];
        Assert.Equal(y.Zip(f, (a, b) => a * b).Sum() / f.Sum(b => b * b), end.P[0], 2e-5);
    }

    [Fact]
    public void A_prior_counts_as_one_more_datum()
    {
        // One number, one datum y = 1 ± 0.1, prior 0 ± 0.2: the mean weighted with 1/sigma² is 0.8.
        var task = new FitTask([1], [0.1], [-9], [9], [0], [0.2], [false], [double.PositiveInfinity], [false], false);
        FitEnd end = LeastSquares.Run(new Identity(), task, [0.3], 20, default)!;
        Assert.Equal(0.8, end.P[0], 1e-3);
    }

    [Fact]
    public void The_robust_loss_all_but_forgets_an_outlier()
    {
        double[] y = [.. X.Select(t => 3 * Math.Exp(-1.7 * t))];
        y[7] += 1;
        double[] plain = LeastSquares.Run(new Decay(X), Task(y, 0.01), [2, 1], 80, default)!.P;
        FitEnd robust = LeastSquares.Run(new Decay(X), Task(y, 0.01, robust: true), [2, 1], 80, default)!;
        Assert.True(Math.Abs(plain[1] - 1.7) > 0.05);
        Assert.Equal(1.7, robust.P[1], 0.01);
        Assert.True(robust.Weights[7] < 0.01);
    }

    [Fact]
    public void Says_so_when_the_model_says_nothing_at_the_start() =>
        Assert.Null(LeastSquares.Run(new Nothing(), Task([1, 2], 1), [1, 1], 5, default));

    [Fact]
    public void Short_steps_before_a_wall_are_no_end()
    {
        // y = 10 ± 0.1, and a model that says nothing beyond 1: however short the steps have become there, the best number lies elsewhere.
        var task = new FitTask([10], [0.1], [-99], [99], [0], [double.PositiveInfinity], [false], [double.PositiveInfinity], [false], false);
        FitEnd end = LeastSquares.Run(new Walled(), task, [0.3], 200, default)!;
        Assert.InRange(end.P[0], 0.9, 1);
        Assert.False(end.Converged);
    }

    [Fact]
    public void An_interval_has_no_end_where_the_model_says_nothing()
    {
        // 0.9 ± 0.1: the 95 % point above is 1.096, beyond the wall at 1; below it is 0.704.
        var task = new FitTask([0.9], [0.1], [-99], [99], [0], [double.PositiveInfinity], [false], [double.PositiveInfinity], [false], false);
        FitEnd best = LeastSquares.Run(new Walled(), task, [0.5], 50, default)!;
        Assert.True(best.Converged);
        (double? low, double? high) = ProfileInterval.Of(new Walled(), task, best, new double[,] { { 0.01 } }, 1, 0, default).Interval;
        Assert.Equal(0.9 - (1.959964 * 0.1), low!.Value, 0.002);
        Assert.Null(high);
    }

    private sealed class Walled : IFitFunction
    {
        public double[]? Values(double[] p, CancellationToken cancel) => p[0] > 1 ? null : [p[0]];

        public double[,] Jacobian(double[] p, CancellationToken cancel) => new double[,] { { 1 } };
    }

    private sealed class Identity : IFitFunction
    {
        public double[]? Values(double[] p, CancellationToken cancel) => [p[0]];

        public double[,] Jacobian(double[] p, CancellationToken cancel) => new double[,] { { 1 } };
    }

    private sealed class Nothing : IFitFunction
    {
        public double[]? Values(double[] p, CancellationToken cancel) => null;

        public double[,] Jacobian(double[] p, CancellationToken cancel) => throw new InvalidOperationException();
    }
}
