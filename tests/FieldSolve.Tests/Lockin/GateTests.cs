using System.Globalization;
using System.Numerics;
using FieldSolve.Lockin;

namespace FieldSolve.Tests.LockinTests;

/// <summary>
/// A bar over a gate against the exact solution of the RC line: with r = 1/(s W) and c' = c W per length, driven current at one end and 0 V at the
/// other, phi(x) = I r/k sinh(kx)/cosh(kl) with k = sqrt(i w r c'). Derived from the telegraph equation without inductance.
/// </summary>
public class GateTests
{
    private const double S = 1e-6, C = 1.2e-4, L = AcDevices.Length, W = AcDevices.Width;
    private const string Gate = "gate_capacitance = \"12 nF/cm^2\"";
    private const string Ohmic = """
        kind = "ohmic"
        a = "1 uS"
        b = "1 uS"
        """;

    private static Complex Kappa(double f, int harmonic = 1) => Complex.Sqrt(Complex.ImaginaryOne * 2 * Math.PI * f * harmonic * C / S);

    [Fact]
    public void First_harmonic_of_an_rc_line()
    {
        double[] frequencies = [10, 40e3, 1.5e6, 15e6];
        LockinResult result = AcDevices.Run(AcDevices.Bar(Ohmic, "{ from = \"2 nA\", to = \"2 nA\", steps = 1 }", Frequencies(frequencies), Gate));
        foreach (LockinPoint p in result.Points)
        {
            Complex k = Kappa(p.Frequency!.Value), end = 2e-9 / (S * W) / k * Complex.Tanh(k * L);
            Complex middle = 2e-9 / (S * W) / k * Complex.Sinh(k * L / 2) / Complex.Cosh(k * L);
            Near(end, p.Of("source", 1)!, 1e-6);
            Near(middle, p.Of("along", 1)!, 1e-5);
            Assert.All(p.Readings.Where(r => r.Harmonic != 1), r => Assert.True(r.R <= r.Error));
        }

        // To first order Z = rl (1 - i w r c' l²/3): the shift reaches 1 % at w = 0.03/(r c' l²).
        Assert.Equal(1, result.Limits.Single(l => l.Pair == "source" && l.Harmonic == 1).Frequency / (0.03 * S / (2 * Math.PI * C * L * L)), 1e-4);
    }

    [Fact]
    public void A_contact_resistance_adds_to_the_line_and_carries_no_charge()
    {
        // The whole driven current crosses the source's contact, whose metal has no capacitance: Z gains 60 ohm m / W.
        LockinResult result = AcDevices.Run(AcDevices.Bar(
            Ohmic, "{ from = \"2 nA\", to = \"2 nA\", steps = 1 }", Frequencies(3e6), Gate, "resistance = \"60 ohm m\""));
        Complex k = Kappa(3e6);
        Near(2e-9 * ((60 / W) + (Complex.Tanh(k * L) / (S * W) / k)), result.Points.Single().Of("source", 1)!, 1e-5);
    }

    // Second order in the field on top of the linear line. With the linear response psi of the end to a current fed in at x, the quadratic part d E² of the
    // current gives phi_2(l) = integral of psi' (d E1²) dx at each frequency: at 2w, E1² = -Re(g² e^(2iwt))/2 x A², at 0, |g|²/2 x A², g = cosh(kx)/(s W cosh(kl)).
    [Theory]
    [InlineData(2e5)]
    [InlineData(1.5e6)]
    public void Second_harmonic_of_a_slightly_quadratic_line(double frequency)
    {
        const double D = 2e-11, Rms = 2e-9, Peak2 = 2 * Rms * Rms;
        LockinResult result = AcDevices.Run(AcDevices.Bar(
            """
            kind = "quadratic"
            a = "1 uS"
            b = "1 uS"
            d11 = "2e-11 A m/V^2"
            """, "{ from = \"2 nA\", to = \"2 nA\", steps = 1 }", Frequencies(frequency), Gate));
        Complex k1 = Kappa(frequency), k2 = Kappa(frequency, 2), q = 0;
        double mean = 0;
        const int Steps = 2000;
        for (int j = 0; j <= Steps; j++)
        {
            double x = L * j / Steps, weight = L / Steps / 3 * (j is 0 or Steps ? 1 : j % 2 == 1 ? 4 : 2);
            Complex g = Complex.Cosh(k1 * x) / (S * W * Complex.Cosh(k1 * L));
            q += weight * g * g * Complex.Cosh(k2 * x) / (S * Complex.Cosh(k2 * L));
            mean += weight * g.Magnitude * g.Magnitude / S;
        }

        LockinPoint p = result.Points.Single();
        double scale = D * Peak2 / 2;
        HarmonicReading second = p.Of("source", 2)!, dc = p.Of("source", 0)!;

        // phi_2 is negative times E's sign: the field points to -x, so d E² adds to the current and lifts the source.
        Assert.Equal(1, dc.X / (scale * mean), 2e-3);
        double sine = scale * q.Imaginary / Math.Sqrt(2), cosine = -scale * q.Real / Math.Sqrt(2), size = Math.Sqrt((sine * sine) + (cosine * cosine));
        Assert.True(Math.Abs(second.X - sine) < 2e-3 * size && Math.Abs(second.Y - cosine) < 2e-3 * size, $"({second.X}, {second.Y}) instead of ({sine}, {cosine})");
    }

    [Fact]
    public void A_non_linear_line_is_quasi_static_when_slow_and_its_first_order_joins_the_full_solution()
    {
        const string Law = """
            kind = "saturating"
            a = "1 uS"
            b = "1 uS"
            field_a = "1 kV/m"
            field_b = "1 kV/m"
            sharpness = 2
            """;
        const string Currents = "{ from = \"3 nA\", to = \"3 nA\", steps = 1 }";
        LockinPoint still = AcDevices.Run(AcDevices.Bar(Law, Currents)).Points.Single();
        LockinResult gated = AcDevices.Run(AcDevices.Bar(Law, Currents, Frequencies(1, 400, 1500), Gate));
        LockinPoint slow = gated.Points[0], below = gated.Points[1], above = gated.Points[2];
        for (int h = 1; h <= 5; h += 2)
        {
            HarmonicReading a = still.Of("source", h)!, b = slow.Of("source", h)!;
            Assert.True(Math.Abs(a.X - b.X) <= 2 * a.Error && Math.Abs(b.Y) < 1e-5 * still.Of("source", 1)!.R);

            // 1500 Hz is solved in full and 400 Hz to first order: y is proportional to the frequency on both sides of the seam.
            Assert.Equal(1, above.Of("source", h)!.Y / below.Of("source", h)!.Y / (1500.0 / 400), 1e-3);
        }

        Assert.True(above.Steps > below.Steps, "1500 Hz was not solved in full: the seam moved");
    }

    private static void Near(Complex exact, HarmonicReading r, double relative)
    {
        double off = (exact - new Complex(r.X, r.Y)).Magnitude;
        Assert.True(off <= relative * exact.Magnitude, $"({r.X}, {r.Y}) instead of {exact}");
        Assert.True(off <= r.Error + (1e-12 * exact.Magnitude), $"off {off} against a bar of {r.Error}");
    }

    private static string Frequencies(params double[] list) =>
        "frequency = [" + string.Join(", ", list.Select(f => $"\"{f.ToString("R", CultureInfo.InvariantCulture)} Hz\"")) + "]";
}
