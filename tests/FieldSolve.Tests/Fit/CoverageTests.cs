using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;
using MathNet.Numerics.Distributions;

namespace FieldSolve.Tests.FitTests;

/// <summary>
/// Made-up measurements on an irregular flake whose contacts sit a little off, with the placement as nuisance numbers under the lithography's prior. The 200 draws are fitted with
/// the model linearised at the truth (values and exact derivatives of the full one): noise and shifts are small, and three draws fitted in full say how good that is.
/// </summary>
public class CoverageTests
{
    private const int Draws = 200;
    private const double Placement = 60e-9, Noise = 4e-6;

    private static readonly (string Name, double X, double Y)[] Corners =
        [("", -4e-6, -2.2e-6), ("", 1e-6, -3e-6), ("", 4.4e-6, -1e-6), ("", 3.2e-6, 2.4e-6), ("", -0.6e-6, 3.1e-6), ("", -3.6e-6, 1.4e-6)];

    [Fact]
    public void Intervals_cover_the_truth_as_often_as_they_say()
    {
        using var folder = new EndToEndTests.TempFolder();
        (SheetDevice device, MeasuredVoltages layout) = Flake(folder);
        var problem = new FitProblem(device, device.Fit!.Parameters, layout, layout.Data);
        double[] truth = problem.Start;
        FitReference reference = FitReference.Refine(problem, truth, 0.5, _ => { }, new StageClock(), default);
        var full = new FitModel(problem, reference.Meshes.Coarse, new double[layout.Data.Count]);
        double[] values = full.Values(truth, default)!;
        var linear = new Linear(truth, values, full.Jacobian(truth, default));
        string[] wanted = ["a", "b", "axis"];
        int[] at = [.. wanted.Select(k => problem.Parameters.ToList().FindIndex(p => p.Key == k))];
        int[] covered = new int[3];
        double[] bias = new double[3];
        var random = new Random(20261201);
        for (int draw = 0; draw < Draws; draw++)
        {
            (double[] p, double[] noise) = Draw(problem, truth, random);

            // The mirrored draw takes the chance part out of the bias and leaves what the method does.
            for (int sign = 1; sign >= -1; sign -= 2)
            {
                double[] there = [.. truth.Zip(p, (t, q) => t + (sign * (q - t)))];
                double[] data = [.. linear.Values(there, default)!.Zip(noise, (v, e) => v + (sign * e))];
                (FitEnd end, double[,] covariance) = Fit(problem, linear, data, truth);
                for (int k = 0; k < 3; k++)
                {
                    double error = Math.Sqrt(covariance[at[k], at[k]]), off = (end.P[at[k]] - truth[at[k]]) / error;
                    covered[k] += sign == 1 && Math.Abs(off) <= 1.959964 ? 1 : 0;
                    bias[k] += off / (2 * Draws);
                }
            }

            // In full, with shifted contacts on a moved mesh.
            if (draw < 3)
            {
                double[] data = [.. full.Values(p, default)!.Zip(noise, (v, e) => v + e)];
                (FitEnd exact, double[,] covariance) = Fit(problem, full, data, truth);
                (FitEnd near, _) = Fit(problem, linear, data, truth);
                Assert.All(at, k => Assert.True(Math.Abs(exact.P[k] - near.P[k]) < 0.35 * Math.Sqrt(covariance[k, k]), $"{(exact.P[k] - near.P[k]) / Math.Sqrt(covariance[k, k])}"));
            }
        }

        for (int k = 0; k < 3; k++)
        {
            Assert.InRange(100.0 * covered[k] / Draws, 91, 98);
            Assert.InRange(bias[k], -0.1, 0.1);
        }
    }

    [Fact]
    public void Placement_left_out_makes_the_intervals_wrong()
    {
        // The same study without nuisance numbers must fail, or the one above would prove nothing.
        using var folder = new EndToEndTests.TempFolder();
        (SheetDevice device, MeasuredVoltages layout) = Flake(folder);
        var problem = new FitProblem(device, device.Fit!.Parameters, layout, layout.Data);
        double[] truth = problem.Start;
        FitReference reference = FitReference.Refine(problem, truth, 1, _ => { }, new StageClock(), default);
        var full = new FitModel(problem, reference.Meshes.Coarse, new double[layout.Data.Count]);
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
        double[] start = [.. truth.Select((t, j) => problem.Parameters[j].Key switch { "a" or "b" => 1.1 * t, "axis" => t + 0.05, _ => t })];
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
