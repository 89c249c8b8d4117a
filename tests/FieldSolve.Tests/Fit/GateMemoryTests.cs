using System.Globalization;
using System.Numerics;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Lockin;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FitTests;

/// <summary>Lock-in data of a sheet over a gate.</summary>
public class GateMemoryTests
{
    private const double A = 3e-7, C = 1.2e-4, Length = 30e-6, Width = 6e-6, Frequency = 200e3;

    private static SheetDevice Bar(string frequency)
    {
        DeviceText text = DeviceText.Bar(Length, Width, DeviceText.Ohmic(2e-7, 3e-7)).Whole("l", "end", "left").Whole("r", "end", "right")
            .Tip("p", -8e-6, 1e-6).Tip("q", 5e-6, 1e-6).Wiring("x", "l", "r", "p q");
        return FitDevices.Read(
            text, "a = true\n[drive]\ncurrent = { from = \"1 nA\", to = \"1 nA\", steps = 1 }\n" + frequency) with
        { GateCapacitance = C };
    }

    // A strip between full ends over a gate is a line of distributed resistance and capacitance (as in any text on transmission lines): sigma V'' = i w c V, the current I enters
    // at x = 0 and V(L) = 0, so V(x) = I sinh(k (L - x))/(sigma W k cosh(k L)), k² = i w c/sigma. With I(t) along sin the part along sin is the real one.
    private static double Along(double current)
    {
        Complex k = Complex.Sqrt(new Complex(0, 2 * Math.PI * Frequency * C / A));
        Complex At(double x) => current * Complex.Sinh(k * (Length - x)) / (A * Width * k * Complex.Cosh(k * Length));
        return (At((Length / 2) - 8e-6) - At((Length / 2) + 5e-6)).Real;
    }

    [Fact]
    public void A_strip_over_a_gate_gives_back_its_conductance()
    {
        SheetDevice device = Bar("frequency = \"200 kHz\"");
        const double current = 1e-9;
        double value = Along(current), still = current * 13e-6 / (A * Width);
        MeasuredVoltages data = FitDevices.Table(
            device, string.Create(CultureInfo.InvariantCulture, $"wiring,pair,current_rms_A,harmonic,value_V,sigma_V\nx,along,{current:R},1,{value:R},{1e-4 * value:R}\n"));
        FitResult result = FitDevices.Fit(device, data, new FitOptions { Starts = 1, Memory = new GateMemory() });
        Assert.True(result.AllOk, string.Join(' ', result.Warnings));
        Assert.Equal(A, result.Of("a").Value!.Value, 1e-4 * A);

        // Without the gate the answer would be as far off as the voltage is.
        Assert.True(Math.Abs((still / value) - 1) > 0.02, $"{still / value}");
    }

    [Theory]
    [InlineData("", "names none; give the one of the data")]
    [InlineData("frequency = [\"10 Hz\", \"20 Hz\"]", "names several; give the one of the data")]
    public void The_frequency_must_be_known(string frequency, string expected)
    {
        SheetDevice device = Bar(frequency);
        MeasuredVoltages data = FitDevices.Table(device, "wiring,pair,current_rms_A,harmonic,value_V,sigma_V\nx,along,1e-9,1,1e-2,1e-5\n");
        FitException e = Assert.Throws<FitException>(() => FitDevices.Fit(device, data, new FitOptions { Starts = 1, Memory = new GateMemory() }));
        Assert.Contains(expected, e.Message, StringComparison.Ordinal);
        Assert.Equal(device.Drive!.At, (e.Line, e.Column));

        // A caller who brings nothing that knows the gate is told so; direct currents do not need it.
        Assert.Throws<FitException>(() => FitDevices.Fit(device, data));
        Assert.True(FitDevices.Fit(device, FitDevices.Table(device, "wiring,pair,current_A,value_V,sigma_V\nx,along,1e-9,1e-2,1e-5\n")).AllOk);
    }

    // Second harmonic and all: what the AC run itself reads on a mesh of its own is what the fit says of the same law.
    [Fact]
    public void Harmonics_of_a_bent_law_over_a_gate_agree_with_the_ac_run()
    {
        static DeviceText Text(double a, double d) => DeviceText.Bar(30e-6, 6e-6, DeviceText.Law("quadratic", a, 2e-6, 0, ("d11", d, "A m/V^2"), ("field_limit", 3e4, "V/m")))
            .Whole("l", "end", "left").Whole("r", "end", "right").Tip("p", -8e-6, 1e-6).Tip("q", 5e-6, 1e-6).Wiring("x", "l", "r", "p q");
        const string drive = "[drive]\ncurrent = { from = \"5 nA\", to = \"5 nA\", steps = 1 }\nfrequency = \"3 MHz\"\n";
        SheetDevice truth = FitDevices.Read(Text(3e-6, 4e-10), "a = true\n" + drive) with { GateCapacitance = C };
        LockinPoint point = LockinRun.Execute(truth, new LockinOptions { Frames = false }, null, default).Points[0];
        double first = point.Of("along", 1)!.X, second = point.Of("along", 2)!.Y;
        SheetDevice device = FitDevices.Read(Text(2.5e-6, 2e-10), "a = true\nd11 = true\n" + drive) with { GateCapacitance = C };
        var rows = new StringBuilder("wiring,pair,current_rms_A,harmonic,value_V,sigma_V\n")
            .Append(CultureInfo.InvariantCulture, $"x,along,5e-9,1,{first:R},{1e-4 * first:R}\nx,along,5e-9,2,{second:R},{Math.Abs(1e-3 * second):R}\n");
        FitResult result = FitDevices.Fit(device, FitDevices.Table(device, rows.ToString()), new FitOptions { Starts = 1, Memory = new GateMemory() });
        Assert.True(result.AllOk, string.Join(' ', result.Warnings));
        Assert.Equal(3e-6, result.Of("a").Value!.Value, 1e-4 * 3e-6);
        Assert.Equal(4e-10, result.Of("d11").Value!.Value, 2e-3 * 4e-10);
    }
}
