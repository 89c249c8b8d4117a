namespace FieldSolve.Bands;

/// <summary>
/// A two-dimensional cone, or the cut through a three-dimensional one at fixed k_c. In q = (ħ v_a k_a, ħ v_b k_b), an energy plane,
/// its bands are E = t·q ± √(q² + mass²).
/// </summary>
/// <param name="VelocityA">v_a, m/s.</param>
/// <param name="VelocityB">v_b, m/s.</param>
/// <param name="TiltA">t_a = w_a / v_a.</param>
/// <param name="TiltB">t_b = w_b / v_b.</param>
/// <param name="Mass">≥ 0, J.</param>
/// <param name="Berry">Mass with the sign that the Berry curvature follows; 0 where the bands have none.</param>
/// <param name="IsCut">Through a three-dimensional cone.</param>
internal readonly record struct ConeSlice(double VelocityA, double VelocityB, double TiltA, double TiltB, double Mass, double Berry, bool IsCut)
{
    /// <summary>A two-dimensional cone.</summary>
    public static ConeSlice Of(Cone c) => new(
        c.VelocityA, c.VelocityB, c.TiltA / c.VelocityA, c.TiltB / c.VelocityB, 0.5 * c.Gap, 0.5 * c.Gap * c.Chirality, false);

    /// <summary>
    /// The cut at κ = ħ v_c k_c. κ acts as a mass. Without a gap the cone is a Weyl cone, whose cuts have the Berry curvature of this
    /// mass; with one its bands are taken as doubly degenerate, and their curvatures cancel.
    /// </summary>
    public static ConeSlice At(Cone c, double kappa) => new(
        c.VelocityA, c.VelocityB, c.TiltA / c.VelocityA, c.TiltB / c.VelocityB,
        Math.Sqrt((0.25 * c.Gap * c.Gap) + (kappa * kappa)), c.Gap > 0 ? 0 : c.Chirality * kappa, true);

    /// <summary>|t|.</summary>
    public double Tilt => Math.Sqrt((TiltA * TiltA) + (TiltB * TiltB));

    /// <summary>ħ v_a and ħ v_b, J m.</summary>
    public (double A, double B) PerWaveNumber => (SiConstants.ReducedPlanck * VelocityA, SiConstants.ReducedPlanck * VelocityB);
}
