namespace FieldSolve.Fields;

/// <summary>
/// Six-point rule of degree 4 on the triangle; weights sum to 1 (to be multiplied by the area). G. Strang, G. J. Fix, An Analysis of
/// the Finite Element Method (1973), and D. A. Dunavant, Int. J. Numer. Methods Eng. 21, 1129 (1985); the nodes and weights are
/// computed here from their closed forms.
/// </summary>
internal static class TriangleRule
{
    public const int Count = 6;

    /// <summary>Barycentric coordinates, three per point.</summary>
    public static readonly double[] Lambda = new double[3 * Count];

    /// <summary>Weights.</summary>
    public static readonly double[] Weight = new double[Count];

    static TriangleRule()
    {
        double root10 = Math.Sqrt(10), inner = Math.Sqrt(38 - (44 * Math.Sqrt(2.0 / 5)));
        double near = (8 - root10 + inner) / 18, far = (8 - root10 - inner) / 18;
        double weightRoot = Math.Sqrt(213125 - (53320 * root10));
        Fill(0, near, (620 + weightRoot) / 3720);
        Fill(3, far, (620 - weightRoot) / 3720);
    }

    private static void Fill(int first, double a, double weight)
    {
        for (int k = 0; k < 3; k++)
        {
            Weight[first + k] = weight;
            for (int c = 0; c < 3; c++)
            {
                Lambda[(3 * (first + k)) + c] = c == k ? 1 - (2 * a) : a;
            }
        }
    }
}
