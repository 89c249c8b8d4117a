namespace FieldSolve.Sparse;

/// <summary>
/// A pattern numbered by elimination steps, so that later passes run through memory. The neighbours of a step are kept apart: those
/// eliminated before it and those eliminated after it. That stays true in any equivalent order, since neighbours never change places.
/// </summary>
internal sealed class EliminationGraph
{
    private readonly int[] start;
    private readonly int[] middle;
    private readonly int[] column;
    private readonly int[] source;

    /// <summary>Renumbers a pattern.</summary>
    /// <param name="pattern">The graph.</param>
    /// <param name="order">Row eliminated at each step.</param>
    /// <param name="cancel">Stops the work.</param>
    public EliminationGraph(SymmetricPattern pattern, int[] order, CancellationToken cancel)
    {
        int n = order.Length, at = 0;
        int[] step = SupernodeTree.Inverse(order);
        start = new int[n + 1];
        middle = GC.AllocateUninitializedArray<int>(n);
        column = GC.AllocateUninitializedArray<int>(pattern.Count - n);
        source = GC.AllocateUninitializedArray<int>(pattern.Count - n);
        Diagonal = GC.AllocateUninitializedArray<int>(n);
        for (int j = 0; j < n; j++)
        {
            if ((j & 0xFFFF) == 0)
            {
                cancel.ThrowIfCancellationRequested();
            }
            int row = order[j], from = pattern.Start[row], to = pattern.Start[row + 1];
            int front = at, back = at += to - from - 1;
            for (int k = from; k < to; k++)
            {
                int i = step[pattern.Column[k]];
                if (i == j)
                {
                    Diagonal[j] = k;
                    continue;
                }
                // Written to both ends, kept at one: no branch to guess wrong.
                int before = (i - j) >>> 31;
                column[front] = column[back - 1] = i;
                source[front] = source[back - 1] = k;
                front += before;
                back -= 1 - before;
            }
            middle[j] = front;
            start[j + 1] = at;
        }
    }

    /// <summary>Number of steps.</summary>
    public int Size => middle.Length;

    /// <summary>Pairs of neighbours.</summary>
    public int Pairs => column.Length / 2;

    /// <summary>Index among the pattern's entries of the diagonal of each step.</summary>
    public int[] Diagonal { get; }

    /// <summary>Neighbours eliminated before a step, in no order.</summary>
    public ReadOnlySpan<int> Before(int j) => column.AsSpan(start[j]..middle[j]);

    /// <summary>Neighbours eliminated after a step, in no order.</summary>
    public ReadOnlySpan<int> After(int j) => column.AsSpan(middle[j]..start[j + 1]);

    /// <summary>Index among the pattern's entries of each of <see cref="After"/>.</summary>
    public ReadOnlySpan<int> SourceAfter(int j) => source.AsSpan(middle[j]..start[j + 1]);
}
