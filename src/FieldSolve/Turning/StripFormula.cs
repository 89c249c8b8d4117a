namespace FieldSolve.Turning;

/// <summary>
/// Readings of a strip with a uniform field; sources at <see cref="StripFit"/>. Angles are those of the current from crystal a, radians; elements are d11, d12, d16, d21, d22, d26 in A m/V².
/// </summary>
/// <param name="Sheet">The tensor.</param>
/// <param name="Length">Distance of the along probes, metres.</param>
/// <param name="Width">Width of the strip, metres.</param>
public sealed record StripFormula(PrincipalSheet Sheet, double Length, double Width)
{
    /// <summary>V_along / I, ohm.</summary>
    public double Along(double angle)
    {
        (double s, double c) = Math.SinCos(angle);
        return Length / Width * ((Sheet.RhoA * c * c) + (Sheet.RhoB * s * s));
    }

    /// <summary>V_across / I, ohm: the same for every width.</summary>
    public double Across(double angle)
    {
        (double s, double c) = Math.SinCos(angle);
        return ((Sheet.RhoA - Sheet.RhoB) * s * c) - Sheet.HallResistance;
    }

    /// <summary>
    /// V_even / I² at a held current per unit of each element, (ohm/A) / (A m/V²): the field E2 = -rho K2(rho K, rho K), from K = sigma E + K2(E, E). The Hall part is left out.
    /// </summary>
    /// <param name="angle">Radians.</param>
    /// <param name="along">The along pair, else the across pair.</param>
    public double[] Even(double angle, bool along)
    {
        (double s, double c) = Math.SinCos(angle);
        double ea = Sheet.RhoA * c, eb = Sheet.RhoB * s;

        // V_across = W n_perp . rho K2, V_along = -L n . rho K2, with K = I / W.
        double onA = along ? -c * Sheet.RhoA : -s * Sheet.RhoA, onB = along ? -s * Sheet.RhoB : c * Sheet.RhoB;
        double factor = along ? Length / (Width * Width) : 1 / Width;
        return
        [
            factor * onA * ea * ea, factor * onA * eb * eb, factor * onA * 2 * ea * eb,
            factor * onB * ea * ea, factor * onB * eb * eb, factor * onB * 2 * ea * eb,
        ];
    }
}
