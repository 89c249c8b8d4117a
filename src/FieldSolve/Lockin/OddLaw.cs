using FieldSolve.Laws;

namespace FieldSolve.Lockin;

/// <summary>Whether a law is odd, K(-E) = -K(E): then half a cycle mirrors the other.</summary>
internal static class OddLaw
{
    private const int Directions = 16;
    private const int PerDecade = 4;
    private const int LowestDecade = -3;
    private const int HighestDecade = 10;

    /// <summary>True when the law is odd to the last bit at fields of every size and direction; a second-order part of any weight shows at some of them.</summary>
    public static bool Is(LabLaw law)
    {
        double[] ex = new double[Directions], ey = new double[Directions], kx = new double[Directions], ky = new double[Directions];
        double[] back = new double[Directions], backY = new double[Directions];
        for (int step = LowestDecade * PerDecade; step <= HighestDecade * PerDecade; step++)
        {
            for (int d = 0; d < Directions; d++)
            {
                (double s, double c) = Math.SinCos(0.1 + (2 * Math.PI * d / Directions));
                double size = Math.Pow(10, step / (double)PerDecade);
                (ex[d], ey[d]) = (size * c, size * s);
            }

            try
            {
                law.Evaluate(ex, ey, kx, ky);
                law.Evaluate([.. ex.Select(v => -v)], [.. ey.Select(v => -v)], back, backY);
            }
            catch (FieldOutsideTableException)
            {
                return false;
            }

            for (int d = 0; d < Directions; d++)
            {
                if (kx[d] != -back[d] || ky[d] != -backY[d])
                {
                    return false;
                }
            }
        }

        return true;
    }
}
