using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Solving;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FitTests;

public class FitModelTests
{
    private const double F = 3e5;

    private static string Quadratic(double a, double b, double axis, double d12, double d26) => DeviceText.Law(
        "quadratic", a, b, axis, ("hall", 1e-4, "S"), ("d12", d12, "A m/V^2"), ("d26", d26, "A m/V^2"), ("field_limit", F, "V/m"));

    private const string CubicLaw = "[law]\nkind = \"cubic\"\naxis = \"17 deg\"\na = \"4 mS\"\nb = \"1 mS\"\nhall = \"0.1 mS\"\nd11 = \"1e-10 A m/V^2\"\nd12 = \"4e-10 A m/V^2\"\nd26 = \"2e-10 A m/V^2\"\n"
        + "c11 = \"1e-15 A m^2/V^3\"\nfield_limit = \"300 kV/m\"\n";

    // Exact derivatives of the discrete equations against central differences of full solves on the moved mesh: every number of a law, the axis, and every kind of number
    // that a contact can have. (The saturating law stands in SensitivityTests, between resistive contacts: where a field
    // reaches a law's guard, that begins elsewhere for other a and b, which a derivative leaves out.)
    [Fact]
    public void Derivatives_agree_with_differences_for_every_kind_of_number()
    {
        const string law = CubicLaw, keys = "a b hall axis d11 d12 d16 d21 d22 d26 c11 c12 c21 c22 field_limit growth";
        const double current = 1e-4;
        DeviceText text = FitDevices.SixArms(law);
        text.Contact("p", "pad = [[\"-1 um\", \"-1 um\"], [\"0 um\", \"-1 um\"], [\"0 um\", \"0 um\"], [\"-1 um\", \"0 um\"]]\nresistivity = \"1e-10 ohm m^2\"")
            .Contact("r", "edge = { at = \"30 deg\", width = \"0.6 um\" }\nresistance = \"200 ohm um\"");
        SheetDevice device = FitDevices.Read(
            text,
            string.Join('\n', keys.Split(' ').Select(k => k + " = true")) + "\n[[fit.contact]]\nname = \"c2\"\nposition = { sigma = \"50 nm\", start = \"20 nm\" }\nwidth = true\n"
            + "[[fit.contact]]\nname = \"p\"\nresistivity = true\nx = true\ny = true\nrotation = true\ngrowth = true\n[[fit.contact]]\nname = \"r\"\nresistance = true\n");
        MeasuredVoltages data = FitDevices.Table(
            device,
            string.Create(
                CultureInfo.InvariantCulture,
                $"wiring,pair,current_A,current_rms_A,harmonic,value_V,sigma_V\n0 deg,along,{3 * current:R},,,0.01,1e-6\n60 deg,across,{-3 * current:R},,,0.01,1e-6\n120 deg,source,{current:R},,,0.01,1e-6\n60 deg,along,,{2 * current:R},3,1e-4,1e-6\n60 deg,across,,{2 * current:R},1,1e-3,1e-6\n"));
        var problem = new FitProblem(device, device.Fit!.Parameters, data, data.Data);
        double[] p = problem.Start;
        var model = new FitModel(problem, FitDevices.Coarse(problem, p), new double[data.Data.Count]);
        double[] values = model.Values(p, default)!;
        double[,] jacobian = model.Jacobian(p, default);
        double[] scales = FitScales.Of(device, problem.Parameters, p, values.Max(Math.Abs));
        for (int j = 0; j < p.Length; j++)
        {
            // Small enough that no law needs its guard anew: where that begins is held fixed in a derivative.
            double step = (problem.Parameters[j].Kind is LawCause && !problem.Parameters[j].IsPositive ? 1e-5 : 1e-3) * scales[j];
            double[] At(double by)
            {
                double[] q = [.. p];
                q[j] += by;
                return model.Values(q, default)!;
            }

            double[] up = At(step), down = At(-step), up2 = At(2 * step), down2 = At(-2 * step);
            double largest = Enumerable.Range(0, values.Length).Max(i => Math.Abs(jacobian[i, j] * scales[j] / values[i]));
            Assert.True(largest > 1e-5, $"{problem.Parameters[j].Key} does nothing: {largest}");
            for (int i = 0; i < values.Length; i++)
            {
                double difference = ((8 * (up[i] - down[i])) - (up2[i] - down2[i])) / (12 * step);
                Assert.True(
                    Math.Abs(difference - jacobian[i, j]) <= (1e-5 * Math.Abs(difference)) + (1e-6 * Math.Abs(values[0]) / scales[j]),
                    $"{problem.Parameters[j].Key}, datum {i}: {jacobian[i, j]:R}, difference {difference:R}");
            }
        }
    }

    // A pad whose side lies on the sheet's edge, moved either way: then metal ends before the edge, or not. Nothing there has a derivative.
    [Fact]
    public void A_number_without_a_derivative_is_refused_by_its_place()
    {
        DeviceText text = DeviceText.Bar(10e-6, 6e-6, DeviceText.Ohmic(1e-3, 1e-3)).Pad("l", -5e-6, -1e-6, -4e-6, 1e-6).Pad("r", 3e-6, -1e-6, 4e-6, 1e-6)
            .Tip("p", -2e-6, 1e-6).Tip("q", 2e-6, 1e-6).Wiring("x", "l", "r", "p q").Drive(1e-5);
        SheetDevice Device(string contact, string how) => FitDevices.Read(text, $"a = true\n[[fit.contact]]\nname = \"{contact}\"\nx = {how}");
        const string rows = "wiring,pair,current_A,value_V,sigma_V\nx,along,1e-5,0.01,1e-4\nx,source,1e-5,0.02,1e-4\n";
        SheetDevice bad = Device("l", "{ sigma = \"50 nm\" }");
        FitException e = Assert.Throws<FitException>(() => FitDevices.Fit(bad, FitDevices.Table(bad, rows)));
        Assert.Contains("'x': contact 'l' cannot be free at 0 m", e.Message, StringComparison.Ordinal);
        string[] lines = $"{text}\n[fit]\na = true\n[[fit.contact]]\nname = \"l\"\nx = true".ReplaceLineEndings("\n").Split('\n');
        Assert.Equal((Array.FindLastIndex(lines, l => l.StartsWith("x = ", StringComparison.Ordinal)) + 1, 1), (e.Line, e.Column));

        // Clear of the edge it can be free.
        SheetDevice good = Device("r", "{ sigma = \"50 nm\" }");
        Assert.NotNull(FitDevices.Fit(good, FitDevices.Table(good, rows)).Of("r.x").Value);
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
        FieldLevel level = FitDevices.Coarse(few, few.Start);
        FitModel model = new(few, level, new double[21]), direct = new(all, level, new double[21]);
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

    // A first mesh that nothing was compared with: its bars trust the corrections to their sign alone, and measuring the same mesh again makes nothing better known.
    [Fact]
    public void Bars_of_a_moved_mesh_trust_its_corrections_no_more_than_those_before()
    {
        SheetDevice device = FitDevices.Read(FitDevices.SixArms(DeviceText.Ohmic(4e-3, 1.5e-3, 1e-4, 20)), "a = true");
        MeasuredVoltages data = FitDevices.Table(device, "wiring,pair,current_A,value_V,sigma_V\n0 deg,along,1e-4,5e-3,1e-4\n60 deg,across,1e-4,5e-3,1e-4\n");
        var problem = new FitProblem(device, device.Fit!.Parameters, data, data.Data);
        FitReference first = FitReference.Refine(problem, problem.Start, 0.2, _ => { }, new StageClock(), default);
        FitReference again = first.Again(problem.Start, first.Meshes.Coarse.Space.Mesh, 0.2, default);
        Assert.All(first.Bars.Zip(again.Bars), bars => Assert.Equal(1, bars.Second / bars.First, 1e-6));
    }
}
