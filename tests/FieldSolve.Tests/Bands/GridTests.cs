using FieldSolve.Bands;
using static FieldSolve.Tests.BandsTests.BandSamples;

namespace FieldSolve.Tests.BandsTests;

/// <summary>
/// Open contours and films against plain sums over a grid of k with -df/dE. Velocities and inverse masses are differences of the
/// energies, so that only the definitions are shared (N. W. Ashcroft, N. D. Mermin, Solid State Physics, 1976, chapter 13, for the first order).
/// </summary>
public class GridTests
{
    private const double Hbar = SiConstants.ReducedPlanck, Charge = SiConstants.Charge;

    [Theory]
    [InlineData(1.6, 0.0)]
    [InlineData(1.1, 0.9)]
    public void Over_tilted_cone_up_to_its_cut_off(double tiltA, double tiltB)
    {
        const double kelvin = 200, reach = 1.2e9;
        Cone cone = Cone(tiltA, tiltB, 1.3, 50 * MilliElectronvolt);
        BandResponse r = (Model(cone) with { Temperature = kelvin, CutOff = reach, Error = 1e-5 }).Solve();
        Assert.Null(r.Hall);
        Sums s = new();
        const int rings = 400, spokes = 400;
        double step = reach / rings;
        for (int i = 0; i < rings; i++)
        {
            double k = (i + 0.5) * step;
            for (int j = 0; j < spokes; j++)
            {
                (double sin, double cos) = Math.SinCos(2 * Math.PI * (j + 0.5) / spokes);
                s.Add(cone, SiConstants.Boltzmann * kelvin, k * cos, k * sin, 0, k * step * 2 * Math.PI / spokes / (4 * Math.PI * Math.PI));
            }
        }

        Compare(r, s, 2e-3);
    }

    [Fact]
    public void Film_of_a_tilted_Weyl_cone()
    {
        const double thickness = 50e-9;
        double kt = 0.15 * Level, kelvin = kt / SiConstants.Boltzmann;
        Cone cone = Cone(0.25, 0.1, 1.2) with { VelocityC = 0.8 * Velocity, TiltC = 0.2 * 0.8 * Velocity };
        BandResponse r = (Model(cone) with { Temperature = kelvin, Thickness = thickness, Error = 1e-4 }).Solve();
        Sums s = new();
        double reach = (Level + (13 * kt)) / ((1 - cone.Tilt) * Hbar), step = 0.7 * kt / Hbar;
        (double sa, double sb, double sc) = (step / cone.VelocityA, step / cone.VelocityB, step / cone.VelocityC);
        int n = (int)(reach / step);
        for (int a = -n; a <= n; a++)
        {
            for (int b = -n; b <= n; b++)
            {
                for (int c = -n; c <= n; c++)
                {
                    // Half a step off the node, where the velocity has no limit.
                    s.Add(cone, kt, (a + 0.5) * sa, (b + 0.5) * sb, (c + 0.5) * sc, thickness * sa * sb * sc / Math.Pow(2 * Math.PI, 3));
                }
            }
        }

        Compare(r, s, 5e-3);
    }

    private static void Compare(BandResponse r, Sums s, double share)
    {
        double linear = Charge * Charge * Tau, second = -Charge * Charge * Charge * Tau * Tau, dipole = Charge * Charge * Charge * Tau / (Hbar * Hbar);

        // The response is in its principal frame; turn back to the cone's.
        (double sin, double cos) = Math.SinCos(2 * r.Rotation);
        double mean = 0.5 * (r.A.Value + r.B.Value), half = 0.5 * (r.A.Value - r.B.Value), size = share * mean;
        Assert.Equal(linear * s.Aa, mean + (half * cos), size);
        Assert.Equal(linear * s.Bb, mean - (half * cos), size);
        Assert.Equal(linear * s.Ab, half * sin, size);
        double[] drude = [.. r.Drude.InFrame(-r.Rotation).Elements.Select(e => e.Number.Value)];
        double most = drude.Max(Math.Abs);
        Assert.True(most > 0);
        Assert.All(Enumerable.Range(0, 6), k => Assert.Equal(second * s.Second[k], drude[k], 2 * share * most));
        var d = r.Dipole.InFrame(-r.Rotation).Value;
        double largest = Math.Max(Math.Abs(d.D12), Math.Abs(d.D21));
        Assert.True(largest > 0);
        Assert.Equal(dipole * s.DipoleB, d.D12, 2 * share * largest);
        Assert.Equal(-dipole * s.DipoleA, d.D21, 2 * share * largest);
    }

    private sealed class Sums
    {
        public double Aa { get; private set; }

        public double Ab { get; private set; }

        public double Bb { get; private set; }

        public double[] Second { get; } = new double[6];

        public double DipoleA { get; private set; }

        public double DipoleB { get; private set; }

        public void Add(Cone c, double kt, double a, double b, double z, double cell)
        {
            double Root(double x, double y) => Math.Sqrt(
                Math.Pow(Hbar * c.VelocityA * x, 2) + Math.Pow(Hbar * c.VelocityB * y, 2) + Math.Pow(Hbar * c.VelocityC * z, 2) + (0.25 * c.Gap * c.Gap));
            for (int band = -1; band <= 1; band += 2)
            {
                double E(double x, double y) => (Hbar * ((c.TiltA * x) + (c.TiltB * y) + (c.TiltC * z))) + (band * Root(x, y));
                double here = E(a, b), x = (here - Level) / kt;
                if (Math.Abs(x) > 40)
                {
                    continue;
                }

                double root = Root(a, b), h = 1e-3 * root / (Hbar * Math.Max(c.VelocityA, c.VelocityB));
                double w = cell / (4 * kt * Math.Pow(Math.Cosh(0.5 * x), 2));
                double ea = E(a + h, b), eA = E(a - h, b), eb = E(a, b + h), eB = E(a, b - h);
                double va = (ea - eA) / (2 * h * Hbar), vb = (eb - eB) / (2 * h * Hbar);
                double maa = (ea - (2 * here) + eA) / (h * h * Hbar * Hbar), mbb = (eb - (2 * here) + eB) / (h * h * Hbar * Hbar);
                double mab = (E(a + h, b + h) - E(a + h, b - h) - E(a - h, b + h) + E(a - h, b - h)) / (4 * h * h * Hbar * Hbar);
                (Aa, Ab, Bb) = (Aa + (w * va * va), Ab + (w * va * vb), Bb + (w * vb * vb));
                double[] terms = [maa * va, mab * vb, 0.5 * ((maa * vb) + (mab * va)), mab * va, mbb * vb, 0.5 * ((mab * vb) + (mbb * va))];
                for (int k = 0; k < 6; k++)
                {
                    Second[k] += w * terms[k];
                }

                // Component along c of the curvature of H = d·σ with d = (χ ħv_a k_a, ħv_b k_b, mass).
                double mass = c.VelocityC > 0 ? Hbar * c.VelocityC * z : 0.5 * c.Gap;
                double curvature = -band * 0.5 * c.Chirality * Hbar * Hbar * c.VelocityA * c.VelocityB * mass / (root * root * root);
                DipoleA += w * curvature * Hbar * va;
                DipoleB += w * curvature * Hbar * vb;
            }
        }
    }
}
