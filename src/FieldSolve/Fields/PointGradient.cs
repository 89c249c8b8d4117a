namespace FieldSolve.Fields;

/// <summary>Gradient and place at a single quadrature point; for the few points where speed does not matter.</summary>
internal static class PointGradient
{
    /// <summary>Gradient of a function given by its unknowns (V/m for a potential).</summary>
    public static (double X, double Y) Of(FieldSpace space, int triangle, int point, ReadOnlySpan<double> function) =>
        At(space, triangle, TriangleRule.Lambda[3 * point], TriangleRule.Lambda[(3 * point) + 1], TriangleRule.Lambda[(3 * point) + 2], function);

    /// <summary>Gradient at barycentric coordinates (a, b, c).</summary>
    public static (double X, double Y) At(FieldSpace space, int triangle, double a, double b, double c, ReadOnlySpan<double> function)
    {
        Span<double> slope = stackalloc double[12];
        QuadraticShape.Slopes(a, b, c, slope);
        (double xb, double xc, double yb, double yc, double det) = QuadraticShape.Jacobian(space, triangle, slope);
        double db = 0, dc = 0, first = function[space.Unknown[space.Nodes[6 * triangle]]];
        for (int i = 1; i < 6; i++)
        {
            double d = function[space.Unknown[space.Nodes[(6 * triangle) + i]]] - first;
            db += slope[2 * i] * d;
            dc += slope[(2 * i) + 1] * d;
        }

        return (((db * yc) - (dc * yb)) / det, ((dc * xb) - (db * xc)) / det);
    }

    /// <summary>Place of a quadrature point, metres.</summary>
    public static (double X, double Y) Place(FieldSpace space, int triangle, int point)
    {
        Span<double> shape = stackalloc double[6];
        QuadraticShape.Values(TriangleRule.Lambda[3 * point], TriangleRule.Lambda[(3 * point) + 1], TriangleRule.Lambda[(3 * point) + 2], shape);
        double x = 0, y = 0;
        for (int i = 0; i < 6; i++)
        {
            int n = space.Nodes[(6 * triangle) + i];
            x += shape[i] * space.NodeX[n];
            y += shape[i] * space.NodeY[n];
        }

        return (x, y);
    }
}
