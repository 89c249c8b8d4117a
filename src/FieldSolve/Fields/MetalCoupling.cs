using FieldSolve.Geometry;
using FieldSolve.Meshing;

namespace FieldSolve.Fields;

/// <summary>
/// Current between the sheet and the metal of resistive contacts: along a rim n.K = (V - phi)/r with the line resistance r, under a pad
/// (V - phi)/rho per area with the specific contact resistivity rho. Both are linear, so they are kept as small dense blocks
/// g[i,j] = integral of N_i N_j / r over nodes i, j; the metal takes minus the row and column sums.
/// </summary>
internal sealed class MetalCoupling
{
    private MetalCoupling(int contact, int[] nodes, double[] conductance)
    {
        Contact = contact;
        Nodes = nodes;
        Conductance = conductance;
    }

    /// <summary>Contact whose metal is on the other side.</summary>
    public int Contact { get; }

    /// <summary>Sheet nodes: 3 on a rim piece, 6 under a pad.</summary>
    public int[] Nodes { get; }

    /// <summary>Dense block in siemens, row by row.</summary>
    public double[] Conductance { get; }

    /// <summary>All blocks of a space in a fixed order.</summary>
    public static MetalCoupling[] Of(FieldSpace space)
    {
        var list = new List<MetalCoupling>();
        foreach (MeshEdge e in space.Mesh.Edges)
        {
            int contact = space.Mesh.Domain.Edges[e.DomainEdge].Contact;
            if (contact >= 0 && !space.IsIdeal(contact))
            {
                list.Add(Rim(space, e, contact));
            }
        }

        for (int t = 0; t < space.Mesh.TriangleCount; t++)
        {
            if (space.Mesh.Region[t] >= 0)
            {
                list.Add(Pad(space, t, space.Mesh.Region[t]));
            }
        }

        return [.. list];
    }

    private static MetalCoupling Rim(FieldSpace space, MeshEdge e, int contact)
    {
        int[] nodes = [e.A, e.B, space.MiddleOf(e)];
        double[] block = new double[9];
        double half = Math.Sqrt(0.6) / 2;
        ReadOnlySpan<double> at = [0.5 - half, 0.5, 0.5 + half], weight = [5.0 / 18, 8.0 / 18, 5.0 / 18];
        Span<double> shape = stackalloc double[3];
        for (int q = 0; q < 3; q++)
        {
            double s = at[q];
            Span<double> slope = [(4 * s) - 3, (4 * s) - 1, 4 - (8 * s)];
            shape[0] = (1 - s) * (1 - (2 * s));
            shape[1] = s * ((2 * s) - 1);
            shape[2] = 4 * s * (1 - s);
            double dx = 0, dy = 0;
            for (int i = 0; i < 3; i++)
            {
                dx += slope[i] * space.NodeX[nodes[i]];
                dy += slope[i] * space.NodeY[nodes[i]];
            }

            Add(block, shape, weight[q] * new Point2(dx, dy).Length / space.Contacts[contact].LineResistance);
        }

        return new(contact, nodes, block);
    }

    private static MetalCoupling Pad(FieldSpace space, int triangle, int contact)
    {
        int[] nodes = space.Nodes.AsSpan(6 * triangle, 6).ToArray();
        double[] block = new double[36];
        Span<double> shape = stackalloc double[6];
        Span<double> slope = stackalloc double[12];
        for (int q = 0; q < TriangleRule.Count; q++)
        {
            double a = TriangleRule.Lambda[3 * q], b = TriangleRule.Lambda[(3 * q) + 1], c = TriangleRule.Lambda[(3 * q) + 2];
            QuadraticShape.Values(a, b, c, shape);
            QuadraticShape.Slopes(a, b, c, slope);
            double area = 0.5 * QuadraticShape.Jacobian(space, triangle, slope).Determinant;
            Add(block, shape, TriangleRule.Weight[q] * area / space.Contacts[contact].Resistivity);
        }

        return new(contact, nodes, block);
    }

    private static void Add(double[] block, ReadOnlySpan<double> shape, double weight)
    {
        for (int i = 0; i < shape.Length; i++)
        {
            for (int j = 0; j < shape.Length; j++)
            {
                block[(i * shape.Length) + j] += weight * shape[i] * shape[j];
            }
        }
    }
}
