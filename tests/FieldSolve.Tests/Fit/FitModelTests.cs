using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FitTests;

public class FitModelTests
{
    private const double F = 3e5;

    private static string Quadratic(double a, double b, double axis, double d12, double d26) => DeviceText.Law(
        "quadratic", a, b, axis, ("hall", 1e-4, "S"), ("d12", d12, "A m/V^2"), ("d26", d26, "A m/V^2"), ("field_limit", F, "V/m"));

    // Exact derivatives of the discrete equations against central differences of full solves on the moved mesh.
    [Fact]
    public void Derivatives_agree_with_differences_for_every_kind_of_number()
    {
        DeviceText text = FitDevices.SixArms(Quadratic(4e-3, 1e-3, 17, 4e-10, 2e-10));
        text.Contact("p", "pad = [[\"-1 um\", \"-1 um\"], [\"0 um\", \"-1 um\"], [\"0 um\", \"0 um\"], [\"-1 um\", \"0 um\"]]\nresistivity = \"1e-10 ohm m^2\"");
        SheetDevice device = FitDevices.Read(
            text, "a = true\nhall = true\naxis = true\nd12 = true\ngrowth = { sigma = \"50 nm\" }\n[[fit.contact]]\nname = \"c2\"\nposition = { sigma = \"50 nm\", start = \"20 nm\" }\n[[fit.contact]]\nname = \"p\"\nresistivity = true\n");
        MeasuredVoltages data = FitDevices.Table(
            device, "wiring,pair,current_A,current_rms_A,harmonic,value_V,sigma_V\n0 deg,along,1e-4,,,0.01,1e-6\n60 deg,across,-1e-4,,,0.01,1e-6\n120 deg,source,5e-5,,,0.01,1e-6\n60 deg,across,,5e-5,2,1e-4,1e-6\n60 deg,along,,5e-5,1,1e-3,1e-6\n");
        var problem = new FitProblem(device, device.Fit!.Parameters, data, data.Data);
        double[] p = problem.Start;
        FitReference reference = FitReference.Refine(problem, p, 1, _ => { }, new StageClock(), default);
        var model = new FitModel(problem, reference.Meshes.Coarse, new double[data.Data.Count]);
        double[] values = model.Values(p, default)!;
        double[,] jacobian = model.Jacobian(p, default);
        for (int j = 0; j < p.Length; j++)
        {
            double step = problem.Parameters[j].IsPositive ? 1e-3 * p[j] : problem.Parameters[j].Key switch { "axis" => 1e-3, "d12" => 1e-12, "hall" => 1e-6, _ => 2e-9 };
            double[] At(double by)
            {
                double[] q = [.. p];
                q[j] += by;
                return model.Values(q, default)!;
            }

            double[] up = At(step), down = At(-step);
            for (int i = 0; i < values.Length; i++)
            {
                double difference = (up[i] - down[i]) / (2 * step), size = Math.Abs(values[i]) / (problem.Parameters[j].IsPositive ? p[j] : step * 1e3);
                Assert.True(
                    Math.Abs(difference - jacobian[i, j]) <= (2e-4 * Math.Abs(difference)) + (2e-5 * size),
                    $"{problem.Parameters[j].Key}, datum {i}: {jacobian[i, j]:R}, difference {difference:R}");
            }
        }
    }

    // A bar driven through full ends carries a uniform field, so K(E) = I/width is solved by hand: a E + d11 E² = K. Harmonics of E(I(t)) by a sum over 4096 phases of
    // I(t) = sqrt(2) I sin(wt): RMS along sin for odd and along cos for even harmonics, as a lock-in amplifier reads them.
    [Fact]
    public void Harmonics_of_a_uniform_strip_give_back_its_law()
    {
        const double a = 1e-3, d = 2e-9, width = 6e-6, length = 10e-6;
        double Voltage(double current)
        {
            double k = current / width;
            return length * 2 * k / (a + Math.Sqrt((a * a) + (4 * d * k)));
        }

        double Harmonic(double rms, int n)
        {
            const int phases = 4096;
            double sum = 0;
            for (int k = 0; k < phases; k++)
            {
                double t = 2 * Math.PI * k / phases, v = Voltage(Math.Sqrt(2) * rms * Math.Sin(t));
                sum += v * (n % 2 == 1 ? Math.Sin(n * t) : Math.Cos(n * t));
            }

            return n == 0 ? sum / phases : Math.Sqrt(2) * sum / phases;
        }

        DeviceText text = DeviceText.Bar(30e-6, width, DeviceText.Law("quadratic", 1.5e-3, 2e-3, 0, ("d11", 0, "A m/V^2"), ("field_limit", 1e9, "V/m")))
            .Whole("l", "end", "left").Whole("r", "end", "right").Tip("p", -length / 2, 1e-6).Tip("q", length / 2, 1e-6).Wiring("x", "l", "r", "p q").Drive(1e-5);
        SheetDevice device = FitDevices.Read(text, "a = true\nd11 = true");
        var rows = new StringBuilder("wiring,pair,current_rms_A,harmonic,value_V,sigma_V\n");
        foreach (double rms in new[] { 1e-4, 2e-4 })
        {
            foreach (int n in new[] { 0, 1, 2, 3 })
            {
                rows.Append(CultureInfo.InvariantCulture, $"x,along,{rms:R},{n},{Harmonic(rms, n):R},1e-8\n");
            }
        }

        FitResult result = FitDevices.Fit(device, FitDevices.Table(device, rows.ToString()));
        Assert.True(result.AllOk);
        Assert.Equal(a, result.Of("a").Value!.Value, 1e-6 * a);
        Assert.Equal(d, result.Of("d11").Value!.Value, 1e-4 * d);
        Assert.True(result.Quality.ChiSquared < 0.1, $"{result.Quality.ChiSquared}");

        // V = R1 I - |R2| I² for d11 > 0, and sin² = (1 - cos 2wt)/2: the second harmonic lies along +cos.
        Assert.True(Harmonic(2e-4, 2) > 0);
    }

    [Fact]
    public void Many_currents_of_one_circuit_are_interpolated_and_the_error_is_known()
    {
        SheetDevice device = FitDevices.Read(FitDevices.SixArms(Quadratic(4e-3, 1e-3, 17, 4e-10, 2e-10)), "a = true");
        var rows = new StringBuilder("wiring,pair,current_A,value_V,sigma_V\n");
        for (int k = -10; k <= 10; k++)
        {
            rows.Append(CultureInfo.InvariantCulture, $"60 deg,across,{k * 1e-5:R},0.001,1e-6\n");
        }

        MeasuredVoltages data = FitDevices.Table(device, rows.ToString());
        var few = new FitProblem(device, device.Fit!.Parameters, data, data.Data);
        var all = new FitProblem(device, device.Fit.Parameters, data, data.Data, FitProblem.MostNodes);
        Assert.Equal((8, 20), (few.States.Count, all.States.Count));
        FitReference reference = FitReference.Refine(few, few.Start, 1, _ => { }, new StageClock(), default);
        var model = new FitModel(few, reference.Meshes.Coarse, new double[21]);
        var direct = new FitModel(all, reference.Meshes.Coarse, new double[21]);
        double[] between = model.Values(few.Start, default)!, exact = direct.Values(few.Start, default)!;
        double[,] slopes = model.Jacobian(few.Start, default), exactSlopes = direct.Jacobian(few.Start, default);
        double[] stated = few.InterpolationErrors(model.ReadingsAt(few.Start, default));
        double largest = exact.Max(Math.Abs);
        for (int i = 0; i < 21; i++)
        {
            Assert.Equal(exactSlopes[i, 0], slopes[i, 0], 1e-4 * Math.Abs(exactSlopes[20, 0]));
            Assert.True(Math.Abs(between[i] - exact[i]) <= stated[i] + (1e-10 * largest), $"{i}: {between[i] - exact[i]}, stated {stated[i]}");
        }

        Assert.True(stated.Max() < 1e-6 * largest);
        Assert.True(exact[20] + exact[0] != 0, "no even part, nothing was tested");
    }
}
