using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Solving;
using FieldSolve.Tests.PublishedTests;
using MathNet.Numerics.Distributions;

namespace FieldSolve.Tests.FitTests;

/// <summary>
/// Made-up measurements on an irregular flake whose contacts sit a little off, with the placement as nuisance numbers under the lithography's prior. Every draw is fitted with
/// the whole finite-element model, contacts moving; a coarse mesh serves for the data and the fit, so that what is tested is the statistics and not the mesh. Data from
/// another, finer mesh are fitted by the whole run.
/// </summary>
public class CoverageTests
{
    private const int Draws = 200;
    private const double Placement = 60e-9, Noise = 4e-6, CoarseSize = 1.5e-6;

    private static readonly string[] Wanted = ["a", "b", "axis"];

    private static readonly (string Name, double X, double Y)[] Corners =
        [("", -4e-6, -2.2e-6), ("", 1e-6, -3e-6), ("", 4.4e-6, -1e-6), ("", 3.2e-6, 2.4e-6), ("", -0.6e-6, 3.1e-6), ("", -3.6e-6, 1.4e-6)];

    [Fact]
    public void Intervals_cover_the_truth_as_often_as_they_say()
    {
        using var folder = new EndToEndTests.TempFolder();
        (SheetDevice device, MeasuredVoltages layout) = Flake(folder);
        var problem = new FitProblem(device, device.Fit!.Parameters, layout, layout.Data);
        double[] truth = problem.Start;
        FieldLevel level = FitDevices.Coarse(problem, truth, CoarseSize);
        var reference = new FitModel(problem, level, new double[layout.Data.Count]);
        double[] values = reference.Values(truth, default)!;
        var linear = new Linear(truth, values, reference.Jacobian(truth, default));
        int[] at = [.. Wanted.Select(k => problem.Parameters.ToList().FindIndex(p => p.Key == k))];
        var random = new Random(20261201);
        (double[] P, double[] Noise)[] draws = [.. Enumerable.Range(0, Draws).Select(_ => Draw(problem, truth, random))];
        double[][] off = new double[Draws][], beyond = new double[Draws][];

        // Two models, each with every second draw: what a draw begins from does not depend on who comes first.
        Parallel.For(0, 2, half =>
        {
            var model = new FitModel(problem, level, new double[layout.Data.Count]);
            for (int d = half; d < Draws; d += 2)
            {
                (double[] p, double[] noise) = draws[d];
                double[] data = [.. model.Values(p, default)!.Zip(noise, (v, e) => v + e)];
                (FitEnd end, double[,] covariance) = Fit(problem, model, data, truth);
                off[d] = [.. at.Select(k => (end.P[k] - truth[k]) / Math.Sqrt(covariance[k, k]))];

                // The same draw on the model linearised at the truth, whose estimates have no bias: the difference is the bias of the method without most of the chance.
                (FitEnd near, double[,] nearCovariance) = Fit(problem, linear, [.. linear.Values(p, default)!.Zip(noise, (v, e) => v + e)], truth);
                beyond[d] = [.. at.Select((k, n) => off[d][n] - ((near.P[k] - truth[k]) / Math.Sqrt(nearCovariance[k, k])))];
            }
        });

        for (int k = 0; k < Wanted.Length; k++)
        {
            Assert.InRange(100.0 * off.Count(o => Math.Abs(o[k]) <= 1.959964) / Draws, 91, 98);

            // The mean of 200 draws has a standard error of 0.07: of the plain mean only three times that can be asked, of the difference the tenth itself.
            double error = 1 / Math.Sqrt(Draws), bias = beyond.Average(o => o[k]), scatter = Math.Sqrt(beyond.Average(o => Math.Pow(o[k] - bias, 2))) * error;
            Assert.True(Math.Abs(off.Average(o => o[k])) < 3 * error, $"{Wanted[k]}: mean {off.Average(o => o[k])}");
            Assert.True(scatter < 0.02, $"{Wanted[k]}: {scatter}");
            Assert.True(Math.Abs(bias) + (2 * scatter) < 0.1, $"{Wanted[k]}: bias {bias} +- {scatter}");

            // Were the model linear, the full fit would be the linear one and nothing were tested.
            Assert.True(scatter > 1e-4, $"{Wanted[k]}: {scatter}");
        }
    }

    [Fact]
    public void Data_of_another_finer_mesh_are_fitted_within_their_intervals()
    {
        using var folder = new EndToEndTests.TempFolder();
        (SheetDevice device, MeasuredVoltages layout) = Flake(folder);
        var problem = new FitProblem(device, device.Fit!.Parameters, layout, layout.Data);
        (double[] truth, double[] noise) = Draw(problem, problem.Start, new Random(5));

        // Meshed at the true places of the contacts, solved on the split of a mesh that is itself finer than that of the fit, without corrections.
        FitReference fine = FitReference.Refine(problem, truth, 0.02, _ => { }, new StageClock(), default);
        double[] values = new FitModel(problem, fine.Meshes.Fine, new double[noise.Length]).Values(truth, default)!;
        MeasuredVoltages data = layout with { Data = [.. layout.Data.Select((d, i) => d with { Value = values[i] + noise[i] })] };
        FitResult result = FitDevices.Fit(
            device with { Fit = device.Fit with { Parameters = [.. device.Fit.Parameters.Select(p => p.Key == "b" ? p with { Start = 1.4 * p.Start } : p)] } }, data,
            new FitOptions { AllIntervals = true });
        Assert.True(result.AllOk);
        Assert.True(result.Unknowns.Coarse < fine.Meshes.Fine.Space.Size / 4, $"{result.Unknowns.Coarse} of {fine.Meshes.Fine.Space.Size}");
        Assert.InRange(result.NumericalShare, 0, 0.2);
        Assert.InRange(result.Quality.Probability!.Value, 0.01, 0.99);
        for (int j = 0; j < truth.Length; j++)
        {
            FittedParameter p = result.Parameters[j];
            Assert.InRange((p.Value!.Value - truth[j]) / p.StandardError!.Value, -2.5, 2.5);
            Assert.InRange(p.NumericalError, 1e-4 * p.StandardError!.Value, p.StandardError!.Value);
            if (p.Interval is var (low, high))
            {
                Assert.InRange(truth[j], low!.Value, high!.Value);
            }
        }

        Assert.Equal(3, result.Parameters.Count(p => p.Interval is not null));
    }

    [Fact]
    public void Placement_left_out_makes_the_intervals_wrong()
    {
        // The same study without nuisance numbers must fail, or the one above would prove nothing.
        using var folder = new EndToEndTests.TempFolder();
        (SheetDevice device, MeasuredVoltages layout) = Flake(folder);
        var problem = new FitProblem(device, device.Fit!.Parameters, layout, layout.Data);
        double[] truth = problem.Start;
        var full = new FitModel(problem, FitDevices.Coarse(problem, truth, CoarseSize), new double[layout.Data.Count]);
        var linear = new Linear(truth, full.Values(truth, default)!, full.Jacobian(truth, default));
        int a = problem.Parameters.ToList().FindIndex(p => p.Key == "a"), covered = 0;
        var random = new Random(7);
        bool[] held = [.. problem.Parameters.Select(p => p.PriorSigma is not null)];
        for (int draw = 0; draw < Draws; draw++)
        {
            (double[] p, double[] noise) = Draw(problem, truth, random);
            double[] data = [.. linear.Values(p, default)!.Zip(noise, (v, e) => v + e)];
            FitTask task = FitRun.TaskOf(problem, false) with { Value = data, Held = held };
            FitEnd end = LeastSquares.Run(linear, task, truth, 20, default)!;
            double[,] jacobian = (double[,])end.Jacobian.Clone();
            for (int j = 0; j < held.Length; j++)
            {
                for (int i = 0; held[j] && i < data.Length; i++)
                {
                    jacobian[i, j] = 0;
                }
            }

            double[] scales = FitScales.Of(device, problem.Parameters, truth, data.Max(Math.Abs));
            double[,] covariance = Identifiability.Covariance(Identifiability.Of(problem.Parameters, jacobian, task.Sigma, end.Weights, scales, end.P), scales);
            covered += Math.Abs(end.P[a] - truth[a]) <= 1.959964 * Math.Sqrt(covariance[a, a]) ? 1 : 0;
        }

        Assert.True(covered < 0.85 * Draws, $"{covered}");
    }

    private static (FitEnd End, double[,] Covariance) Fit(FitProblem problem, IFitFunction model, double[] data, double[] truth)
    {
        FitTask task = FitRun.TaskOf(problem, false) with { Value = data };
        double[] start = [.. truth.Select((t, j) => problem.Parameters[j].Key switch { "a" or "b" => 1.02 * t, "axis" => t + 0.01, _ => t })];
        FitEnd end = LeastSquares.Run(model, task, start, 30, default)!;
        Assert.True(end.Converged);
        double[] scales = FitScales.Of(problem.DeviceAt(truth), problem.Parameters, end.P, data.Max(Math.Abs));
        return (end, Identifiability.Covariance(Identifiability.Of(problem.Parameters, end.Jacobian, task.Sigma, end.Weights, scales, end.P), scales));
    }

    private static (double[] P, double[] Noise) Draw(FitProblem problem, double[] truth, Random random) => (
        [.. truth.Select((t, j) => problem.Parameters[j].PriorSigma is { } s ? t + Normal.Sample(random, 0, s) : t)],
        [.. problem.Data.Select(d => Normal.Sample(random, 0, d.Sigma))]);

    // An outline of six uneven sides with a contact in the middle of each, read in every neighbouring pairing.
    private static (SheetDevice Device, MeasuredVoltages Layout) Flake(EndToEndTests.TempFolder folder)
    {
        string ring = string.Join(", ", Corners.Append(Corners[0]).Select(c => string.Create(CultureInfo.InvariantCulture, $"{c.X:R} {c.Y:R}")));
        folder.Write("flake.wkt", $"POLYGON (({ring}))");
        DeviceText text = DeviceText.Outline("flake.wkt", DeviceText.Ohmic(3e-3, 1.2e-3, 0, 25));
        for (int k = 0; k < 6; k++)
        {
            (_, double x1, double y1) = Corners[k];
            (_, double x2, double y2) = Corners[(k + 1) % 6];
            (double mx, double my) = ((x1 + x2) / 2, (y1 + y2) / 2);
            double length = Math.Sqrt(((x2 - x1) * (x2 - x1)) + ((y2 - y1) * (y2 - y1)));
            (double hx, double hy) = ((x2 - x1) / length * 0.3e-6, (y2 - y1) / length * 0.3e-6);
            text.Stretch($"k{k}", mx - hx, my - hy, mx + hx, my + hy);
        }

        SheetDevice device = FitDevices.Read(
            text.Wiring("w", "k0", "k1").Drive(1e-5),
            string.Create(CultureInfo.InvariantCulture, $"a = true\nb = true\naxis = true\ncontacts = {{ position = {{ sigma = \"{Placement:R} m\" }} }}"), folder.Path);
        var rows = new StringBuilder("source,drain,plus,minus,current_A,value_V,sigma_V\n");
        for (int k = 0; k < 6; k++)
        {
            string C(int n) => $"k{(k + n) % 6}";
            rows.Append(CultureInfo.InvariantCulture, $"{C(0)},{C(1)},{C(3)},{C(2)},1e-5,1e-3,{Noise:R}\n");
            rows.Append(CultureInfo.InvariantCulture, $"{C(0)},{C(1)},{C(5)},{C(4)},1e-5,1e-3,{Noise:R}\n");
            rows.Append(CultureInfo.InvariantCulture, $"{C(0)},{C(3)},{C(5)},{C(1)},1e-5,1e-3,{Noise:R}\n");
        }

        return (device, FitDevices.Table(device, rows.ToString()));
    }

    private sealed class Linear(double[] at, double[] values, double[,] jacobian) : IFitFunction
    {
        public double[]? Values(double[] p, CancellationToken cancel) =>
            [.. values.Select((v, i) => v + Enumerable.Range(0, p.Length).Sum(j => jacobian[i, j] * (p[j] - at[j])))];

        public double[,] Jacobian(double[] p, CancellationToken cancel) => jacobian;
    }
}
