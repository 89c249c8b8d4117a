namespace FieldSolve.Sparse;

/// <summary>
/// Division of the elimination for several threads: subtrees of supernodes that one thread each works through, and the supernodes above them. Every
/// subtree and every supernode above has room of its own for update matrices, so that they do not depend on the sequence.
/// </summary>
internal sealed class ParallelPlan
{
    /// <summary>No subtree takes more than one part in this many of the whole work, unless it is a single supernode.</summary>
    private const int Parts = 16;

    public ParallelPlan(SparseAnalysis analysis)
    {
        SupernodeTree tree = analysis.Tree;
        int count = tree.Count;
        double[] work = new double[count];
        First = new int[count];
        for (int t = 0; t < count; t++)
        {
            First[t] = t;
        }
        for (int t = 0; t < count; t++)
        {
            work[t] += analysis.FlopsOf(t) + 200.0 * tree.Width(t) * tree.Height(t);   // small fronts: memory, not arithmetic
            int p = tree.Parent[t];
            if (p >= 0)
            {
                work[p] += work[t];
                First[p] = Math.Min(First[p], First[t]);
            }
        }
        double most = 0;
        for (int t = 0; t < count; t++)
        {
            most += tree.Parent[t] < 0 ? work[t] / Parts : 0;
        }
        UpdateStart = new long[count];
        IsAbove = new bool[count];
        Waiting = new int[count];
        var roots = new List<int>();
        for (int t = count - 1; t >= 0; t--)
        {
            int p = tree.Parent[t];
            if (p >= 0 && !IsAbove[p])
            {
                continue;   // inside a subtree
            }
            IsAbove[t] = work[t] > most && analysis.ChildStart[t] < analysis.ChildStart[t + 1];
            if (p >= 0)
            {
                Waiting[p]++;
            }
            if (IsAbove[t])
            {
                UpdateStart[t] = UpdateLength;
                UpdateLength += analysis.UpdateSize(t);
            }
            else
            {
                UpdateLength += analysis.PlaceUpdates(First[t], t + 1, UpdateLength, UpdateStart);
                roots.Add(t);
            }
        }
        Roots = [.. roots.OrderByDescending(t => work[t]).ThenBy(t => t)];
    }

    /// <summary>Roots of the subtrees, the most work first.</summary>
    public int[] Roots { get; }

    /// <summary>First supernode of the subtree of each supernode.</summary>
    public int[] First { get; }

    /// <summary>True above the subtrees.</summary>
    public bool[] IsAbove { get; }

    /// <summary>For a supernode above: its children.</summary>
    public int[] Waiting { get; }

    /// <summary>Where the update matrix of each supernode begins.</summary>
    public long[] UpdateStart { get; }

    /// <summary>Doubles for all of them.</summary>
    public long UpdateLength { get; }
}
