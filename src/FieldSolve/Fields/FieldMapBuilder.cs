using FieldSolve.Laws;

namespace FieldSolve.Fields;

/// <summary>Turns a solution into a map with one value per node.</summary>
public static class FieldMapBuilder
{
    /// <summary>Potential, field and current at the nodes.</summary>
    /// <param name="space">Nodes.</param>
    /// <param name="law">For the current.</param>
    /// <param name="u">Unknowns, V.</param>
    /// <param name="drain">Contact whose metal is at 0 V in the map.</param>
    /// <param name="wiring">Name of the wiring.</param>
    /// <param name="current">A.</param>
    /// <param name="currentIndex">Position in the list of currents.</param>
    public static FieldMap Build(
        FieldSpace space, LabLaw law, ReadOnlySpan<double> u, int drain, string wiring, double current, int currentIndex)
    {
        ArgumentNullException.ThrowIfNull(space);
        ArgumentNullException.ThrowIfNull(law);
        int nodes = space.NodeCount;
        double[] phi = new double[nodes], ex = new double[nodes], ey = new double[nodes], weight = new double[nodes];
        double zero = u[space.ContactUnknown[drain]];
        for (int n = 0; n < nodes; n++)
        {
            phi[n] = u[space.Unknown[n]] - zero;
        }

        for (int t = 0; t < space.Mesh.TriangleCount; t++)
        {
            Add(space, t, u, ex, ey, weight);
        }

        for (int n = 0; n < nodes; n++)
        {
            double w = weight[n] > 0 ? 1 / weight[n] : 0;
            ex[n] *= w;
            ey[n] *= w;
        }

        double[] kx = new double[nodes], ky = new double[nodes];
        law.Evaluate(ex, ey, kx, ky);
        double[] metal = new double[space.ContactUnknown.Length];
        for (int c = 0; c < metal.Length; c++)
        {
            metal[c] = u[space.ContactUnknown[c]] - zero;
        }

        return new FieldMap
        {
            X = space.NodeX,
            Y = space.NodeY,
            Nodes = space.Nodes,
            Potential = phi,
            Ex = ex,
            Ey = ey,
            Kx = kx,
            Ky = ky,
            ContactPotential = metal,
            Wiring = wiring,
            Current = current,
            CurrentIndex = currentIndex,
        };
    }

    // Gradient at the six nodes of one triangle, weighted with its area.
    private static void Add(FieldSpace space, int t, ReadOnlySpan<double> u, double[] ex, double[] ey, double[] weight)
    {
        ReadOnlySpan<double> corners = [1, 0, 0, 0, 1, 0, 0, 0, 1, 0.5, 0.5, 0, 0, 0.5, 0.5, 0.5, 0, 0.5];
        int a = space.Nodes[6 * t], b = space.Nodes[(6 * t) + 1], c = space.Nodes[(6 * t) + 2];
        double area = 0.5 * (((space.NodeX[b] - space.NodeX[a]) * (space.NodeY[c] - space.NodeY[a]))
            - ((space.NodeX[c] - space.NodeX[a]) * (space.NodeY[b] - space.NodeY[a])));
        for (int i = 0; i < 6; i++)
        {
            (double gx, double gy) = PointGradient.At(space, t, corners[3 * i], corners[(3 * i) + 1], corners[(3 * i) + 2], u);
            int n = space.Nodes[(6 * t) + i];
            ex[n] -= area * gx;
            ey[n] -= area * gy;
            weight[n] += area;
        }
    }
}
