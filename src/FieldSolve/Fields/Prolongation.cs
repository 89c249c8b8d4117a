namespace FieldSolve.Fields;

/// <summary>
/// Carries potentials from quadratic triangles to those of the once split mesh. The coarse nodes are the vertices of the split mesh,
/// with the same numbers; the new nodes take the coarse polynomial's value at the same reference coordinates.
/// </summary>
internal sealed class Prolongation
{
    private readonly FieldSpace coarse;
    private readonly FieldSpace fine;
    private readonly int[] parent;   // per new fine node: coarse triangle
    private readonly int[] second;   // the coarse triangle on the other side of a coarse edge, or -1
    private readonly byte[] kind;    // per new fine node: 3 * child + edge

    private static readonly double[][] Weights = MakeWeights();

    public Prolongation(FieldSpace coarse, FieldSpace fine)
    {
        this.coarse = coarse;
        this.fine = fine;
        if (fine.Mesh.VertexCount != coarse.NodeCount || fine.Mesh.TriangleCount != 4 * coarse.Mesh.TriangleCount)
        {
            throw new ArgumentException("The fine mesh is not the uniform split of the coarse one.", nameof(fine));
        }

        int added = fine.NodeCount - fine.Mesh.VertexCount;
        parent = new int[added];
        second = new int[added];
        kind = new byte[added];
        Array.Fill(parent, -1);
        Array.Fill(second, -1);
        for (int t = 0; t < fine.Mesh.TriangleCount; t++)
        {
            for (int k = 0; k < 3; k++)
            {
                int n = fine.Nodes[(6 * t) + 3 + k] - fine.Mesh.VertexCount;
                if (parent[n] < 0)
                {
                    parent[n] = t / 4;
                    kind[n] = (byte)((3 * (t % 4)) + k);
                }
                else if (parent[n] != t / 4)
                {
                    second[n] = t / 4;
                }
            }
        }
    }

    /// <summary>Coarse triangle in which each new node of the fine space was first met.</summary>
    public ReadOnlySpan<int> Parent => parent;

    /// <summary>Coarse triangle on the other side when the new node lies on a coarse edge; else -1.</summary>
    public ReadOnlySpan<int> Second => second;

    /// <summary>Fills fine unknowns from coarse ones. Both vectors carry the zero of the potential at their end.</summary>
    public void Apply(ReadOnlySpan<double> from, Span<double> to)
    {
        for (int n = 0; n < coarse.NodeCount; n++)
        {
            to[fine.Unknown[n]] = from[coarse.Unknown[n]];
        }

        for (int c = 0; c < coarse.Contacts.Count; c++)
        {
            to[fine.ContactUnknown[c]] = from[coarse.ContactUnknown[c]];
        }

        for (int k = 0; k < parent.Length; k++)
        {
            int unknown = fine.Unknown[coarse.NodeCount + k];
            if (IsFree(unknown))
            {
                to[unknown] = Interpolate(k, from, coarse.Unknown);
            }
        }

        to[fine.Size] = 0;
    }

    /// <summary>
    /// What a fine function adds to its own coarse interpolant, per new fine node (0 where the node belongs to an ideal contact).
    /// </summary>
    public void Detail(ReadOnlySpan<double> function, Span<double> detail)
    {
        for (int k = 0; k < parent.Length; k++)
        {
            int unknown = fine.Unknown[coarse.NodeCount + k];
            detail[k] = IsFree(unknown) ? function[unknown] - Interpolate(k, function, fine.Unknown) : 0;
        }
    }

    /// <summary>Fine unknown of each new node.</summary>
    public int UnknownOf(int added) => fine.Unknown[coarse.NodeCount + added];

    // Nodes of ideal contacts, and the zero, have no unknown of their own.
    private bool IsFree(int unknown) => unknown < fine.Size - (coarse.Contacts.Count - 1);

    private double Interpolate(int added, ReadOnlySpan<double> function, int[] unknownOfNode)
    {
        double[] w = Weights[kind[added]];
        double sum = 0;
        for (int i = 0; i < 6; i++)
        {
            sum += w[i] * function[unknownOfNode[coarse.Nodes[(6 * parent[added]) + i]]];
        }

        return sum;
    }

    private static double[][] MakeWeights()
    {
        // Corners of the four children (UniformSplit's order) as barycentric coordinates of the parent, doubled.
        int[][][] child =
        [
            [[2, 0, 0], [1, 1, 0], [1, 0, 1]],
            [[1, 1, 0], [0, 2, 0], [0, 1, 1]],
            [[1, 0, 1], [0, 1, 1], [0, 0, 2]],
            [[1, 1, 0], [0, 1, 1], [1, 0, 1]],
        ];
        double[][] weights = new double[12][];
        for (int c = 0; c < 4; c++)
        {
            for (int k = 0; k < 3; k++)
            {
                int[] p = child[c][k], q = child[c][(k + 1) % 3];
                double[] w = new double[6];
                QuadraticShape.Values((p[0] + q[0]) / 4.0, (p[1] + q[1]) / 4.0, (p[2] + q[2]) / 4.0, w);
                weights[(3 * c) + k] = w;
            }
        }

        return weights;
    }
}
