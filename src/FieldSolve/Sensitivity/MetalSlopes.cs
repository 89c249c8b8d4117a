using FieldSolve.Device;
using FieldSolve.Fields;

namespace FieldSolve.Sensitivity;

/// <summary>
/// What resistive contacts add to the derivatives of a reading. Their part of z.R is the integral of (z - z_metal)(u - u_metal)/r along the rim, and
/// of the same over the area under a pad.
/// </summary>
internal static class MetalSlopes
{
    public static void Add(
        SheetEquations equations, ReadOnlySpan<double> u, ReadOnlySpan<double> z, int reading, double[,] contact, double[] nodeX, double[] nodeY)
    {
        FieldSpace space = equations.Space;
        foreach (MetalCoupling m in equations.Metals)
        {
            int n = m.Nodes.Length, metal = space.ContactUnknown[m.Contact];
            double sum = 0;
            for (int i = 0; i < n; i++)
            {
                for (int j = 0; j < n; j++)
                {
                    sum += (z[space.Unknown[m.Nodes[i]]] - z[metal]) * m.Conductance[(i * n) + j] * (u[space.Unknown[m.Nodes[j]]] - u[metal]);
                }
            }

            Contact c = space.Contacts[m.Contact];
            contact[reading, m.Contact] += sum / (c.Kind == ContactKind.Edge ? c.LineResistance : c.Resistivity);
            if (n == 3)
            {
                Rim(space, m, metal, c.LineResistance, u, z, nodeX, nodeY);
            }
            else
            {
                Pad(space, m, metal, c.Resistivity, u, z, nodeX, nodeY);
            }
        }
    }

    // The length of a rim piece changes by tangent.dt/ds.
    private static void Rim(
        FieldSpace space, MetalCoupling m, int metal, double resistance, ReadOnlySpan<double> u, ReadOnlySpan<double> z, double[] nodeX, double[] nodeY)
    {
        double half = Math.Sqrt(0.6) / 2;
        ReadOnlySpan<double> at = [0.5 - half, 0.5, 0.5 + half], weight = [5.0 / 18, 8.0 / 18, 5.0 / 18];
        Span<double> shape = stackalloc double[3], slope = stackalloc double[3];
        for (int q = 0; q < 3; q++)
        {
            double s = at[q];
            (slope[0], slope[1], slope[2]) = ((4 * s) - 3, (4 * s) - 1, 4 - (8 * s));
            (shape[0], shape[1], shape[2]) = ((1 - s) * (1 - (2 * s)), s * ((2 * s) - 1), 4 * s * (1 - s));
            double dx = 0, dy = 0, du = 0, dz = 0;
            for (int i = 0; i < 3; i++)
            {
                int node = m.Nodes[i];
                dx += slope[i] * space.NodeX[node];
                dy += slope[i] * space.NodeY[node];
                du += shape[i] * (u[space.Unknown[node]] - u[metal]);
                dz += shape[i] * (z[space.Unknown[node]] - z[metal]);
            }

            double factor = -du * dz * weight[q] / resistance / Math.Sqrt((dx * dx) + (dy * dy));
            for (int i = 0; i < 3; i++)
            {
                nodeX[m.Nodes[i]] += factor * dx * slope[i];
                nodeY[m.Nodes[i]] += factor * dy * slope[i];
            }
        }
    }

    private static void Pad(
        FieldSpace space, MetalCoupling m, int metal, double resistivity, ReadOnlySpan<double> u, ReadOnlySpan<double> z, double[] nodeX, double[] nodeY)
    {
        Span<double> shape = stackalloc double[6], slope = stackalloc double[12];
        for (int q = 0; q < TriangleRule.Count; q++)
        {
            double a = TriangleRule.Lambda[3 * q], b = TriangleRule.Lambda[(3 * q) + 1], c = TriangleRule.Lambda[(3 * q) + 2];
            QuadraticShape.Values(a, b, c, shape);
            QuadraticShape.Slopes(a, b, c, slope);
            double xb = 0, xc = 0, yb = 0, yc = 0, du = 0, dz = 0;
            for (int i = 0; i < 6; i++)
            {
                int node = m.Nodes[i];
                double x = space.NodeX[node] - space.NodeX[m.Nodes[0]], y = space.NodeY[node] - space.NodeY[m.Nodes[0]];
                xb += slope[2 * i] * x;
                xc += slope[(2 * i) + 1] * x;
                yb += slope[2 * i] * y;
                yc += slope[(2 * i) + 1] * y;
                du += shape[i] * (u[space.Unknown[node]] - u[metal]);
                dz += shape[i] * (z[space.Unknown[node]] - z[metal]);
            }

            // d(area) = div t, and area times grad N is free of the determinant.
            double factor = -0.5 * du * dz * TriangleRule.Weight[q] / resistivity;
            for (int i = 0; i < 6; i++)
            {
                double sb = slope[2 * i], sc = slope[(2 * i) + 1];
                nodeX[m.Nodes[i]] += factor * ((sb * yc) - (sc * yb));
                nodeY[m.Nodes[i]] += factor * ((sc * xb) - (sb * xc));
            }
        }
    }
}
