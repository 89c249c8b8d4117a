using FieldSolve.Sparse;

namespace FieldSolve.Fields;

/// <summary>Finds which unknowns couple: those that share a triangle or a metal.</summary>
internal static class UnknownPattern
{
    /// <summary>The pattern of the Jacobian.</summary>
    public static SymmetricPattern Build(FieldSpace space)
    {
        int n = space.Size;
        int groups = space.Mesh.TriangleCount;
        MetalCoupling[] metals = MetalCoupling.Of(space);

        // Members of group g: unknowns of a triangle, or of a metal block with its contact.
        int[] first = new int[groups + metals.Length + 1];
        var members = new List<int>((6 * groups) + (7 * metals.Length));
        void Add(int unknown, int from)
        {
            if (unknown < n && members.IndexOf(unknown, from) < 0)
            {
                members.Add(unknown);
            }
        }

        for (int g = 0; g < first.Length - 1; g++)
        {
            int from = first[g] = members.Count;
            if (g < groups)
            {
                for (int i = 0; i < 6; i++)
                {
                    Add(space.Unknown[space.Nodes[(6 * g) + i]], from);
                }
            }
            else
            {
                MetalCoupling m = metals[g - groups];
                foreach (int node in m.Nodes)
                {
                    Add(space.Unknown[node], from);
                }

                Add(space.ContactUnknown[m.Contact], from);
            }
        }

        first[^1] = members.Count;
        (int[] start, int[] group) = Transpose(n, first, members);
        return Join(n, first, members, start, group);
    }

    private static (int[] Start, int[] Group) Transpose(int n, int[] first, List<int> members)
    {
        int[] start = new int[n + 1];
        foreach (int m in members)
        {
            start[m + 1]++;
        }

        for (int i = 0; i < n; i++)
        {
            start[i + 1] += start[i];
        }

        int[] at = start[..n], group = new int[members.Count];
        for (int g = 0; g < first.Length - 1; g++)
        {
            for (int k = first[g]; k < first[g + 1]; k++)
            {
                group[at[members[k]]++] = g;
            }
        }

        return (start, group);
    }

    private static SymmetricPattern Join(int n, int[] first, List<int> members, int[] start, int[] group)
    {
        int[] rowStart = new int[n + 1], seen = new int[n];
        Array.Fill(seen, -1);
        var columns = new List<int>(12 * n);
        for (int i = 0; i < n; i++)
        {
            seen[i] = i;
            columns.Add(i);
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                for (int m = first[group[k]]; m < first[group[k] + 1]; m++)
                {
                    int j = members[m];
                    if (seen[j] != i)
                    {
                        seen[j] = i;
                        columns.Add(j);
                    }
                }
            }

            System.Runtime.InteropServices.CollectionsMarshal.AsSpan(columns)[rowStart[i]..].Sort();
            rowStart[i + 1] = columns.Count;
        }

        return new(rowStart, [.. columns]);
    }
}
