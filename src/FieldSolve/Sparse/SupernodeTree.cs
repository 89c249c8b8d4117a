namespace FieldSolve.Sparse;

/// <summary>
/// Groups of consecutive elimination steps that are treated as one dense block (supernodes), as a forest in postorder.
/// Supernode t holds the steps First[t] .. First[t + 1] - 1; its front has these steps first, then the later steps Rows of t.
/// </summary>
/// <remarks>
/// I. S. Duff and J. K. Reid, ACM Trans. Math. Softw. 9 (1983) 302-325 (fronts, merging of nodes);
/// C. C. Ashcraft and R. G. Grimes, ACM Trans. Math. Softw. 15 (1989) 291-309 (relaxed supernodes).
/// </remarks>
internal sealed class SupernodeTree
{
    /// <summary>Vertex of the graph eliminated at each step.</summary>
    public required int[] Order { get; init; }

    /// <summary>Inverse of <see cref="Order"/>.</summary>
    public required int[] Step { get; init; }

    /// <summary>First step of each supernode; one entry more at the end.</summary>
    public required int[] First { get; init; }

    /// <summary>Parent supernode, or -1.</summary>
    public required int[] Parent { get; init; }

    /// <summary>Where the rows of each supernode begin in <see cref="Rows"/>.</summary>
    public required int[] RowStart { get; init; }

    /// <summary>Steps below the block of each supernode, ascending.</summary>
    public required int[] Rows { get; init; }

    /// <summary>Non-zeros of L and U without the explicit zeros of merged supernodes, both diagonals counted.</summary>
    public required long ExactNonZeros { get; init; }

    /// <summary>Number of supernodes.</summary>
    public int Count => Parent.Length;

    /// <summary>Steps of the block of a supernode.</summary>
    public int Width(int t) => First[t + 1] - First[t];

    /// <summary>Order of the front of a supernode.</summary>
    public int Height(int t) => First[t + 1] - First[t] + RowStart[t + 1] - RowStart[t];

    /// <summary>Builds the forest for the elimination of a graph in about its own order: only steps that commute change places.</summary>
    /// <param name="graph">The graph, in a fill-reducing order.</param>
    /// <param name="cancel">Stops the work.</param>
    public static SupernodeTree Build(EliminationGraph graph, CancellationToken cancel)
    {
        int n = graph.Size;
        int[] parent = EliminationTree.Parents(graph, cancel);
        int[] order = EliminationTree.Postorder(parent), step = Inverse(order), above = new int[n];
        for (int k = 0; k < n; k++)
        {
            int p = parent[order[k]];
            above[k] = p < 0 ? -1 : step[p];
        }
        cancel.ThrowIfCancellationRequested();
        int[] count = EliminationTree.ColumnCounts(graph, order, step, above, cancel);
        cancel.ThrowIfCancellationRequested();

        // Largest runs of steps with nested columns.
        int[] nodeOf = new int[n];
        var first = new List<int>(n / 2 + 2);
        for (int j = 0; j < n; j++)
        {
            if (j == 0 || above[j - 1] != j || count[j - 1] != count[j] + 1)
            {
                first.Add(j);
            }
            nodeOf[j] = first.Count - 1;
        }
        int nodes = first.Count;
        first.Add(n);
        int[] nodeParent = new int[nodes], width = new int[nodes], height = new int[nodes];
        for (int t = 0; t < nodes; t++)
        {
            int p = above[first[t + 1] - 1];
            nodeParent[t] = p < 0 ? -1 : nodeOf[p];
            width[t] = first[t + 1] - first[t];
            height[t] = count[first[t]];
        }
        int[] group = Merge(nodeParent, width, height);
        return Renumber(graph, order, first, nodeParent, group, height, width, 2 * count.Sum(c => (long)c), cancel);
    }

    // Merges children into parents where the time model says that one larger block is faster, in spite of its zeros.
    // Returns the node each node was merged into (itself if none); width and height are those of the merged nodes.
    private static int[] Merge(int[] parent, int[] width, int[] height)
    {
        int nodes = parent.Length;
        int[] into = new int[nodes], child = new int[nodes], sibling = new int[nodes];
        Array.Fill(child, -1);
        for (int t = 0; t < nodes; t++)
        {
            into[t] = t;
        }
        for (int t = 0; t < nodes; t++)
        {
            // All nodes below t are settled: try the children of t, the last ones first.
            for (int c = child[t]; c >= 0; c = sibling[c])
            {
                int s = width[t] + width[c], m = height[t] + width[c];
                if (FrontCost.Of(s, m) <= FrontCost.Of(width[t], height[t]) + FrontCost.Of(width[c], height[c]))
                {
                    into[c] = t;
                    width[t] = s;
                    height[t] = m;
                }
            }
            if (parent[t] >= 0)
            {
                sibling[t] = child[parent[t]];
                child[parent[t]] = t;
            }
        }
        for (int t = nodes - 1; t >= 0; t--)
        {
            into[t] = into[into[t]];   // parents are settled before their children
        }
        return into;
    }

    private static SupernodeTree Renumber(
        EliminationGraph graph, int[] order, List<int> first, int[] nodeParent, int[] group, int[] height, int[] width, long exact,
        CancellationToken cancel)
    {
        int n = order.Length, nodes = nodeParent.Length, groups = 0;
        int[] number = new int[nodes];
        for (int t = 0; t < nodes; t++)
        {
            number[t] = group[t] == t ? groups++ : -1;
        }
        int[] groupParent = new int[groups], top = new int[groups];
        for (int t = 0; t < nodes; t++)
        {
            if (group[t] == t)
            {
                top[number[t]] = t;
                groupParent[number[t]] = nodeParent[t] < 0 ? -1 : number[group[nodeParent[t]]];
            }
        }
        int[] post = EliminationTree.Postorder(groupParent), place = Inverse(post);
        int[] start = new int[groups + 1], parent = new int[groups], rowStart = new int[groups + 1];
        for (int k = 0; k < groups; k++)
        {
            int g = post[k], t = top[g];
            parent[k] = groupParent[g] < 0 ? -1 : place[groupParent[g]];
            start[k + 1] = start[k] + width[t];
            rowStart[k + 1] = checked(rowStart[k] + height[t] - width[t]);
        }
        int[] fill = start.AsSpan(0, groups).ToArray(), newOrder = new int[n], nodeOf = new int[n];
        for (int t = 0; t < nodes; t++)
        {
            int k = place[number[group[t]]];
            for (int j = first[t]; j < first[t + 1]; j++)
            {
                nodeOf[fill[k]] = k;
                newOrder[fill[k]++] = order[j];
            }
        }
        int[] step = Inverse(newOrder);
        cancel.ThrowIfCancellationRequested();

        // Each row i is a row of the supernodes on the paths from its non-zeros up to its own: ascending i leaves the lists sorted.
        int[] rows = new int[rowStart[groups]], mark = new int[groups];
        rowStart.AsSpan(0, groups).CopyTo(fill);
        Array.Fill(mark, -1);
        for (int i = 0; i < n; i++)
        {
            if ((i & 0xFFFF) == 0)
            {
                cancel.ThrowIfCancellationRequested();
            }
            mark[nodeOf[i]] = i;
            foreach (int earlier in graph.Before(newOrder[i]))
            {
                for (int t = nodeOf[step[earlier]]; mark[t] != i; t = parent[t])
                {
                    mark[t] = i;
                    rows[fill[t]++] = i;
                }
            }
        }
        return new SupernodeTree { Order = newOrder, Step = step, First = start, Parent = parent, RowStart = rowStart, Rows = rows, ExactNonZeros = exact };
    }

    /// <summary>Inverse of a permutation.</summary>
    public static int[] Inverse(int[] permutation)
    {
        int[] inverse = new int[permutation.Length];
        for (int i = 0; i < permutation.Length; i++)
        {
            inverse[permutation[i]] = i;
        }
        return inverse;
    }
}
