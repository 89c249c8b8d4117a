using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;
using MathNet.Numerics.Distributions;

namespace FieldSolve.Tests.FitTests;

public class OutlierTests
{
    [Fact]
    public void Robust_fit_keeps_its_answer_with_five_per_cent_of_gross_outliers()
    {
        SheetDevice truth = FitDevices.Read(FitDevices.SixArms(DeviceText.Ohmic(4e-3, 1.5e-3, 1e-4, 20)), "a = true");
        SheetDevice device = FitDevices.Read(FitDevices.SixArms(DeviceText.Ohmic(3e-3, 2e-3, 0, 10)), "a = true\nb = true\nhall = true\naxis = true");
        (string clean, string dirty) = Tables(truth, 3);
        FitResult good = FitDevices.Fit(device, FitDevices.Table(device, clean));
        FitResult plain = FitDevices.Fit(device, FitDevices.Table(device, dirty));
        FitResult robust = FitDevices.Fit(device, FitDevices.Table(device, dirty), new FitOptions { Robust = true, Starts = 1 });
        double Off(FitResult r, int j) => Math.Abs(r.Parameters[j].Value!.Value - good.Parameters[j].Value!.Value) / good.Parameters[j].StandardError!.Value;
        Assert.All(Enumerable.Range(0, 4), j => Assert.True(Off(robust, j) < 1, $"{robust.Parameters[j].Parameter.Key}: {Off(robust, j)}"));
        Assert.True(Enumerable.Range(0, 4).Max(j => Off(plain, j)) > 1, "the outliers did no harm, nothing was tested");
        Assert.Contains(plain.Warnings, w => w.Contains("--robust", StringComparison.Ordinal));
        Assert.True(good.Quality.Probability > 0.001);

        // The truth lies where it should, of both, and the robust errors are a little wider than the plain ones, not narrower.
        foreach ((string key, double truly) in new[] { ("a", 4e-3), ("b", 1.5e-3), ("hall", 1e-4), ("axis", 20 * Math.PI / 180) })
        {
            foreach (FittedParameter p in new[] { good.Of(key), robust.Of(key) })
            {
                Assert.Equal(truly, p.Value!.Value, 3 * p.StandardError!.Value);
                Assert.True(p.StandardError < 0.1 * truly, $"{key}: {p.StandardError}");
            }
        }

        Assert.True(robust.Of("a").StandardError > good.Of("a").StandardError);
    }

    [Fact]
    public void Profile_intervals_of_a_nearly_linear_number_agree_with_its_standard_error()
    {
        SheetDevice truth = FitDevices.Read(FitDevices.SixArms(DeviceText.Ohmic(4e-3, 1.5e-3, 1e-4, 20)), "a = true");
        SheetDevice device = FitDevices.Read(FitDevices.SixArms(DeviceText.Ohmic(3.9e-3, 1.6e-3, 1e-4, 20)), "a = { interval = true }\nb = true");
        FitResult result = FitDevices.Fit(device, FitDevices.Table(device, Tables(truth, 5).Clean));
        FittedParameter a = result.Of("a");
        (double? low, double? high) = a.Interval!.Value;
        double half = 1.959964 * a.StandardError!.Value;
        Assert.Equal(a.Value!.Value - half, low!.Value, 0.05 * half);
        Assert.Equal(a.Value!.Value + half, high!.Value, 0.05 * half);
        Assert.Null(result.Of("b").Interval);
    }

    // Three data and two numbers leave residuals far below the noise; the stated sigmas stand all the same.
    [Fact]
    public void Robust_errors_of_few_data_are_no_smaller_than_the_stated_noise_makes_them()
    {
        SheetDevice truth = FitDevices.Read(FitDevices.SixArms(DeviceText.Ohmic(4e-3, 1.5e-3, 1e-4, 20)), "a = true");
        SheetDevice device = FitDevices.Read(FitDevices.SixArms(DeviceText.Ohmic(4.2e-3, 1.6e-3, 1e-4, 20)), "a = true\nb = true");
        Measured.MeasuredVoltages data = FitDevices.Measure(
            truth, FitDevices.Table(truth, "wiring,pair,current_A,value_V,sigma_V\n0 deg,along,1e-4,0,1e-6\n60 deg,along,1e-4,0,1e-6\n120 deg,along,1e-4,0,1e-6\n"), 4);
        FitResult plain = FitDevices.Fit(device, data), robust = FitDevices.Fit(device, data, new FitOptions { Robust = true, Starts = 1 });
        foreach (string key in new[] { "a", "b" })
        {
            Assert.True(robust.Of(key).StandardError > 0.9 * plain.Of(key).StandardError, $"{key}: {robust.Of(key).StandardError} beside {plain.Of(key).StandardError}");
        }
    }

    // An AC drive beside a DC current: of a resistance R the DC part is R I_dc and no second order.
    [Fact]
    public void The_formulas_know_the_direct_current_beside_a_harmonic()
    {
        const double Offset = 5e-5, Rms = 2e-5;
        DeviceText text = FitDevices.SixArms(DeviceText.Law("quadratic", 4e-3, 1.5e-3, 20, ("d11", 1e-10, "A m/V^2"), ("field_limit", 4e5, "V/m")));
        SheetDevice device = FitDevices.Read(text, "a = true\nb = true\nd11 = true");
        device = device with { Drive = new DriveSpec(Rms, Rms, 1, true, [], Offset) };
        var rows = new StringBuilder("wiring,pair,current_rms_A,harmonic,value_V,sigma_V\n");
        foreach ((string wiring, double ohm) in new[] { ("0 deg", 80.0), ("60 deg", 130), ("120 deg", 110) })
        {
            rows.Append(CultureInfo.InvariantCulture, $"{wiring},along,{Rms:R},0,{ohm * Offset:R},1e-8\n{wiring},along,{Rms:R},1,{ohm * Rms:R},1e-8\n");
        }

        IReadOnlyList<FormulaValue> formulas = FormulaEstimate.Of(
            device, FitDevices.Table(device, rows.ToString()), [.. device.Fit!.Parameters.Select(p => new FittedParameter(p, p.Start, 1, null, false) { Ended = p.Start })]);
        FormulaValue second = formulas.Single(f => f.Key == "d11");

        // A slip by R I_dc/I² in the second order would make it some 1e-8 A m/V².
        Assert.Equal(0, second.Value, 1e-14);
        Assert.True(formulas.Single(f => f.Key == "a").Value > 0);
    }

    // Voltages of the truth at ten currents with noise, and the same with every twentieth row spoilt.
    private static (string Clean, string Dirty) Tables(SheetDevice truth, int seed)
    {
        var layout = new StringBuilder("wiring,pair,current_A,value_V,sigma_V\n");
        var rows = new List<(string Wiring, string Pair, double Current)>();
        foreach (string wiring in truth.Wirings.Select(w => w.Name))
        {
            foreach (string pair in new[] { "along", "across" })
            {
                for (int k = 1; k <= 10; k++)
                {
                    rows.Add((wiring, pair, k * 1e-5));
                    layout.Append(CultureInfo.InvariantCulture, $"{wiring},{pair},{k * 1e-5:R},0,1e-6\n");
                }
            }
        }

        Measured.MeasuredVoltages bare = FitDevices.Table(truth, layout.ToString());
        var problem = new FitProblem(truth, truth.Fit!.Parameters, bare, bare.Data);
        FitReference reference = FitReference.Refine(problem, problem.Start, 0.1, _ => { }, new StageClock(), default);
        double[] values = new FitModel(problem, reference.Meshes.Coarse, reference.Missing).Values(problem.Start, default)!;
        var random = new Random(seed);
        StringBuilder clean = new("wiring,pair,current_A,value_V,sigma_V\n"), dirty = new("wiring,pair,current_A,value_V,sigma_V\n");
        for (int i = 0; i < rows.Count; i++)
        {
            double value = values[i] + Normal.Sample(random, 0, 1e-6), spoilt = i % 20 == 9 ? value + 5e-5 : value;
            clean.Append(CultureInfo.InvariantCulture, $"{rows[i].Wiring},{rows[i].Pair},{rows[i].Current:R},{value:R},1e-6\n");
            dirty.Append(CultureInfo.InvariantCulture, $"{rows[i].Wiring},{rows[i].Pair},{rows[i].Current:R},{spoilt:R},1e-6\n");
        }

        return (clean.ToString(), dirty.ToString());
    }
}
