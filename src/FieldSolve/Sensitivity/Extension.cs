using FieldSolve.Meshing;
using FieldSolve.Sparse;

namespace FieldSolve.Sensitivity;

/// <summary>
/// Carries displacements of the vertices on rims, pads' edges and tips into the mesh by linear triangles whose stiffness goes like one over their area,
/// so that the small triangles around a contact end move with it nearly as they are (T. E. Tezduyar, Arch. Comput. Methods Eng. 8, 83 (2001)). The
/// stiffness is that of the reference mesh: displacements extend linearly.
/// </summary>
internal sealed class Extension
{
    private readonly int[] free;              // vertex of each interior unknown
    private readonly int[] start = [0];       // couplings of the interior to given vertices, by rows
    private readonly int[] given = [];
    private readonly double[] coupling = [];
    private readonly SparseLu? factor;

    public Extension(TriangleMesh mesh, bool[] isGiven)
    {
        int[] number = new int[mesh.VertexCount];
        int count = 0;
        for (int v = 0; v < number.Length; v++)
        {
            number[v] = isGiven[v] ? -1 : count++;
        }

        free = new int[count];
        for (int v = 0; v < number.Length; v++)
        {
            if (number[v] >= 0)
            {
                free[number[v]] = v;
            }
        }

        if (count == 0)
        {
            return;
        }

        (int[] row, int[] column, double[] value) = Couplings(mesh, number);
        (int[] begin, int[] to, double[] sum) = Rows(count, mesh.VertexCount, row, column, value);

        // Split each row into the interior's own and what it takes from given vertices.
        var ownStart = new int[count + 1];
        start = new int[count + 1];
        var own = new List<int>(to.Length);
        var ownValue = new List<double>(to.Length);
        var known = new List<int>();
        var knownValue = new List<double>();
        for (int i = 0; i < count; i++)
        {
            for (int k = begin[i]; k < begin[i + 1]; k++)
            {
                int j = number[to[k]];
                (j >= 0 ? own : known).Add(j >= 0 ? j : to[k]);
                (j >= 0 ? ownValue : knownValue).Add(sum[k]);
            }

            ownStart[i + 1] = own.Count;
            start[i + 1] = known.Count;
        }

        (given, coupling) = ([.. known], [.. knownValue]);
        factor = new SparseLu(SparseAnalysis.Analyse(
            new SymmetricPattern(ownStart, [.. own]), [.. free.Select(v => mesh.X[v])], [.. free.Select(v => mesh.Y[v])]));
        factor.Factor([.. ownValue]);
    }

    /// <summary>Fills the interior from the given vertices.</summary>
    /// <param name="value">One value per vertex; the given ones are read, the others written.</param>
    public void Fill(double[] value)
    {
        if (factor is null)
        {
            return;
        }

        double[] right = new double[free.Length];
        for (int i = 0; i < right.Length; i++)
        {
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                right[i] -= coupling[k] * value[given[k]];
            }
        }

        factor.Solve(right, right);
        for (int i = 0; i < right.Length; i++)
        {
            value[free[i]] = right[i];
        }
    }

    // grad lambda_i . grad lambda_j of every triangle, for rows of the interior; the size of the sheet makes it a plain number.
    private static (int[] Row, int[] Column, double[] Value) Couplings(TriangleMesh mesh, int[] number)
    {
        int most = 9 * mesh.TriangleCount, n = 0;
        int[] row = new int[most], column = new int[most];
        double[] value = new double[most];
        Span<double> bx = stackalloc double[3], by = stackalloc double[3];
        double unit = mesh.Domain.Size * mesh.Domain.Size;
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            ReadOnlySpan<int> v = mesh.Corners.AsSpan(3 * t, 3);
            for (int k = 0; k < 3; k++)
            {
                int p = v[(k + 1) % 3], q = v[(k + 2) % 3];
                (bx[k], by[k]) = (mesh.Y[p] - mesh.Y[q], mesh.X[q] - mesh.X[p]);
            }

            double twice = (bx[0] * by[1]) - (bx[1] * by[0]);
            double scale = unit / (twice * twice);
            for (int i = 0; i < 3; i++)
            {
                for (int j = 0; j < 3 && number[v[i]] >= 0; j++)
                {
                    (row[n], column[n], value[n++]) = (number[v[i]], v[j], scale * ((bx[i] * bx[j]) + (by[i] * by[j])));
                }
            }
        }

        return (row[..n], column[..n], value[..n]);
    }

    // Rows with ascending columns and duplicates summed, by two stable counting sorts.
    private static (int[] Start, int[] Column, double[] Value) Rows(int rows, int columns, int[] row, int[] column, double[] value)
    {
        int[] byColumn = Sorted(column, columns, null), order = Sorted(row, rows, byColumn);
        int[] start = new int[rows + 1];
        var to = new List<int>(order.Length);
        var sum = new List<double>(order.Length);
        int k = 0;
        for (int i = 0; i < rows; i++)
        {
            int last = -1;
            for (; k < order.Length && row[order[k]] == i; k++)
            {
                if (column[order[k]] == last)
                {
                    sum[^1] += value[order[k]];
                }
                else
                {
                    last = column[order[k]];
                    to.Add(last);
                    sum.Add(value[order[k]]);
                }
            }

            start[i + 1] = to.Count;
        }

        return (start, [.. to], [.. sum]);
    }

    private static int[] Sorted(int[] key, int keys, int[]? before)
    {
        int[] at = new int[keys + 1], order = new int[key.Length];
        foreach (int k in key)
        {
            at[k + 1]++;
        }

        for (int i = 0; i < keys; i++)
        {
            at[i + 1] += at[i];
        }

        for (int i = 0; i < key.Length; i++)
        {
            int e = before is null ? i : before[i];
            order[at[key[e]]++] = e;
        }

        return order;
    }
}
