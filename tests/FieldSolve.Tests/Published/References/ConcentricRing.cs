namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>
/// A ring with ideal contacts over its inner and outer rim: O. M. Corbino, Phys. Z. 12 (1911) 561. Radial by symmetry, so K = I / (2 pi r) and the voltage is a single integral.
/// SI units.
/// </summary>
internal static class ConcentricRing
{
    /// <summary>Ohmic sheet with a Hall part: no field along the circles, so only sigma_xx counts.</summary>
    public static double Resistance(double inner, double outer, double sigma) => Math.Log(outer / inner) / (2 * Math.PI * sigma);

    /// <summary>Any isotropic law, given its inverse E(K).</summary>
    public static double Voltage(double inner, double outer, double current, Func<double, double> fieldOf) =>
        Quadrature.Smooth(s => Math.Exp(s) * fieldOf(current / (2 * Math.PI * Math.Exp(s))), Math.Log(inner), Math.Log(outer));

    /// <summary>Inverse of the saturating law K = sigma E / (1 + (E/F)^m)^(1/m).</summary>
    public static Func<double, double> Saturating(double sigma, double field, double sharpness) => k =>
    {
        double part = k / (sigma * field);
        return field * part / Math.Pow(1 - Math.Pow(part, sharpness), 1 / sharpness);
    };

    /// <summary>The saturating law in closed form for sharpness 1 and 2.</summary>
    public static double SaturatingVoltage(double inner, double outer, double current, double sigma, double field, int sharpness)
    {
        double r = current / (2 * Math.PI * sigma * field);
        return field * r * (sharpness == 1
            ? Math.Log((outer - r) / (inner - r))
            : Math.Acosh(outer / r) - Math.Acosh(inner / r));
    }

    /// <summary>Inverse of the cubic law K = sigma E + c E³, by Newton's iteration.</summary>
    public static Func<double, double> Cubic(double sigma, double c) => k =>
    {
        double e = k / sigma;
        for (int i = 0; i < 60; i++)
        {
            e -= ((sigma * e) + (c * e * e * e) - k) / (sigma + (3 * c * e * e));
        }

        return e;
    };

    /// <summary>The cubic law in closed form, from the integral of r dE.</summary>
    public static double CubicVoltage(double inner, double outer, double current, double sigma, double c)
    {
        Func<double, double> fieldOf = Cubic(sigma, c);
        double e1 = fieldOf(current / (2 * Math.PI * inner)), e2 = fieldOf(current / (2 * Math.PI * outer));
        double Antiderivative(double e) => Math.Log(e / Math.Sqrt(sigma + (c * e * e))) / sigma;
        return (e2 * outer) - (e1 * inner) - (current / (2 * Math.PI) * (Antiderivative(e2) - Antiderivative(e1)));
    }
}
