namespace FieldSolve.Fields;

/// <summary>
/// The charge of a sheet over a plane gate at potential 0: per unknown, C u with the consistent mass matrix of the quadratic triangles,
/// C[i,j] = c integral of N_i N_j, c in F/m². Only the sheet outside the metal carries charge: ideal pads are not part of the problem, and the sheet under a
/// resistive pad is left out to match. Stray capacitance of metal and leads is not modelled.
/// </summary>
public static class GateCharge
{
    // The four-point Gauss rule (degree 7), squared onto the triangle, is exact on straight triangles: the product of two quadratics has degree 4 and the
    // collapsed coordinate adds one. Along arcs the determinant varies slowly and the rest is far below the error of the elements.
    private const int Points = 4;

    /// <summary>Values of C in the order of the space's pattern; farads. The last entry is scrap.</summary>
    /// <param name="space">Nodes and unknowns.</param>
    /// <param name="capacitance">c, F/m².</param>
    /// <returns>Length <c>Pattern.Count + 1</c>.</returns>
    public static double[] Values(FieldSpace space, double capacitance)
    {
        ArgumentNullException.ThrowIfNull(space);
        double[] values = new double[space.Pattern.Count + 1];
        double[] block = new double[36];
        Span<double> shape = stackalloc double[6], slope = stackalloc double[12];
        for (int t = 0; t < space.Mesh.TriangleCount; t++)
        {
            if (space.Mesh.Region[t] >= 0)
            {
                continue;
            }

            Array.Clear(block);
            foreach ((double b, double c, double weight) in Rule)
            {
                QuadraticShape.Values(1 - b - c, b, c, shape);
                QuadraticShape.Slopes(1 - b - c, b, c, slope);
                double w = capacitance * weight * QuadraticShape.Jacobian(space, t, slope).Determinant;
                for (int i = 0; i < 6; i++)
                {
                    for (int j = 0; j < 6; j++)
                    {
                        block[(6 * i) + j] += w * shape[i] * shape[j];
                    }
                }
            }

            ReadOnlySpan<int> place = space.TrianglePlaces.AsSpan(36 * t, 36);
            for (int k = 0; k < 36; k++)
            {
                values[place[k]] += block[k];
            }
        }

        return values;
    }

    private static IReadOnlyList<(double B, double C, double Weight)> Rule { get; } = MakeRule();

    // b = x, c = (1 - x) y with x, y on the unit interval; the weights include the (1 - x).
    private static (double B, double C, double Weight)[] MakeRule()
    {
        double inner = Math.Sqrt((3.0 / 7) - (2.0 / 7 * Math.Sqrt(1.2))), outer = Math.Sqrt((3.0 / 7) + (2.0 / 7 * Math.Sqrt(1.2)));
        double large = (18 + Math.Sqrt(30)) / 72, small = (18 - Math.Sqrt(30)) / 72;
        double[] at = [(1 - outer) / 2, (1 - inner) / 2, (1 + inner) / 2, (1 + outer) / 2], weight = [small, large, large, small];
        var list = new List<(double, double, double)>();
        for (int i = 0; i < Points; i++)
        {
            for (int j = 0; j < Points; j++)
            {
                list.Add((at[i], (1 - at[i]) * at[j], weight[i] * weight[j] * (1 - at[i])));
            }
        }

        return [.. list];
    }
}
