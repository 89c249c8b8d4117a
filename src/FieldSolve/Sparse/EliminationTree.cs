namespace FieldSolve.Sparse;

/// <summary>Elimination tree of a pattern in a given order, and the number of non-zeros of each column of its factor.</summary>
internal static class EliminationTree
{
    /// <summary>Parent of each step of the elimination; -1 for a root.</summary>
    /// <param name="graph">The graph, in elimination order.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <remarks>J. W. H. Liu, ACM Trans. Math. Softw. 12 (1986) 127-148: links to the roots found so far, with compressed paths.</remarks>
    public static int[] Parents(EliminationGraph graph, CancellationToken cancel)
    {
        int n = graph.Size;
        int[] parent = new int[n], ancestor = new int[n];
        for (int j = 0; j < n; j++)
        {
            if ((j & 0xFFFF) == 0)
            {
                cancel.ThrowIfCancellationRequested();
            }
            parent[j] = -1;
            ancestor[j] = -1;
            foreach (int earlier in graph.Before(j))
            {
                int i = earlier;
                while (i >= 0 && i < j)
                {
                    int above = ancestor[i];
                    ancestor[i] = j;
                    if (above < 0)
                    {
                        parent[i] = j;
                    }
                    i = above;
                }
            }
        }
        return parent;
    }

    /// <summary>Postorder of a forest: entry k is the k-th node, children before parents, each subtree in one run.</summary>
    public static int[] Postorder(ReadOnlySpan<int> parent)
    {
        int n = parent.Length;
        int[] child = new int[n], sibling = new int[n], post = new int[n], stack = new int[n];
        Array.Fill(child, -1);
        int roots = -1;
        for (int j = n - 1; j >= 0; j--)
        {
            ref int list = ref (parent[j] < 0 ? ref roots : ref child[parent[j]]);
            sibling[j] = list;
            list = j;
        }
        int k = 0;
        for (int root = roots; root >= 0; root = sibling[root])
        {
            int top = 0;
            stack[0] = root;
            while (top >= 0)
            {
                int v = stack[top], c = child[v];
                if (c < 0)
                {
                    post[k++] = v;
                    top--;
                }
                else
                {
                    child[v] = sibling[c];
                    stack[++top] = c;
                }
            }
        }
        return post;
    }

    /// <summary>Non-zeros of each column of L, the diagonal included, for an equivalent order that is a postorder of its tree.</summary>
    /// <param name="graph">The graph, in elimination order.</param>
    /// <param name="order">Vertex of the graph eliminated at each step.</param>
    /// <param name="step">Inverse of <paramref name="order"/>.</param>
    /// <param name="parent">Parent of each step.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <remarks>J. R. Gilbert, E. G. Ng and B. W. Peyton, SIAM J. Matrix Anal. Appl. 15 (1994) 1075-1091: leaves of the row subtrees.</remarks>
    public static int[] ColumnCounts(EliminationGraph graph, int[] order, int[] step, int[] parent, CancellationToken cancel)
    {
        int n = order.Length;
        int[] count = new int[n], first = new int[n], lastFirst = new int[n], lastLeaf = new int[n], set = new int[n];
        for (int j = 0; j < n; j++)
        {
            first[j] = j;
            set[j] = j;
            lastFirst[j] = -1;
            lastLeaf[j] = -1;
        }
        for (int j = 0; j < n; j++)
        {
            if (parent[j] >= 0)
            {
                first[parent[j]] = Math.Min(first[parent[j]], first[j]);
            }
        }
        for (int j = 0; j < n; j++)
        {
            if ((j & 0xFFFF) == 0)
            {
                cancel.ThrowIfCancellationRequested();
            }
            if (first[j] == j)
            {
                count[j]++;
            }
            if (parent[j] >= 0)
            {
                count[parent[j]]--;
            }
            foreach (int later in graph.After(order[j]))
            {
                int i = step[later];
                if (first[j] <= lastFirst[i])
                {
                    continue;
                }
                lastFirst[i] = first[j];
                count[j]++;
                int before = lastLeaf[i];
                lastLeaf[i] = j;
                if (before >= 0)
                {
                    int common = before;
                    while (common != set[common])
                    {
                        common = set[common];
                    }
                    for (int s = before; s != common;)
                    {
                        int next = set[s];
                        set[s] = common;
                        s = next;
                    }
                    count[common]--;
                }
            }
            if (parent[j] >= 0)
            {
                set[j] = parent[j];
            }
        }
        for (int j = 0; j < n; j++)
        {
            if (parent[j] >= 0)
            {
                count[parent[j]] += count[j];
            }
        }
        return count;
    }
}
