using FieldSolve.Bands;
using static FieldSolve.Tests.BandsTests.BandSamples;

namespace FieldSolve.Tests.BandsTests;

/// <summary>Linear response of cones against closed forms.</summary>
public class PublishedConeTests
{
    private const double Hbar = SiConstants.ReducedPlanck, Charge = SiConstants.Charge;

    /// <summary>
    /// Constant relaxation time, tilt t along a: σ_aa/σ_0 = (v_a/v_b) 2(1-u)/t², σ_bb/σ_0 = (v_b/v_a) 2(1-u)/(t²u), u = √(1-t²),
    /// σ_0 = e²τE/(4πħ²). The ratio u follows S. Rostamzadeh, İ. Adagideli, M. O. Goerbig, Phys. Rev. B 100, 075438 (2019); the single
    /// values were recomputed by quadrature to 1e-12. Half extents of the ellipse in E/(ħ v_a).
    /// </summary>
    [Theory]
    [InlineData(0, 1, 1.0, 1.0, 1.0, 1.0)]
    [InlineData(0.3, 1, 1.0235733018, 1.0729963716, 1.0989010989, 1.0482848367)]
    [InlineData(0.6, 1, 1.1111111111, 1.3888888889, 1.5625, 1.25)]
    [InlineData(0.9, 1, 1.3928644584, 3.195450219, 5.2631578947, 2.2941573387)]
    [InlineData(0, 2, 0.5, 2.0, 1.0, 0.5)]
    [InlineData(0.3, 2, 0.51178665092, 2.1459927432, 1.0989010989, 0.52414241836)]
    [InlineData(0.6, 2, 0.55555555556, 2.7777777778, 1.5625, 0.625)]
    [InlineData(0.9, 2, 0.69643222919, 6.3909004381, 5.2631578947, 1.1470786694)]
    public void Tilted_cone(double tilt, double ratio, double along, double aside, double halfAlong, double halfAside)
    {
        BandResponse r = Model(Cone(tilt, ratio: ratio)).Solve();
        double unit = Charge * Charge * Tau * Level / (4 * Math.PI * Hbar * Hbar);
        Close(along * unit, r.A, 1e-10);
        Close(aside * unit, r.B, 1e-10);
        Assert.Equal(0, r.Rotation);
        Assert.True(r.Ab.IsZero);

        // Transport along a meets the extent across it: G/W = (e²/h) 2 h / 2π.
        double k = Level / (Hbar * Velocity);
        Assert.Equal(SiConstants.ConductanceQuantum * halfAside * k / Math.PI, r.Profile[0].Ballistic.Value, 1e-10 * r.Profile[0].Ballistic.Value);
        Assert.Equal(SiConstants.ConductanceQuantum * halfAlong * k / Math.PI, r.Profile[18].Ballistic.Value, 1e-10 * r.Profile[18].Ballistic.Value);
    }

    // Half extent at an angle to the tilt, t = 0.6: √(h_a² sin² + h_b² cos²); Yu. V. Sharvin, Sov. Phys. JETP 21, 655 (1965), recomputed.
    [Theory]
    [InlineData(0, 1.25)]
    [InlineData(15, 1.27333246051)]
    [InlineData(30, 1.33500058521)]
    [InlineData(45, 1.41490392783)]
    [InlineData(60, 1.49053000221)]
    [InlineData(75, 1.5435448471)]
    [InlineData(90, 1.5625)]
    public void Profile_of_a_tilted_cone(int degrees, double half)
    {
        BandResponse r = Model(Cone(0.6)).Solve();
        ProfilePoint p = r.Profile[degrees / 5];
        Assert.Equal(degrees * Math.PI / 180, p.Direction, 1e-14);
        Assert.Equal(SiConstants.ConductanceQuantum / Math.PI * half * Level / (Hbar * Velocity), p.Ballistic.Value, 1e-10 * p.Ballistic.Value);
    }

    [Fact]
    public void Graphene_at_a_carrier_density_of_1e12_per_square_centimetre()
    {
        // G/W = g (e²/h) k_F / π, k_F = √(4π n / g); C. W. J. Beenakker, H. van Houten, Solid State Phys. 44, 1 (1991).
        const double n = 1e16, v = 1e6;
        double kf = Math.Sqrt(Math.PI * n);
        BandResponse r = (Model(Cone(degeneracy: 4) with { VelocityA = v, VelocityB = v }) with { ChemicalPotential = Hbar * v * kf }).Solve();
        Assert.All(r.Profile, p => Assert.Equal(8742.7852927, p.Ballistic.Value, 1e-6));
        Assert.Equal(r.A.Value, r.B.Value, 1e-12 * r.A.Value);
        Assert.False(r.IsQuadratic);

        // Shift by a tenth of the radius: F = 0.1 ħ k_F / (e τ).
        Assert.Equal(0.1 * Hbar * kf / (Charge * Tau), r.FieldLimit, 1e-10 * r.FieldLimit);
        Assert.Equal(v * Tau, r.Shares[0].MeanFreePath, 1e-12);
    }

    [Fact]
    public void A_gapped_cone_near_its_edge_is_a_parabola()
    {
        // Drude: σ = n e² τ / m with m = Δ / v², n = m E_kin / (2πħ²) (N. W. Ashcroft, N. D. Mermin, Solid State Physics, 1976). At finite
        // energy the cone has exactly σ = e²τ (µ² - Δ²) / (4πħ² µ).
        double gap = 200 * MilliElectronvolt, edge = gap / 2, kinetic = 0.01 * MilliElectronvolt;
        BandResponse r = (Model(Cone(gap: gap)) with { ChemicalPotential = edge + kinetic }).Solve();
        double mass = edge / (Velocity * Velocity), n = mass * kinetic / (2 * Math.PI * Hbar * Hbar);
        Assert.Equal(n * Charge * Charge * Tau / mass, r.A.Value, 2e-4 * r.A.Value);
        double mu = edge + kinetic;
        Close(Charge * Charge * Tau * (mu - edge) * (mu + edge) / (4 * Math.PI * Hbar * Hbar * mu), r.A, 1e-9);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(-1)]
    public void Hall_part_of_one_gapped_cone(int chirality)
    {
        // Half a quantum in the gap, times Δ/µ outside; N. A. Sinitsyn et al., Phys. Rev. B 75, 045315 (2007), from memory, intrinsic part.
        double gap = 40 * MilliElectronvolt;
        BandResponse up = Model(Cone(gap: gap, chirality: chirality)).Solve(), down = (Model(Cone(gap: gap, chirality: chirality)) with { ChemicalPotential = -Level }).Solve();
        double expected = -chirality * 0.5 * SiConstants.ConductanceQuantum * (gap / 2) / Level;
        Close(expected, up.Hall!.Value, 1e-10);
        Close(expected, down.Hall!.Value, 1e-10);

        // Deep in the gap, with a few carriers from temperature.
        BandResponse middle = (Model(Cone(gap: gap, chirality: chirality)) with { ChemicalPotential = 0, Temperature = 12 }).Solve();
        Assert.Equal(-chirality * 0.5 * SiConstants.ConductanceQuantum, middle.Hall!.Value.Value, 1e-6 * SiConstants.ConductanceQuantum);
    }

    [Fact]
    public void Warm_ungapped_cone()
    {
        // ∫ (-f') |E| dE = 2 kT ln(2 cosh(µ/2kT)): the known two-dimensional result, T. Ando, A. B. Fowler, F. Stern, Rev. Mod. Phys. 54, 437
        // (1982) for the integral of -f'; here for |E| in place of E.
        const double kelvin = 300;
        double kt = SiConstants.Boltzmann * kelvin, mu = 30 * MilliElectronvolt;
        BandResponse r = (Model(Cone()) with { ChemicalPotential = mu, Temperature = kelvin }).Solve();
        double mean = 2 * kt * Math.Log(2 * Math.Cosh(mu / (2 * kt)));
        Close(Charge * Charge * Tau * mean / (4 * Math.PI * Hbar * Hbar), r.A, 1e-8);
        Close(SiConstants.ConductanceQuantum * mean / (Math.PI * Hbar * Velocity), r.Profile[7].Ballistic, 1e-8);
        Assert.True(r.Reached);
    }

    [Fact]
    public void Film_of_an_isotropic_three_dimensional_cone()
    {
        // σ = e² τ v² N / 3 with N = E²/(2π²ħ³v³) (Ashcroft and Mermin); channels per area k_F²/4π (Sharvin).
        const double thickness = 40e-9;
        Cone cone = Cone(gap: 30 * MilliElectronvolt) with { VelocityC = Velocity };
        BandResponse r = (Model(cone) with { Thickness = thickness }).Solve();
        double q2 = (Level * Level) - Math.Pow(15 * MilliElectronvolt, 2), k = Math.Sqrt(q2) / (Hbar * Velocity), v = Velocity * Math.Sqrt(q2) / Level;
        double states = k * k / (2 * Math.PI * Math.PI * Hbar * v);
        Close(thickness * Charge * Charge * Tau * v * v * states / 3, r.A, 1e-8);
        Close(thickness * SiConstants.ConductanceQuantum * k * k / (4 * Math.PI), r.Profile[3].Ballistic, 1e-8);
    }

    [Fact]
    public void Film_of_a_tilted_three_dimensional_cone_with_other_velocities_along_c()
    {
        // q_c = ħ v_c k_c is a matter of scale: the sheet conductance goes as 1/v_c for tilts in units of the velocities.
        BandResponse one = (Model(Cone(0.4, 0.2) with { VelocityC = Velocity, TiltC = 0.3 * Velocity }) with { Thickness = 1e-8 }).Solve();
        BandResponse two = (Model(Cone(0.4, 0.2) with { VelocityC = 2 * Velocity, TiltC = 0.6 * Velocity }) with { Thickness = 1e-8 }).Solve();
        Assert.Equal(one.A.Value, 2 * two.A.Value, 1e-8 * one.A.Value);

        // Turning the tilt out of the plane: σ_aa for a tilt along c is σ_bb for the same tilt along a.
        BandResponse alongC = (Model(Cone() with { VelocityC = Velocity, TiltC = 0.6 * Velocity }) with { Thickness = 1e-8 }).Solve();
        BandResponse alongA = (Model(Cone(0.6) with { VelocityC = Velocity }) with { Thickness = 1e-8 }).Solve();
        Assert.Equal(alongC.A.Value, alongA.B.Value, 1e-8 * alongC.A.Value);
        Assert.True(alongA.A.Value < alongA.B.Value);
    }
}
