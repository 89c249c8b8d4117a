using System.Runtime.CompilerServices;

namespace FieldSolve.Sparse;

/// <summary>
/// Direct factorisation A = L U (rows and columns permuted alike) of a matrix with a symmetric pattern whose symmetric part is
/// positive definite; such a matrix needs no pivoting. The storage is allocated once and used again by each factorisation.
/// </summary>
/// <remarks>
/// Multifrontal method: I. S. Duff and J. K. Reid, ACM Trans. Math. Softw. 9 (1983) 302-325. Stability without pivoting:
/// G. H. Golub and C. Van Loan, Linear Algebra Appl. 28 (1979) 85-98.
/// Same matrix, same bits. Solves may run on several threads at once; a factorisation needs the object for itself.
/// </remarks>
public sealed unsafe partial class SparseLu
{
    private readonly SparseAnalysis analysis;
    private readonly double[] panelStore;
    private readonly double[] updateStore;
    private readonly double* panels;
    private readonly double* updates;
    private readonly double[] floor;
    private double[] parallelStore = [];
    private bool factored;

    /// <summary>Allocates the storage for factors of the analysed pattern.</summary>
    /// <exception cref="ArgumentException">The factor would have more than 2·10⁹ entries.</exception>
    public SparseLu(SparseAnalysis analysis)
    {
        ArgumentNullException.ThrowIfNull(analysis);
        this.analysis = analysis;
        panelStore = Allocate(analysis.PanelStart[^1]);
        updateStore = Allocate(analysis.UpdateLength);
        panels = Aligned(panelStore);
        updates = Aligned(updateStore);
        floor = GC.AllocateUninitializedArray<double>(Math.Max(analysis.Pattern.Size, 1), pinned: true);
    }

    /// <summary>The analysis the storage was made for.</summary>
    public SparseAnalysis Analysis => analysis;

    /// <summary>Factors a matrix. An earlier factor is overwritten; after an exception there is none.</summary>
    /// <param name="values">One value per place of the pattern.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="ArgumentException">The number of values does not match the pattern.</exception>
    /// <exception cref="PivotException">A pivot is not finite, not positive or negligible.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public void Factor(ReadOnlySpan<double> values, CancellationToken cancel = default) => Factor(values, 1, cancel);

    /// <summary>
    /// Factors a matrix on several threads, with the same bits as on one. Worth it where no other factorisation runs at the same time; takes more room
    /// for work space.
    /// </summary>
    /// <param name="values">One value per place of the pattern.</param>
    /// <param name="degree">Most threads, at least 1; the calling one is among them.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="ArgumentException">The number of values does not match the pattern, or there is no thread.</exception>
    /// <exception cref="PivotException">A pivot is not finite, not positive or negligible.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public void Factor(ReadOnlySpan<double> values, int degree, CancellationToken cancel = default)
    {
        ArgumentOutOfRangeException.ThrowIfLessThan(degree, 1);
        SparseAnalysis a = analysis;
        if (values.Length != a.Pattern.Count)
        {
            throw new ArgumentException($"The pattern has {a.Pattern.Count} places, but {values.Length} values were given.", nameof(values));
        }
        factored = false;
        // Rounding leaves a singular mesh matrix of n unknowns a last pivot of up to about n/14 roundings of its diagonal (measured,
        // n from 1e3 to 3e5), of either sign: less than this is noise, and would answer with few digits or none.
        double noise = Math.ScaleB(1, -52) * (200 + a.Pattern.Size / 2);
        for (int j = 0; j < a.Pattern.Size; j++)
        {
            floor[j] = noise * Math.Abs(values[a.Diagonal[j]]);
        }
        fixed (double* pinned = values)
        {
            if (degree == 1 || a.Flops < WorthThreads)
            {
                var room = new Room(updates, a.UpdateStart, pinned, null, cancel);
                for (int t = 0; t < a.Tree.Count; t++)
                {
                    if ((t & 255) == 0)
                    {
                        cancel.ThrowIfCancellationRequested();
                    }
                    Front(t, room);
                }
            }
            else
            {
                FactorTogether(degree, pinned, cancel);
            }
        }
        factored = true;
        GC.KeepAlive(panelStore);
        GC.KeepAlive(updateStore);
    }

    private static double[] Allocate(long length)
    {
        // Slack: alignment in front, and kernels read a few doubles behind the last row.
        if (length + 16 > Array.MaxLength)
        {
            throw new ArgumentException($"The factor would take {length} entries; at most {Array.MaxLength} fit. Use a coarser mesh.", nameof(length));
        }
        double[] store = GC.AllocateUninitializedArray<double>((int)length + 16, pinned: true);
        store.AsSpan((int)length).Clear();
        return store;
    }

    // The store is pinned, so its address stays.
    private static double* Aligned(double[] store) => (double*)(((nint)Unsafe.AsPointer(ref store[0]) + 63) & -64);

    // Assembles and eliminates one supernode.
    private void Front(int t, Room room)
    {
        double* values = room.Values;
        SparseAnalysis a = analysis;
        SupernodeTree tree = a.Tree;
        int first = tree.First[t], width = tree.Width(t), rest = tree.Height(t) - width, stride = a.Stride(t);
        double* u = panels + a.PanelStart[t], l = u + (nint)width * stride;
        new Span<double>(u, 2 * width * stride).Clear();
        for (int j = 0; j < width; j++)
        {
            double* uj = u + (nint)j * stride, lj = l + (nint)j * stride;
            uj[j] = values[a.Diagonal[first + j]];
            for (int e = a.EntryStart[first + j]; e < a.EntryStart[first + j + 1]; e++)
            {
                int place = a.EntryPlace[e];
                uj[place] = values[a.EntryRight[e]];
                lj[place] = values[a.EntryBelow[e]];
            }
        }
        double* c = room.Updates + room.UpdateStart[t];
        int ldc = a.UpdateStride(t), skip = width & 7, padded = (rest + 3) & -4;
        if (rest > 0)
        {
            new Span<double>(c, padded * ldc).Clear();
        }
        for (int child = a.ChildStart[t]; child < a.ChildStart[t + 1]; child++)
        {
            Extend(a.Children[child], room, u, l, stride, width, c + skip - width, ldc);
        }
        fixed (double* smallest = &floor[first])
        {
            int refused = FrontKernels.Factor(u, l, width, stride, smallest, room.Team, room.Cancel);
            if (refused >= 0)
            {
                throw new PivotException(a.Order[first + refused], u[(nint)refused * stride + refused]);
            }
        }
        if (rest > 0)
        {
            FrontKernels.SubtractInStrips(l + width, stride, u + (width & -8), c, ldc, width, padded, ldc, room.Team, room.Cancel);
        }
    }

    // Adds the update matrix of a child to the panels and the update matrix of its parent. c is shifted so that place j of the
    // parent's front is column j.
    private void Extend(int child, Room room, double* u, double* l, int stride, int width, double* c, int ldc)
    {
        SparseAnalysis a = analysis;
        int start = a.Tree.RowStart[child], count = a.Tree.RowStart[child + 1] - start, ld = a.UpdateStride(child);
        double* from = room.Updates + room.UpdateStart[child] + (a.Tree.Width(child) & 7);
        fixed (int* place = &a.RowPlace[start])
        {
            int inside = 0;   // rows of the child that the parent eliminates
            while (inside < count && place[inside] < width)
            {
                inside++;
            }
            for (int i = 0; i < inside; i++)
            {
                double* row = from + (nint)i * ld, into = u + (nint)place[i] * stride;
                for (int j = i; j < count; j++)
                {
                    into[place[j]] += row[j];
                }
            }
            for (int i = 1; i < count; i++)
            {
                double* row = from + (nint)i * ld, into = l + place[i];
                int left = Math.Min(i, inside);
                for (int j = 0; j < left; j++)
                {
                    into[(nint)place[j] * stride] += row[j];
                }
            }
            for (int i = inside; i < count; i++)
            {
                double* row = from + (nint)i * ld, into = c + (nint)(place[i] - width) * ldc;
                for (int j = inside; j < count; j++)
                {
                    into[place[j]] += row[j];
                }
            }
        }
    }
}
