namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>Elements of a quadratic law in the crystal frame; conductances in S, the others in A m/V².</summary>
internal sealed record QuadraticElements(
    double A, double B, double D11 = 0, double D12 = 0, double D16 = 0, double D21 = 0, double D22 = 0, double D26 = 0)
{
    /// <summary>K_a, K_b.</summary>
    public (double A, double B) Current(double ea, double eb) => (
        (A * ea) + (D11 * ea * ea) + (D12 * eb * eb) + (2 * D16 * ea * eb),
        (B * eb) + (D21 * ea * ea) + (D22 * eb * eb) + (2 * D26 * ea * eb));
}

/// <summary>
/// A long strip that carries a uniform sheet current density at an angle to crystal a (radians), none across it. The law is from
/// I. Sodemann, L. Fu, Phys. Rev. Lett. 115 (2015) 216806; the angular form with one mirror line from K. Kang, T. Li, E. Sohn, J. Shan, K. F. Mak,
/// Nature Mater. 18 (2019) 324 (from memory; it follows from the law).
/// </summary>
internal sealed class UniformStrip(QuadraticElements law, double angle)
{
    /// <summary>Field along the current and to its left for a sheet current density in A/m: the root of the two equations, V/m.</summary>
    public (double Along, double Left) Field(double density)
    {
        (double s, double c) = Math.SinCos(angle);
        double ea = density * c / law.A, eb = density * s / law.B;
        for (int i = 0; i < 50; i++)
        {
            (double ka, double kb) = law.Current(ea, eb);
            double aa = law.A + (2 * law.D11 * ea) + (2 * law.D16 * eb), ab = (2 * law.D12 * eb) + (2 * law.D16 * ea);
            double ba = (2 * law.D21 * ea) + (2 * law.D26 * eb), bb = law.B + (2 * law.D22 * eb) + (2 * law.D26 * ea);
            double ra = ka - (density * c), rb = kb - (density * s), det = (aa * bb) - (ab * ba);
            ea -= ((bb * ra) - (ab * rb)) / det;
            eb -= ((aa * rb) - (ba * ra)) / det;
        }

        return ((c * ea) + (s * eb), (c * eb) - (s * ea));
    }

    /// <summary>Second-order field to the left over the squared first-order field along, at weak drive, m/V times V/m.</summary>
    public double LeftRatio
    {
        get
        {
            (double s, double c, double ka, double kb, double scale) = Parts();
            return scale * ((s * ka) - (law.A / law.B * c * kb));
        }
    }

    /// <summary>The same for the second-order field along.</summary>
    public double AlongRatio
    {
        get
        {
            (double s, double c, double ka, double kb, double scale) = Parts();
            return -scale * ((c * ka) + (law.A / law.B * s * kb));
        }
    }

    private (double S, double C, double Ka, double Kb, double Scale) Parts()
    {
        (double s, double c) = Math.SinCos(angle);
        double r = law.A / law.B, x = c, y = r * s, parallel = (c * x) + (s * y);
        return (s, c,
            (law.D11 * x * x) + (law.D12 * y * y) + (2 * law.D16 * x * y),
            (law.D21 * x * x) + (law.D22 * y * y) + (2 * law.D26 * x * y),
            1 / (law.A * parallel * parallel));
    }
}
