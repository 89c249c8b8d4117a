using FieldSolve.Bands;
using FieldSolve.Laws;
using static FieldSolve.Tests.BandsTests.BandSamples;

namespace FieldSolve.Tests.BandsTests;

/// <summary>Second-order elements: signs, symmetry and values.</summary>
public class SecondOrderTests
{
    private const double Hbar = SiConstants.ReducedPlanck, Charge = SiConstants.Charge;

    /// <summary>
    /// The current of the exact stationary distribution in a uniform field, f(k) = ∫ ds/τ e^(-s/τ) f0(k + eEs/ħ) (R. G. Chambers, Proc.
    /// Phys. Soc. A 65, 458, 1952), on a grid of k, shares no step with the program: K = -e ∫ d²k/(2π)² f0(k) ∫ ds/τ e^(-s/τ) v(k - eEs/ħ),
    /// with the velocity from the energies and the anomalous velocity (e/ħ) E×Ω; the even part in E gives d.
    /// </summary>
    [Theory]
    [InlineData(0.35, 0.0, 1.0, 1)]
    [InlineData(0.3, -0.25, 1.4, -1)]
    public void Currents_of_a_shifted_distribution(double tiltA, double tiltB, double ratio, int chirality)
    {
        const double kelvin = 60;
        double gap = 80 * MilliElectronvolt, kt = SiConstants.Boltzmann * kelvin;
        Cone cone = Cone(tiltA, tiltB, ratio, gap, chirality);
        BandResponse r = (Model(cone) with { Temperature = kelvin }).Solve();

        // The program's answer in the cone's own frame again.
        SecondOrder drude = r.Drude.InFrame(-r.Rotation).Value, dipole = r.Dipole.InFrame(-r.Rotation).Value;
        double field = 0.02 * Level / (Velocity * Charge * Tau);
        double scale = Math.Abs(drude.D11) + Math.Abs(drude.D22) + Math.Abs(drude.D12) + Math.Abs(drude.D21);
        double dipoleScale = Math.Abs(dipole.D12) + Math.Abs(dipole.D21);
        foreach ((double ea, double eb) in new[] { (1.0, 0.0), (0.0, 1.0), (0.6, 0.8) })
        {
            (double ka, double kb, double ha, double hb) = EvenCurrent(cone, kt, field * ea, field * eb);
            double f2 = field * field;
            Assert.Equal((drude.D11 * ea * ea) + (drude.D12 * eb * eb) + (2 * drude.D16 * ea * eb), ka / f2, 0.02 * scale);
            Assert.Equal((drude.D21 * ea * ea) + (drude.D22 * eb * eb) + (2 * drude.D26 * ea * eb), kb / f2, 0.02 * scale);
            Assert.Equal((dipole.D11 * ea * ea) + (dipole.D12 * eb * eb) + (2 * dipole.D16 * ea * eb), ha / f2, 0.02 * dipoleScale);
            Assert.Equal((dipole.D21 * ea * ea) + (dipole.D22 * eb * eb) + (2 * dipole.D26 * ea * eb), hb / f2, 0.02 * dipoleScale);
        }
    }

    [Fact]
    public void Dipole_to_first_order_in_the_tilt()
    {
        // D_a = -χ 3 ħ w Δ (µ² - Δ²) / (8π µ⁴): the form of I. Sodemann, L. Fu, Phys. Rev. Lett. 115, 216806 (2015) for a tilted massive cone, derived
        // anew for H = ħ(χ v k_a σ_a + v k_b σ_b) + Δ σ_z + ħ w k_a, since prefactors and signs differ between papers.
        const double tilt = 1e-4;
        double delta = 25 * MilliElectronvolt;
        BandResponse r = Model(Cone(tilt, gap: 2 * delta)).Solve();
        double expected = -3 * Hbar * tilt * Velocity * delta * (Level - delta) * (Level + delta) / (8 * Math.PI * Math.Pow(Level, 4));
        Assert.Equal(expected, r.BerryDipole.A.Value, 1e-6 * Math.Abs(expected));
        Assert.True(r.BerryDipole.B.IsZero);

        // K = (e³τ/ħ²) (E_b, -E_a) (D·E).
        double per = Charge * Charge * Charge * Tau / (Hbar * Hbar);
        Assert.Equal(0.5 * per * expected, r.Dipole.Value.D16, 1e-6 * Math.Abs(per * expected));
        Assert.Equal(-per * expected, r.Dipole.Value.D21, 1e-6 * Math.Abs(per * expected));
        Assert.Equal(0, r.Dipole.Value.D11);
    }

    [Fact]
    public void Dipole_current_is_across_the_field()
    {
        // E·K of the anomalous part vanishes: it does no work (Sodemann and Fu).
        SecondOrder d = Model(Cone(0.4, 0.3, 1.3, 50 * MilliElectronvolt)).Solve().Dipole.Value;
        double largest = Math.Max(Math.Abs(d.D12), Math.Abs(d.D21));
        Assert.Equal(0, d.D11, 1e-14 * largest);
        Assert.Equal(0, d.D22, 1e-14 * largest);
        Assert.Equal(0, d.D12 + (2 * d.D26), 1e-12 * largest);
        Assert.Equal(0, d.D21 + (2 * d.D16), 1e-12 * largest);
        Assert.True(largest > 0);
    }

    [Fact]
    public void Time_reversal_partners_cancel_the_Drude_part_and_add_the_dipole()
    {
        Cone one = Cone(0.5, 0.2, 1.5, 60 * MilliElectronvolt);
        BandResponse alone = Model(one).Solve(), both = Model(one, one.Partner()).Solve();
        Assert.All(both.Drude.Elements, e => Assert.True(e.Number.IsZero, $"{e.Name} {e.Number}"));
        Assert.Contains(alone.Drude.Elements, e => !e.Number.IsZero);
        double largest = alone.Dipole.Elements.Max(e => Math.Abs(e.Number.Value));
        Assert.All(both.Dipole.Elements.Zip(alone.Dipole.Elements), p => Assert.Equal(2 * p.Second.Number.Value, p.First.Number.Value, 1e-10 * largest));
        Assert.True(both.Hall!.Value.IsZero);
        Assert.False(alone.Hall!.Value.IsZero);
        Assert.True(both.IsQuadratic);

        // Without a gap there is no curvature, and nothing of second order is left.
        Assert.False(Model(Cone(0.5), Cone(0.5).Partner()).Solve().IsQuadratic);
    }

    [Fact]
    public void A_tilt_and_its_opposite_have_opposite_second_order_parts_and_none_without()
    {
        // Reversing k reverses every tensor of odd rank (F. Neumann's principle).
        BandResponse plus = Model(Cone(0.5)).Solve(), minus = Model(Cone(-0.5)).Solve(), none = Model(Cone()).Solve();
        Assert.Equal(plus.Drude.Value.D11, -minus.Drude.Value.D11, 1e-12 * Math.Abs(plus.Drude.Value.D11));
        Assert.False(none.IsQuadratic);

        // A mirror line along the tilt leaves d11, d12 and d26 alone, and the shifted distribution gives a fully symmetric tensor: d12 = d26.
        Assert.True(plus.Drude.Elements[2].Number.IsZero && plus.Drude.Elements[3].Number.IsZero && plus.Drude.Elements[4].Number.IsZero);
        Assert.Equal(plus.Drude.Value.D12, plus.Drude.Value.D26, 1e-11 * Math.Abs(plus.Drude.Value.D11));
    }

    [Theory]
    [InlineData(0.0)]
    [InlineData(150.0)]
    public void All_tensors_turn_with_the_cone(double kelvin)
    {
        Cone one = Cone(0.5, -0.3, 1.6, 50 * MilliElectronvolt), two = Cone(-0.2, 0.6, 0.7) with { Offset = 10 * MilliElectronvolt };
        const double turn = 0.3;
        BandModel model = Model(one, two) with { Temperature = kelvin, Directions = 24 };
        BandResponse plain = model.Solve();
        BandResponse turned = (model with { Cones = [one with { Angle = turn }, two with { Angle = turn }] }).Solve();
        BandResponse axis = (model with { Axis = turn }).Solve();

        // Law in the lab frame before and after: the same fields, turned, give the same currents, turned.
        foreach (BandResponse other in new[] { turned, axis })
        {
            (double ka, double kb) = Current(plain, 0.7e5, 0.4e5);
            (double sin, double cos) = Math.SinCos(turn);
            (double kx, double ky) = Current(other, (cos * 0.7e5) - (sin * 0.4e5), (sin * 0.7e5) + (cos * 0.4e5));
            double size = Math.Abs(ka) + Math.Abs(kb);
            Assert.Equal((cos * ka) - (sin * kb), kx, 1e-7 * size);
            Assert.Equal((sin * ka) + (cos * kb), ky, 1e-7 * size);
        }

        // Only the second order, which the sum above hides.
        double largest = plain.Total.Elements.Max(e => Math.Abs(e.Number.Value));
        SecondOrderSet first = plain.Total.InFrame(-plain.Axis), then = turned.Total.InFrame(-turned.Axis).InFrame(turn);
        Assert.All(first.Elements.Zip(then.Elements), p => Assert.Equal(p.First.Number.Value, p.Second.Number.Value, 1e-6 * largest));

        // Twelve steps of 15 degrees: a cone turned by 45 degrees has the profile of three points on.
        BandResponse quarter = (model with { Axis = Math.PI / 4 }).Solve();
        Assert.All(Enumerable.Range(0, 24), k => Assert.Equal(
            plain.Profile[k].Ballistic.Value, quarter.Profile[(k + 3) % 24].Ballistic.Value, 1e-7 * plain.Profile[k].Ballistic.Value));
    }

    [Fact]
    public void The_principal_frame_has_no_off_diagonal_part()
    {
        BandResponse r = Model(Cone(0.5, 0.4, 1.3)).Solve();
        Assert.True(Math.Abs(r.Rotation) > 0.01);
        Assert.True(r.Ab.IsZero);
        Assert.InRange(r.Rotation, -Math.PI / 4, Math.PI / 4);
    }

    private static (double X, double Y) Current(BandResponse r, double ex, double ey)
    {
        var law = new LabLaw(new QuadraticLaw(r.A.Value, r.B.Value, r.Hall!.Value.Value, r.Total.Value), r.Axis);
        double[] kx = new double[1], ky = new double[1];
        law.Evaluate([ex], [ey], kx, ky);
        return (kx[0], ky[0]);
    }

    // Even part in E of the current of the upper band, from the shifted velocity and from the anomalous velocity.
    private static (double Ka, double Kb, double Ha, double Hb) EvenCurrent(Cone c, double kt, double ea, double eb)
    {
        double delta = c.Gap / 2, fast = Hbar * Math.Max(c.VelocityA, c.VelocityB);
        double reach = (Level + (25 * kt)) / ((1 - c.Tilt) * Hbar * Math.Min(c.VelocityA, c.VelocityB));

        // Equal steps over a smooth integrand that falls off; the poles of f lie πkT away, which gives errors of e^(-2π² kT / step).
        double step = 0.6 * kt / fast;

        // Gauss-Laguerre, five points, for ∫ e^-x g(x) dx (M. Abramowitz, I. A. Stegun, table 25.9): exact for all orders that matter.
        double[] x = [0.263560319718, 1.413403059107, 3.596425771041, 7.085810005859, 12.640800844276];
        double[] w = [0.521755610583, 0.398666811083, 0.0759424496817, 0.00361175867992, 0.0000233699723858];
        double Energy(double a, double b) => (Hbar * ((c.TiltA * a) + (c.TiltB * b)))
            + Math.Sqrt(Math.Pow(Hbar * c.VelocityA * a, 2) + Math.Pow(Hbar * c.VelocityB * b, 2) + (delta * delta));
        double Omega(double a, double b)
        {
            double e = Math.Sqrt(Math.Pow(Hbar * c.VelocityA * a, 2) + Math.Pow(Hbar * c.VelocityB * b, 2) + (delta * delta));
            return -c.Chirality * 0.5 * Hbar * Hbar * c.VelocityA * c.VelocityB * delta / (e * e * e);
        }

        double h = 1e-2 * step;
        double ka = 0, kb = 0, omega = 0;
        for (double a = -reach; a <= reach; a += step)
        {
            for (double b = -reach; b <= reach; b += step)
            {
                double f = 1 / (1 + Math.Exp((Energy(a, b) - Level) / kt));
                if (f < 1e-9)
                {
                    continue;
                }

                for (int k = 0; k < x.Length; k++)
                {
                    double da = Charge * ea * Tau * x[k] / Hbar, db = Charge * eb * Tau * x[k] / Hbar;
                    for (int sign = -1; sign <= 1; sign += 2)
                    {
                        double pa = a - (sign * da), pb = b - (sign * db), part = 0.5 * w[k] * f;
                        ka += part * (Energy(pa + h, pb) - Energy(pa - h, pb)) / (2 * h * Hbar);
                        kb += part * (Energy(pa, pb + h) - Energy(pa, pb - h)) / (2 * h * Hbar);
                        omega += sign * part * Omega(pa, pb);
                    }
                }
            }
        }

        double cell = step * step / (4 * Math.PI * Math.PI), e2 = Charge * Charge / Hbar;

        // The zero-field current of the grid is zero; K = -e ∫ v f and K = -(e²/ħ) ∫ (E × Ω) f.
        return (-Charge * ka * cell, -Charge * kb * cell, -e2 * eb * omega * cell, e2 * ea * omega * cell);
    }
}
