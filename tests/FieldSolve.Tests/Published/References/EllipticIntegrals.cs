namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>
/// Legendre's elliptic integrals of the first kind with the parameter m = k². Complete ones by the arithmetic-geometric mean (C. F. Gauss);
/// incomplete ones by B. C. Carlson's duplication, Numer. Math. 33 (1979) 1.
/// </summary>
internal static class EllipticIntegrals
{
    /// <summary>K(m), 0 &lt;= m &lt; 1.</summary>
    public static double Complete(double m) => Complement(1 - m);

    /// <summary>K(1 - m1), 0 &lt; m1 &lt;= 1; loses no digits when m1 is small.</summary>
    public static double Complement(double m1)
    {
        double a = 1, b = Math.Sqrt(m1);
        while (Math.Abs(a - b) > 1e-15 * a)
        {
            (a, b) = ((a + b) / 2, Math.Sqrt(a * b));
        }

        return Math.PI / (a + b);
    }

    /// <summary>K(1 - m) / K(m).</summary>
    public static double Ratio(double m) => Complement(m) / Complete(m);

    /// <summary>F(angle | m), angle in [0, pi/2].</summary>
    public static double Incomplete(double angle, double m)
    {
        (double s, double c) = Math.SinCos(angle);
        return s * CarlsonF(c * c, 1 - (m * s * s), 1);
    }

    private static double CarlsonF(double x, double y, double z)
    {
        double mean = (x + y + z) / 3;
        while (Math.Max(Math.Abs(x - mean), Math.Max(Math.Abs(y - mean), Math.Abs(z - mean))) > 1e-3 * mean)
        {
            double lambda = Math.Sqrt(x * y) + Math.Sqrt(y * z) + Math.Sqrt(z * x);
            (x, y, z) = ((x + lambda) / 4, (y + lambda) / 4, (z + lambda) / 4);
            mean = (x + y + z) / 3;
        }

        double a = 1 - (x / mean), b = 1 - (y / mean), c = -a - b;
        double e2 = (a * b) - (c * c), e3 = a * b * c;
        return (1 - (e2 / 10) + (e3 / 14) + (e2 * e2 / 24) - (3 * e2 * e3 / 44)) / Math.Sqrt(mean);
    }
}
