namespace FieldSolve.Fields;

/// <summary>Shape functions of the six-node triangle: corners 0, 1, 2, then the middles of edges 01, 12, 20.</summary>
internal static class QuadraticShape
{
    /// <summary>Values of the six functions at barycentric coordinates (a, b, c).</summary>
    public static void Values(double a, double b, double c, Span<double> n)
    {
        n[0] = a * ((2 * a) - 1);
        n[1] = b * ((2 * b) - 1);
        n[2] = c * ((2 * c) - 1);
        n[3] = 4 * a * b;
        n[4] = 4 * b * c;
        n[5] = 4 * c * a;
    }

    /// <summary>Derivatives along the reference coordinates (b, c), a = 1 - b - c: pairs (dn/db, dn/dc) for the six functions.</summary>
    public static void Slopes(double a, double b, double c, Span<double> d)
    {
        d[0] = d[1] = 1 - (4 * a);
        d[2] = (4 * b) - 1;
        d[3] = 0;
        d[4] = 0;
        d[5] = (4 * c) - 1;
        d[6] = 4 * (a - b);
        d[7] = -4 * b;
        d[8] = 4 * c;
        d[9] = 4 * b;
        d[10] = -4 * c;
        d[11] = 4 * (a - c);
    }

    /// <summary>Derivative of the place with respect to the reference coordinates.</summary>
    public static (double Xb, double Xc, double Yb, double Yc, double Determinant) Jacobian(FieldSpace space, int triangle, ReadOnlySpan<double> slope)
    {
        // Relative to the first corner: near a contact end a triangle may be 1e-9 of its distance from the origin.
        int first = space.Nodes[6 * triangle];
        double x0 = space.NodeX[first], y0 = space.NodeY[first], xb = 0, xc = 0, yb = 0, yc = 0;
        for (int i = 1; i < 6; i++)
        {
            int n = space.Nodes[(6 * triangle) + i];
            double x = space.NodeX[n] - x0, y = space.NodeY[n] - y0;
            xb += slope[2 * i] * x;
            xc += slope[(2 * i) + 1] * x;
            yb += slope[2 * i] * y;
            yc += slope[(2 * i) + 1] * y;
        }

        return (xb, xc, yb, yc, (xb * yc) - (xc * yb));
    }
}
