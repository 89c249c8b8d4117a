using FieldSolve.Lockin;
using FieldSolve.Readings;

namespace FieldSolve.Tests.LockinTests;

/// <summary>
/// A bar with full ends carries a uniform field, so V(I) is the law's own inverse, known in closed form; its harmonics come from a rule with thousands
/// of phases, or from the power series of the inverse.
/// </summary>
public class BarLawTests
{
    private const double S = 1e-3, D = 2e-9, L = AcDevices.Length, W = AcDevices.Width;
    private const string Quadratic = """
        kind = "quadratic"
        a = "1 mS"
        b = "1 mS"
        d11 = "2e-9 A m/V^2"
        """;

    // The current flows towards -x: -s E + d E² = -I/W with E > 0 counted that way.
    private static double Voltage(double current) => L * (S - Math.Sqrt((S * S) - (4 * D * current / W))) / (2 * D);

    [Theory]
    [InlineData("")]
    [InlineData("offset = \"40 uA\"")]
    [InlineData("offset = \"-150 uA\"")]
    public void Harmonics_of_a_quadratic_law(string offset)
    {
        LockinResult result = AcDevices.Run(AcDevices.Bar(Quadratic, "{ from = \"50 uA\", to = \"100 uA\", steps = 2 }", offset));
        Assert.True(result.AllOk, string.Join('\n', result.Warnings));
        double dc = offset.Length == 0 ? 0 : offset.Contains("40", StringComparison.Ordinal) ? 40e-6 : -150e-6;
        foreach (LockinPoint p in result.Points)
        {
            (double X, double Y)[] exact = AcDevices.Harmonics(t => Voltage(dc + (Math.Sqrt(2) * p.CurrentRms * Math.Sin(t))));
            foreach ((string pair, double share) in new[] { ("source", 1.0), ("along", 0.5) })
            {
                for (int h = 0; h <= 5; h++)
                {
                    HarmonicReading r = p.Of(pair, h)!;
                    double off = Math.Max(Math.Abs(r.X - (share * exact[h].X)), Math.Abs(r.Y - (share * exact[h].Y)));
                    Assert.True(off <= r.Error, $"{pair} {h}: off {off} against a bar of {r.Error}");
                    Assert.True(off <= 2e-8 * exact[1].X, $"{pair} {h}: off {off}");
                }
            }

            Assert.Equal(p.Of("source", 2)!.R, Math.Abs(p.Of("source", 2)!.Y));
            Assert.Equal(90, Math.Abs(p.Of("source", 2)!.PhaseDegrees), 1e-9);
        }
    }

    [Fact]
    public void Weak_drive_gives_the_power_series_and_slopes_1_2_3()
    {
        // V = a1 I + a2 I² + a3 I³ + …, a1 = L/(sW), a2 = dL/(s³W²), a3 = 2d²L/(s⁵W³); RMS readings a1 I + 3 a3 I³/2, a2 I²/√2, a3 I³/2.
        LockinResult result = AcDevices.Run(AcDevices.Bar(Quadratic, "{ from = \"1 uA\", to = \"5 uA\", steps = 5 }"));
        double a1 = L / (S * W), a2 = D * L / (S * S * S * W * W), a3 = 2 * D * D * L / (Math.Pow(S, 5) * W * W * W);
        foreach (LockinPoint p in result.Points)
        {
            double i = p.CurrentRms;
            Assert.Equal(1, p.Of("source", 1)!.X / ((a1 * i) + (1.5 * a3 * i * i * i)), 1e-7);
            Assert.Equal(1, p.Of("source", 2)!.Y / (-a2 * i * i / Math.Sqrt(2)), 1e-4);
            Assert.Equal(1, p.Of("source", 0)!.X / (a2 * i * i), 1e-4);
            Assert.Equal(1, p.Of("source", 3)!.X / (-a3 * i * i * i / 2), 1e-3);
            Assert.Equal(180, p.Of("source", 3)!.PhaseDegrees, 1e-9);
        }

        foreach (string pair in new[] { "along", "source" })
        {
            for (int h = 1; h <= 3; h++)
            {
                Assert.Equal(h, result.Slopes.Single(s => s.Pair == pair && s.Harmonic == h).Slope, 1e-3);
            }
        }
    }

    [Fact]
    public void A_law_that_bends_strongly_gets_more_phases_and_an_odd_one_no_even_harmonics()
    {
        // K = sE / sqrt(1 + (E/F)²): E = K / sqrt(s² - (K/F)²), driven to 0.9 of the largest current it carries.
        const double F = 1e4, Most = S * F * W;
        LockinResult result = AcDevices.Run(AcDevices.Bar(
            """
            kind = "saturating"
            a = "1 mS"
            b = "1 mS"
            field_a = "10 kV/m"
            field_b = "10 kV/m"
            sharpness = 2
            """, $"{{ from = \"{0.9 * Most / Math.Sqrt(2):R} A\", to = \"{0.9 * Most / Math.Sqrt(2):R} A\", steps = 1 }}"));
        LockinPoint p = result.Points.Single();
        Assert.Equal(RowStatus.Ok, p.Status);
        (double X, double Y)[] exact = AcDevices.Harmonics(t =>
        {
            double k = 0.9 * S * F * Math.Sin(t);
            return L * k / Math.Sqrt((S * S) - (k * k / (F * F)));
        });
        for (int h = 0; h <= 5; h++)
        {
            HarmonicReading r = p.Of("source", h)!;
            double off = Math.Max(Math.Abs(r.X - exact[h].X), Math.Abs(r.Y - exact[h].Y));
            Assert.True(off <= r.Error, $"{h}: off {off} against a bar of {r.Error}");
            Assert.True(h % 2 == 1 ? off < 1e-5 * exact[1].X : r.R < 1e-13, $"{h}: off {off}, {r.R}");
        }
    }
}
