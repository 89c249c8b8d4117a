using System.Runtime.InteropServices;

namespace FieldSolve.Sparse;

/// <summary>The cuts and leaves of a dissection as a tree, and which of them each row belongs to. Nodes are numbered as they are added.</summary>
/// <param name="rows">Rows of the pattern.</param>
internal sealed class DissectionTree(int rows)
{
    private readonly int[] node = Filled(rows);
    private readonly List<int> parent = [];
    private readonly List<int> depth = [];
    private readonly List<bool> leaf = [];

    /// <summary>Nodes in elimination order: those below before those above.</summary>
    private readonly List<int> sequence = [];

    /// <summary>Adds a leaf with its rows.</summary>
    public void AddLeaf(int above, ReadOnlySpan<int> of)
    {
        int t = Add(above, true);
        sequence.Add(t);
        foreach (int row in of)
        {
            node[row] = t;
        }
    }

    /// <summary>Adds a cut; <see cref="Close"/> it when both of its parts are in the tree.</summary>
    public int AddCut(int above) => Add(above, false);

    /// <summary>Ends a cut: it is eliminated now.</summary>
    public void Close(int cut) => sequence.Add(cut);

    /// <summary>Puts a row into a cut.</summary>
    public void Put(int row, int cut) => node[row] = cut;

    /// <summary>Puts followers as deep as their neighbours allow: into the deepest of their nodes, or where these part.</summary>
    /// <param name="pattern">The graph.</param>
    /// <param name="followers">Rows without a node.</param>
    /// <param name="number">Not negative for the rows that were dissected.</param>
    public void Follow(SymmetricPattern pattern, ReadOnlySpan<int> followers, int[] number)
    {
        int[] start = pattern.Start, column = pattern.Column;
        foreach (int row in followers)
        {
            int t = -1;
            bool parted = false;
            for (int k = start[row]; k < start[row + 1]; k++)
            {
                if (number[column[k]] < 0)
                {
                    continue;
                }
                int s = node[column[k]];
                if (t < 0 || s == t)
                {
                    t = s;
                    continue;
                }
                int common = Common(s, t);
                if (common == t && !parted)
                {
                    t = s;
                }
                else if (common != s && common != t)
                {
                    t = common;
                    parted = true;
                }
            }
            node[row] = t;
        }
        // Two followers of one triangle within a cut may have gone to either side of it; one of them goes back. Moving up keeps the others in line.
        foreach (int row in followers)
        {
            int t = node[row];
            for (int k = start[row]; k < start[row + 1]; k++)
            {
                int s = node[column[k]];
                if (s >= 0 && s != t)
                {
                    int common = Common(s, t);
                    t = common == s ? t : common;
                }
            }
            node[row] = t;
        }
    }

    /// <summary>Writes the rows of the tree in elimination order; the leaves are ordered by constrained minimum degree.</summary>
    public void Fill(SymmetricPattern pattern, Span<int> order, CancellationToken cancel)
    {
        int[] start = new int[sequence.Count + 1], place = new int[sequence.Count];
        for (int k = 0; k < place.Length; k++)
        {
            place[sequence[k]] = k;
        }
        foreach (int t in node)
        {
            if (t >= 0)
            {
                start[place[t] + 1]++;
            }
        }
        for (int k = 0; k < place.Length; k++)
        {
            start[k + 1] += start[k];
        }
        int[] next = start.AsSpan(0, place.Length).ToArray();
        for (int row = 0; row < node.Length; row++)
        {
            if (node[row] >= 0)
            {
                order[next[place[node[row]]]++] = row;
            }
        }
        var leaves = new LeafOrdering(pattern);
        for (int k = 0; k < place.Length; k++)
        {
            if (leaf[sequence[k]])
            {
                cancel.ThrowIfCancellationRequested();
                leaves.Order(order[start[k]..start[k + 1]]);
            }
        }
    }

    private static int[] Filled(int rows)
    {
        int[] none = GC.AllocateUninitializedArray<int>(rows);
        Array.Fill(none, -1);
        return none;
    }

    private int Add(int above, bool isLeaf)
    {
        parent.Add(above);
        depth.Add(above < 0 ? 0 : depth[above] + 1);
        leaf.Add(isLeaf);
        return parent.Count - 1;
    }

    private int Common(int s, int t)
    {
        ReadOnlySpan<int> up = CollectionsMarshal.AsSpan(parent), down = CollectionsMarshal.AsSpan(depth);
        while (s != t)
        {
            if (down[s] >= down[t])
            {
                s = up[s];
            }
            else
            {
                t = up[t];
            }
        }
        return s;
    }
}
