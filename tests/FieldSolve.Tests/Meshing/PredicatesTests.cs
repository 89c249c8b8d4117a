using System.Numerics;
using FieldSolve.Geometry;

namespace FieldSolve.Tests.MeshingTests;

public class PredicatesTests
{
    // A double is m 2^e; with one exponent small enough for all, every coordinate becomes an integer.
    private static BigInteger Whole(double x)
    {
        const int Shift = 200;
        long bits = BitConverter.DoubleToInt64Bits(x);
        int exponent = (int)((bits >> 52) & 0x7ff);
        long mantissa = bits & 0xfffffffffffffL;
        if (exponent != 0)
        {
            mantissa |= 1L << 52;
            exponent--;
        }

        int power = exponent - 1074 + Shift;
        Assert.True(mantissa == 0 || power >= 0);
        BigInteger whole = mantissa == 0 ? BigInteger.Zero : new BigInteger(mantissa) << power;
        return x < 0 ? -whole : whole;
    }

    private static int ExactOrient(double[] p)
    {
        BigInteger[] w = Array.ConvertAll(p, Whole);
        return (((w[0] - w[4]) * (w[3] - w[5])) - ((w[1] - w[5]) * (w[2] - w[4]))).Sign;
    }

    private static int ExactInCircle(double[] p)
    {
        BigInteger[] w = Array.ConvertAll(p, Whole);
        BigInteger ax = w[0] - w[6], ay = w[1] - w[7], bx = w[2] - w[6], by = w[3] - w[7], cx = w[4] - w[6], cy = w[5] - w[7];
        return ((((ax * ax) + (ay * ay)) * ((bx * cy) - (cx * by)))
            + (((bx * bx) + (by * by)) * ((cx * ay) - (ax * cy)))
            + (((cx * cx) + (cy * cy)) * ((ax * by) - (bx * ay)))).Sign;
    }

    private static void CompareOrient(double[] p) =>
        Assert.Equal(ExactOrient(p), Math.Sign(Predicates.Orient(p[0], p[1], p[2], p[3], p[4], p[5])));

    private static void CompareInCircle(double[] p) =>
        Assert.Equal(ExactInCircle(p), Math.Sign(Predicates.InCircle(p[0], p[1], p[2], p[3], p[4], p[5], p[6], p[7])));

    [Theory]
    [InlineData(0, 1)]
    [InlineData(1e3, 1e-7)]
    [InlineData(0.1, 1e-9)]
    [InlineData(-12, 1)]
    public void Nearly_collinear_points_get_the_exact_sign(double offset, double scale)
    {
        Random random = new(17);
        for (int i = 0; i < 2000; i++)
        {
            double ax = offset + (scale * random.NextDouble()), ay = offset + (scale * random.NextDouble());
            double bx = offset + (scale * random.NextDouble()), by = offset + (scale * random.NextDouble());
            double t = (3 * random.NextDouble()) - 1;
            CompareOrient([ax, ay, bx, by, ax + (t * (bx - ax)), ay + (t * (by - ay))]);
        }
    }

    [Theory]
    [InlineData(0, 1)]
    [InlineData(100, 1)]
    [InlineData(1e3, 1e-7)]
    [InlineData(0.1, 1e-9)]
    public void Nearly_cocircular_points_get_the_exact_sign(double offset, double scale)
    {
        Random random = new(18);
        double[] p = new double[8];
        for (int i = 0; i < 2000; i++)
        {
            double start = 7 * random.NextDouble();
            for (int k = 0; k < 4; k++)
            {
                double angle = start + k + random.NextDouble();
                (p[2 * k], p[(2 * k) + 1]) = (offset + (scale * Math.Cos(angle)), offset + (scale * Math.Sin(angle)));
            }

            CompareInCircle(p);
        }
    }

    [Fact]
    public void Mixed_magnitudes_get_the_exact_sign()
    {
        Random random = new(19);
        double[] p = new double[8];
        for (int i = 0; i < 2000; i++)
        {
            for (int k = 0; k < 8; k++)
            {
                p[k] = (random.NextDouble() - 0.5) * Math.ScaleB(1, -random.Next(60));
            }

            CompareOrient(p);
            CompareInCircle(p);
        }
    }

    [Fact]
    public void Degenerate_points_give_exactly_zero()
    {
        Assert.Equal(0, Predicates.Orient(0.1, 0.1, 0.2, 0.2, 0.3, 0.3));
        Assert.Equal(0, Predicates.InCircle(0.1, 0.1, 0.7, 0.1, 0.7, 0.7, 0.1, 0.7));
        Assert.Equal(0, Predicates.InCircle(5, 0, 3, 4, -4, 3, 0, -5));
        Assert.True(Predicates.InCircle(5, 0, 3, 4, -4, 3, 0, Math.BitIncrement(-5)) > 0);
        Assert.True(Predicates.InCircle(5, 0, 3, 4, -4, 3, 0, Math.BitDecrement(-5)) < 0);
        Assert.True(Predicates.Orient(0, 0, 1, 1, 0.5, Math.BitIncrement(0.5)) > 0);
    }
}
