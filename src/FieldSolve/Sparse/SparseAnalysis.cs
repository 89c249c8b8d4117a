namespace FieldSolve.Sparse;

/// <summary>
/// What the factorisation of a pattern needs to know: a fill-reducing elimination order, the supernodes, where each non-zero
/// goes, and how large the storage is. Made once per pattern, used for any number of factorisations. Immutable.
/// </summary>
public sealed class SparseAnalysis
{
    /// <summary>Doubles of one vector register; rows of panels and fronts are padded to it.</summary>
    internal const int Lanes = 8;

    private ParallelPlan? plan;

    private SparseAnalysis(
        SymmetricPattern pattern, SupernodeTree tree, EliminationGraph graph, int[] order, int[] mirror, CancellationToken cancel)
    {
        Pattern = pattern;
        Tree = tree;
        Order = Array.ConvertAll(tree.Order, k => order[k]);
        (EntryStart, EntryPlace, EntryRight, EntryBelow, Diagonal) = Entries(tree, graph, mirror, cancel);
        cancel.ThrowIfCancellationRequested();
        RowPlace = RowPlaces(tree);
        (ChildStart, Children) = ChildLists(tree);

        int count = tree.Count;
        PanelStart = new long[count + 1];
        UpdateStart = new long[count];
        long nonZeros = 0;
        double flops = 0;
        for (int t = 0; t < count; t++)
        {
            int s = tree.Width(t), m = tree.Height(t);
            PanelStart[t + 1] = PanelStart[t] + (long)s * (s + 1) / 2 + (long)s * (m - s);
            LargestPanel = Math.Max(LargestPanel, (long)s * Stride(t));
            nonZeros += 2L * s * m - (long)s * s;
            flops += FlopsOf(t);
            LargestFront = Math.Max(LargestFront, Stride(t));
        }
        FactorNonZeros = nonZeros;
        Flops = flops;
        UpdateLength = PlaceUpdates(0, count, 0, UpdateStart);
    }

    /// <summary>The pattern analysed.</summary>
    public SymmetricPattern Pattern { get; }

    /// <summary>Stored non-zeros of L and U together (the unit diagonal of L not counted), explicit zeros of merged supernodes included.</summary>
    public long FactorNonZeros { get; }

    /// <summary>Non-zeros of L and U in the order chosen, without the explicit zeros; both diagonals counted.</summary>
    internal long ExactNonZeros => Tree.ExactNonZeros;

    /// <summary>Additions and multiplications of one factorisation.</summary>
    public double Flops { get; }

    /// <summary>Bytes of the analysis itself.</summary>
    public long MemoryBytes => 4L * (2L * Tree.Rows.Length + 3L * EntryPlace.Length + 4L * Pattern.Size + 8L * Tree.Count);

    internal SupernodeTree Tree { get; }

    /// <summary>Row of the pattern eliminated at each step.</summary>
    internal int[] Order { get; }

    /// <summary>Non-zeros to the right of (and below) the diagonal, by elimination step: one entry more at the end.</summary>
    internal int[] EntryStart { get; }

    /// <summary>Place in the front of the step the entry belongs to.</summary>
    internal int[] EntryPlace { get; }

    /// <summary>Index among the caller's values of the entry right of the diagonal.</summary>
    internal int[] EntryRight { get; }

    /// <summary>Index among the caller's values of its mirror image below the diagonal.</summary>
    internal int[] EntryBelow { get; }

    /// <summary>Index among the caller's values of the diagonal entry, by elimination step.</summary>
    internal int[] Diagonal { get; }

    /// <summary>Place of each entry of the supernodes' rows in the front of the parent.</summary>
    internal int[] RowPlace { get; }

    internal int[] ChildStart { get; }

    internal int[] Children { get; }

    /// <summary>
    /// Where the panel of each supernode begins when there is one per supernode (L D Lᵀ); twice that for two (L and U). A panel has the triangle of the
    /// block, then Width rows of the rest.
    /// </summary>
    internal long[] PanelStart { get; }

    /// <summary>Where the update matrix of each supernode begins in the work space.</summary>
    internal long[] UpdateStart { get; }

    /// <summary>Doubles of work space for update matrices.</summary>
    internal long UpdateLength { get; }

    internal int LargestFront { get; }

    /// <summary>Most doubles of one padded panel.</summary>
    internal long LargestPanel { get; }

    /// <summary>Division of the work for several threads, made when first asked for.</summary>
    internal ParallelPlan Plan => LazyInitializer.EnsureInitialized(ref plan, () => new ParallelPlan(this));

    /// <summary>Padded length of a row of the front of a supernode.</summary>
    internal int Stride(int t) => (Tree.Height(t) + Lanes - 1) & -Lanes;

    /// <summary>Padded length of a row of the update matrix of a supernode.</summary>
    internal int UpdateStride(int t) => Stride(t) - (Tree.Width(t) & -Lanes);

    /// <summary>Additions and multiplications in the front of a supernode.</summary>
    internal double FlopsOf(int t)
    {
        double s = Tree.Width(t), r = Tree.Height(t) - s;
        return 2 * s * r * r + 2 * s * s * r + 2.0 / 3 * s * s * s;
    }

    /// <summary>Analyses a pattern: order, elimination tree, supernodes, storage.</summary>
    /// <param name="pattern">Symmetric pattern with the whole diagonal, columns ascending within a row.</param>
    /// <param name="x">First coordinate of each unknown, any unit; or empty. They only guide the ordering.</param>
    /// <param name="y">Second coordinate of each unknown, same unit as <paramref name="x"/>; or empty.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="ArgumentException">The pattern is not symmetric, not sorted or lacks a diagonal entry, or the coordinates do not match it.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public static SparseAnalysis Analyse(
        SymmetricPattern pattern, ReadOnlySpan<double> x, ReadOnlySpan<double> y, CancellationToken cancel = default)
    {
        ArgumentNullException.ThrowIfNull(pattern);
        int n = pattern.Size;
        if (x.Length != y.Length || (x.Length != 0 && x.Length != n))
        {
            throw new ArgumentException($"The coordinates must be empty or {n} each, but are {x.Length} and {y.Length}.", nameof(x));
        }
        int[] mirror = Mirror(pattern, cancel);
        cancel.ThrowIfCancellationRequested();
        int[] order = DissectionOrdering.Order(pattern, x, y, cancel);
        var graph = new EliminationGraph(pattern, order, cancel);
        cancel.ThrowIfCancellationRequested();
        SupernodeTree tree = SupernodeTree.Build(graph, cancel);
        cancel.ThrowIfCancellationRequested();
        return new SparseAnalysis(pattern, tree, graph, order, mirror, cancel);
    }

    // Checks the pattern and gives for each entry its mirror image. Rows come in ascending order, so the mirror images in each
    // row are met in ascending order too.
    private static int[] Mirror(SymmetricPattern pattern, CancellationToken cancel)
    {
        int[] start = pattern.Start, column = pattern.Column, mirror = new int[column.Length];
        int n = pattern.Size;
        if (start[0] != 0 || start[n] != column.Length)
        {
            throw new ArgumentException("The row starts do not span the columns of the pattern.", nameof(pattern));
        }
        int[] next = start.AsSpan(0, n).ToArray();
        for (int i = 0; i < n; i++)
        {
            if ((i & 0xFFFF) == 0)
            {
                cancel.ThrowIfCancellationRequested();
            }
            bool diagonal = false;
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                int c = column[k];
                if ((uint)c >= (uint)n || (k > start[i] && c <= column[k - 1]))
                {
                    throw new ArgumentException($"Row {i} of the pattern is not in ascending order or leaves the matrix.", nameof(pattern));
                }
                diagonal |= c == i;
                int image = next[c]++;
                if (image >= start[c + 1] || column[image] != i)
                {
                    throw new ArgumentException($"The pattern is not symmetric: row {i} and column {c}.", nameof(pattern));
                }
                mirror[k] = image;
            }
            if (!diagonal)
            {
                throw new ArgumentException($"Row {i} of the pattern has no diagonal entry.", nameof(pattern));
            }
        }
        return mirror;
    }

    private static (int[] Start, int[] Place, int[] Right, int[] Below, int[] Diagonal) Entries(
        SupernodeTree tree, EliminationGraph graph, int[] mirror, CancellationToken cancel)
    {
        int n = graph.Size, half = graph.Pairs, e = 0;
        int[] entryStart = new int[n + 1], diagonal = new int[n], local = new int[n];
        int[] place = GC.AllocateUninitializedArray<int>(half), right = GC.AllocateUninitializedArray<int>(half);
        int[] below = GC.AllocateUninitializedArray<int>(half);
        for (int t = 0; t < tree.Count; t++)
        {
            if ((t & 0xFFF) == 0)
            {
                cancel.ThrowIfCancellationRequested();
            }
            int first = tree.First[t], width = tree.Width(t), rows = tree.RowStart[t];
            for (int j = first; j < first + width; j++)
            {
                local[j] = j - first;
            }
            for (int r = rows; r < tree.RowStart[t + 1]; r++)
            {
                local[tree.Rows[r]] = width + r - rows;
            }
            for (int j = first; j < first + width; j++)
            {
                int row = tree.Order[j];
                ReadOnlySpan<int> after = graph.After(row), source = graph.SourceAfter(row);
                for (int k = 0; k < after.Length; k++)
                {
                    place[e] = local[tree.Step[after[k]]];
                    right[e] = source[k];
                    below[e++] = mirror[source[k]];
                }
                diagonal[j] = graph.Diagonal[row];
                entryStart[j + 1] = e;
            }
        }
        return (entryStart, place, right, below, diagonal);
    }

    private static int[] RowPlaces(SupernodeTree tree)
    {
        int[] places = new int[tree.Rows.Length];
        for (int t = 0; t < tree.Count; t++)
        {
            int parent = tree.Parent[t];
            if (parent < 0)
            {
                continue;
            }
            int first = tree.First[parent], width = tree.Width(parent), at = tree.RowStart[parent];
            for (int r = tree.RowStart[t]; r < tree.RowStart[t + 1]; r++)
            {
                int i = tree.Rows[r];
                if (i < first + width)
                {
                    places[r] = i - first;
                    continue;
                }
                while (tree.Rows[at] != i)   // both lists ascend
                {
                    at++;
                }
                places[r] = width + at - tree.RowStart[parent];
            }
        }
        return places;
    }

    private static (int[] Start, int[] Children) ChildLists(SupernodeTree tree)
    {
        int[] start = new int[tree.Count + 1];
        foreach (int p in tree.Parent)
        {
            if (p >= 0)
            {
                start[p + 1]++;
            }
        }
        for (int t = 0; t < tree.Count; t++)
        {
            start[t + 1] += start[t];
        }
        int[] children = new int[start[^1]], next = start.AsSpan(0, tree.Count).ToArray();
        for (int t = 0; t < tree.Count; t++)
        {
            if (tree.Parent[t] >= 0)
            {
                children[next[tree.Parent[t]]++] = t;
            }
        }
        return (start, children);
    }

    // Update matrices live from their own elimination to that of the parent. In postorder those of even depth form one stack and
    // those of odd depth another, so that a parent is placed while its children still stand. Returns the doubles needed.
    // The range is one subtree, or the whole forest; places start at an offset.
    internal long PlaceUpdates(int from, int to, long offset, long[] start)
    {
        int[] depth = new int[to - from];
        for (int t = to - 1; t >= from; t--)
        {
            int parent = Tree.Parent[t];
            depth[t - from] = parent < 0 || parent >= to ? 0 : depth[parent - from] + 1;
        }
        Span<long> top = [0, 0], peak = [0, 0];
        for (int t = from; t < to; t++)
        {
            int own = depth[t - from] & 1;
            start[t] = top[own];
            top[own] += UpdateSize(t);
            peak[own] = Math.Max(peak[own], top[own]);
            if (ChildStart[t] < ChildStart[t + 1])
            {
                top[1 - own] = start[Children[ChildStart[t]]];
            }
        }
        for (int t = from; t < to; t++)
        {
            start[t] += offset + ((depth[t - from] & 1) == 0 ? 0 : peak[0]);
        }
        return peak[0] + peak[1];
    }

    /// <summary>Doubles of the update matrix of a supernode.</summary>
    internal long UpdateSize(int t)
    {
        int r = Tree.Height(t) - Tree.Width(t);
        return r == 0 ? 0 : (long)((r + 3) & -4) * UpdateStride(t);
    }
}
