using MathNet.Numerics;

namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>
/// A rectangle with ideal contacts over its two ends, length over width given, Hall angle in radians (either sign: both results are even in it). The field in a half plane is a
/// product of powers: R. F. Wick, J. Appl. Phys. 25 (1954) 741; H. J. Lippmann, F. Kuhrt, Z. Naturforsch. 13a (1958) 462, 474.
/// </summary>
internal sealed class HallPlate
{
    private readonly double theta;
    private readonly double shift;  // Hall angle over pi
    private readonly double end;    // contacts are [1, end] and [-end, -1] on the line

    public HallPlate(double lengthOverWidth, double hallAngle)
    {
        theta = hallAngle;
        shift = hallAngle / Math.PI;
        end = 1 / Modulus(Math.Exp(-2 * Math.PI / lengthOverWidth));
    }

    /// <summary>Two-terminal resistance over rho_xx.</summary>
    public double Resistance
    {
        get
        {
            // On the free edge [-1, 1] the current runs along the edge; on the contact [1, end] it leaves at the Hall angle to the normal.
            double p = -0.5 - shift, q = -0.5 + shift, b = end;
            double drop = Quadrature.Ends(
                (l, r) => Math.Pow(r, p) * Math.Pow(l, q) * Math.Pow(b - 1 + r, q) * Math.Pow(b - 1 + l, p), 2);
            double current = Quadrature.Ends(
                (l, r) => Math.Pow(l, p) * Math.Pow(2 + l, q) * Math.Pow(r, q) * Math.Pow(2 * b - r, p), b - 1);
            return drop / (current * Math.Cos(theta));
        }
    }

    /// <summary>Hall voltage between the middles of the long edges over rho_xy I.</summary>
    public double GeometryFactor
    {
        get
        {
            // Along the middle line z = iy the current density turns by an angle that is zero at both ends. The trapezoidal rule in log y
            // converges exponentially: the integrands are analytic in a strip and fall off at both ends.
            const double Step = 0.2, Reach = 42;
            double along = 0, through = 0;
            for (double s = -Reach; s < Math.Log(end) + Reach; s += Step)
            {
                double y = Math.Exp(s), turn = 2 * shift * (Math.Atan(y) - Math.Atan(y / end));
                double weight = y / (Math.Sqrt(1 + (y * y)) * Math.Sqrt((end * end) + (y * y)));
                along += weight * Math.Sin(turn);
                through += weight * Math.Cos(turn);
            }

            return 1 - (along / through / Math.Tan(theta));
        }
    }

    /// <summary>What both ends together add to the length over width of a long bar: digamma form, exact up to exp(-pi L/W).</summary>
    public static double EndTerm(double hallAngle)
    {
        double g = hallAngle / Math.PI;
        return ((2 * SpecialFunctions.DiGamma(0.5)) - SpecialFunctions.DiGamma(0.5 + g) - SpecialFunctions.DiGamma(0.5 - g)) / Math.PI;
    }

    /// <summary>Geometry factor for a vanishing Hall angle, by separation of variables.</summary>
    public static double WeakFieldFactor(double lengthOverWidth)
    {
        double sum = 0, sign = 1;
        for (int n = 1; n < 4000; n += 2, sign = -sign)
        {
            // Pairs of the alternating series; the last term is halved.
            sum += sign * Math.Tanh(n * Math.PI / (2 * lengthOverWidth)) / ((double)n * n) * (n == 3999 ? 0.5 : 1);
        }

        return 8 * lengthOverWidth / (Math.PI * Math.PI) * sum;
    }

    // The modulus k = (theta2 / theta3)² of a nome.
    private static double Modulus(double q)
    {
        double two = 0, three = 0.5;
        for (int n = 0; n < 200; n++)
        {
            two += Math.Pow(q, n * (n + 1.0));
            three += Math.Pow(q, (n + 1.0) * (n + 1.0));
        }

        return Math.Sqrt(q) * Math.Pow(two / three, 2);
    }
}
