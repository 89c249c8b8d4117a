using MathNet.Numerics.Integration;

namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>Integrals over an interval.</summary>
internal static class Quadrature
{
    private const int Order = 64;

    /// <summary>Gauss-Legendre of order 64, for smooth integrands.</summary>
    public static double Smooth(Func<double, double> f, double from, double to) => GaussLegendreRule.Integrate(f, from, to, Order);

    /// <summary>
    /// Double-exponential rule (H. Takahasi, M. Mori, Publ. RIMS Kyoto Univ. 9 (1974) 721) for integrands with powers at the ends. The
    /// integrand gets the distances to both ends of [0, length], each without cancellation.
    /// </summary>
    public static double Ends(Func<double, double, double> f, double length, double step = 1.0 / 16, double reach = 5.2)
    {
        double sum = 0;
        int n = (int)(reach / step);
        for (int k = -n; k <= n; k++)
        {
            double t = k * step, u = Math.PI / 2 * Math.Sinh(t);
            double left = length / (1 + Math.Exp(-2 * u)), right = length / (1 + Math.Exp(2 * u));
            double slope = Math.PI * Math.Cosh(t) * (left / length) * right;
            if (left > 0 && right > 0 && slope > 0)
            {
                sum += f(left, right) * slope;
            }
        }

        return step * sum;
    }
}
