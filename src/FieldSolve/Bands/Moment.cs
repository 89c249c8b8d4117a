namespace FieldSolve.Bands;

/// <summary>
/// The integrals over a contour of constant energy from which all is made. The measure is δ(E - E(k)) d²k / (2π)²; v is the
/// velocity, m⁻¹ = ∂v/∂k / ħ the inverse mass, Ω the Berry curvature.
/// </summary>
internal static class Moment
{
    /// <summary>1: density of states, 1/(J m²).</summary>
    public const int States = 0;

    /// <summary>Half width of the contour times the density of states.</summary>
    public const int Width = 1;

    /// <summary>v_a v_a, and v_a v_b, v_b v_b after it.</summary>
    public const int Velocities = 2;

    /// <summary>m⁻¹_ij v_k for (i; jk) = (a; aa), (a; bb), (a; ab), (b; aa), (b; bb), (b; ab), symmetric in jk; then the sizes that bound them.</summary>
    public const int Masses = 5;

    /// <summary>Ω ħ v_a and Ω ħ v_b; then the sizes that bound them.</summary>
    public const int Dipole = 12;

    /// <summary>½ ∮ (1 - |mass|/ε) dφ with the sign of the mass: the Berry flux of the states between node and contour; then the size that bounds it.</summary>
    public const int Flux = 15;

    /// <summary>First of the widths of the profile: half the variation of k across each direction, 1/m.</summary>
    public const int Profile = 17;

    /// <summary>Group of each component: those of a group share the scale of their error.</summary>
    public static int[] Groups(int directions) =>
        [0, 1, 2, 2, 2, 3, 3, 3, 3, 3, 3, 3, 4, 4, 4, 5, 5, .. Enumerable.Repeat(6, directions)];

    /// <summary>
    /// Wanted error of each group. With a cut-off the widths of the profile have a kink wherever an end of the contour passes the
    /// outermost point, for each direction elsewhere: a ten-thousandth is asked for there.
    /// </summary>
    /// <param name="error">Wanted relative error of the rest.</param>
    /// <param name="cutOff">A cut-off is given.</param>
    public static double[] Shares(double error, bool cutOff) =>
        [error, cutOff ? Coarse(error) : error, error, error, error, error, cutOff ? Coarse(error) : error];

    // A hundred times the rest, up to a ten-thousandth at the outermost integral.
    private static double Coarse(double error) => Math.Max(error, Math.Min(100 * error, LeastOfCut));

    private const double LeastOfCut = 1e-4;
}
