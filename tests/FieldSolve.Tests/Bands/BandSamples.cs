using FieldSolve.Bands;

namespace FieldSolve.Tests.BandsTests;

/// <summary>Band models for tests.</summary>
internal static class BandSamples
{
    public const double MilliElectronvolt = 1e-3 * SiConstants.Charge;

    public const double Velocity = 5e5;

    public const double Tau = 0.2e-12;

    public const double Level = 60 * MilliElectronvolt;

    /// <summary>A cone with v_a, its velocity ratio and tilts as shares of the velocities.</summary>
    public static Cone Cone(double tiltA = 0, double tiltB = 0, double ratio = 1, double gap = 0, int chirality = 1, double angle = 0, double degeneracy = 1) => new()
    {
        Name = "cone",
        VelocityA = Velocity,
        VelocityB = ratio * Velocity,
        TiltA = tiltA * Velocity,
        TiltB = tiltB * ratio * Velocity,
        Gap = gap,
        Chirality = chirality,
        Angle = angle,
        Degeneracy = degeneracy,
    };

    public static BandModel Model(params Cone[] cones) => new()
    {
        Title = "test",
        Cones = cones,
        ChemicalPotential = Level,
        RelaxationTime = Tau,
    };

    public static BandResponse Solve(this BandModel model) => BandSolver.Solve(model, CancellationToken.None);

    /// <summary>The partner of a cone under time reversal.</summary>
    public static Cone Partner(this Cone cone) => cone with { TiltA = -cone.TiltA, TiltB = -cone.TiltB, TiltC = -cone.TiltC, Chirality = -cone.Chirality };

    public static void Close(double expected, Estimate got, double relative)
    {
        Assert.Equal(expected, got.Value, Math.Abs(expected) * relative);
        Assert.True(Math.Abs(expected - got.Value) <= got.Error + (1e-10 * Math.Abs(expected)), $"{got.Value} ± {got.Error} misses {expected}");
    }
}
