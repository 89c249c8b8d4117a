using System.Collections.Concurrent;
using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace FieldSolve.Sparse;

/// <summary>
/// Direct factorisation A = L U (rows and columns permuted alike) of a matrix with a symmetric pattern whose symmetric part is
/// positive definite; such a matrix needs no pivoting. A symmetric matrix can be factored as L D Lᵀ, at about half the time and room.
/// The storage is allocated once and used again by each factorisation.
/// </summary>
/// <remarks>
/// Multifrontal method: I. S. Duff and J. K. Reid, ACM Trans. Math. Softw. 9 (1983) 302-325. Stability without pivoting:
/// G. H. Golub and C. Van Loan, Linear Algebra Appl. 28 (1979) 85-98.
/// Same matrix, same bits. Solves may run on several threads at once; a factorisation needs the object for itself.
/// </remarks>
public sealed unsafe partial class SparseLu
{
    // Two entries that should be equal may differ by this share of the front's entries: rounding of an assembly, not another matrix.
    private const double Asymmetry = 1e-8;

    private readonly SparseAnalysis analysis;
    private readonly double[] panelStore;
    private readonly double* panels;
    private readonly double[] floor;
    private readonly ConcurrentBag<double[]> spareFronts = [];
    private double[] updateStore = [];
    private double[] parallelStore = [];
    private bool factored;

    /// <summary>Allocates the storage for factors of the analysed pattern.</summary>
    /// <param name="analysis">Order and structure.</param>
    /// <param name="symmetric">The matrices will be symmetric: only L and D are computed and kept.</param>
    /// <exception cref="ArgumentException">The factor would have more than 2·10⁹ entries.</exception>
    public SparseLu(SparseAnalysis analysis, bool symmetric = false)
    {
        ArgumentNullException.ThrowIfNull(analysis);
        this.analysis = analysis;
        IsSymmetric = symmetric;
        panelStore = Allocate((symmetric ? 1 : 2) * analysis.PanelStart[^1]);
        panels = Aligned(panelStore);
        floor = GC.AllocateUninitializedArray<double>(Math.Max(analysis.Pattern.Size, 1), pinned: true);
    }

    /// <summary>The analysis the storage was made for.</summary>
    public SparseAnalysis Analysis => analysis;

    /// <summary>True when only symmetric matrices are factored, as L D Lᵀ.</summary>
    public bool IsSymmetric { get; }

    /// <summary>Stored non-zeros of the factor, explicit zeros of merged supernodes included.</summary>
    public long NonZeros => (IsSymmetric ? 1 : 2) * analysis.PanelStart[^1];

    /// <summary>Bytes of the factor, its work space and the analysis.</summary>
    public long MemoryBytes => 8L * (panelStore.Length + updateStore.Length + parallelStore.Length + floor.Length + spareFronts.Sum(f => (long)f.Length))
        + analysis.MemoryBytes;

    /// <summary>Factors a matrix. An earlier factor is overwritten; after an exception there is none.</summary>
    /// <param name="values">One value per place of the pattern.</param>
    /// <param name="cancel">Stops the work.</param>
    /// <exception cref="ArgumentException">The number of values does not match the pattern, or they should be symmetric and are not.</exception>
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
    /// <exception cref="ArgumentException">
    /// The number of values does not match the pattern, they should be symmetric and are not, or there is no thread.
    /// </exception>
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
                FactorAlone(pinned, cancel);
            }
            else
            {
                FactorTogether(degree, pinned, cancel);
            }
        }
        factored = true;
        GC.KeepAlive(panelStore);
    }

    private void FactorAlone(double* values, CancellationToken cancel)
    {
        if (updateStore.Length == 0)
        {
            updateStore = Allocate(analysis.UpdateLength);
        }
        double[] front = RentFront();
        var room = new Room(Aligned(updateStore), analysis.UpdateStart, values, null, cancel);
        for (int t = 0; t < analysis.Tree.Count; t++)
        {
            if ((t & 63) == 0)
            {
                cancel.ThrowIfCancellationRequested();
            }
            Front(t, room, Aligned(front));
        }
        spareFronts.Add(front);
        GC.KeepAlive(updateStore);
    }

    // Room for the panels of one front while it is factored: two, whatever is kept of them.
    private double[] RentFront() => spareFronts.TryTake(out double[]? front) ? front : Allocate(2L * analysis.LargestPanel);

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

    // Assembles and eliminates one supernode in room of its own, rows padded; then keeps what the solves need of it, without padding.
    private void Front(int t, Room room, double* u)
    {
        SparseAnalysis a = analysis;
        SupernodeTree tree = a.Tree;
        int first = tree.First[t], width = tree.Width(t), rest = tree.Height(t) - width, stride = a.Stride(t);
        double* l = u + (nint)width * stride;
        Enter(t, room.Values, u, l, stride);
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
            int refused = IsSymmetric
                ? FrontKernels.FactorSymmetric(u, l, width, stride, smallest, room.Team, room.Cancel)
                : FrontKernels.Factor(u, l, width, stride, smallest, room.Team, room.Cancel);
            if (refused >= 0)
            {
                throw new PivotException(a.Order[first + refused], u[(nint)refused * stride + refused]);
            }
        }
        if (rest > 0)
        {
            FrontKernels.SubtractInStrips(
                l + width, stride, u + (width & -8), c, ldc, width, padded, ldc, IsSymmetric ? skip : -1, room.Team, room.Cancel);
        }
        long size = a.PanelStart[t + 1] - a.PanelStart[t];
        if (IsSymmetric)
        {
            double* kept = panels + a.PanelStart[t];
            Keep(l, kept, width, rest, stride);
            KeepPivots(u, kept, width, stride);
        }
        else
        {
            double* kept = panels + 2 * a.PanelStart[t];
            Keep(u, kept, width, rest, stride);
            KeepPivots(u, kept, width, stride);
            Keep(l, kept + size, width, rest, stride);
        }
    }

    // The entries of the matrix itself.
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private void Enter(int t, double* values, double* u, double* l, int stride)
    {
        SparseAnalysis a = analysis;
        int first = a.Tree.First[t], width = a.Tree.Width(t);
        new Span<double>(u, (IsSymmetric ? 1 : 2) * width * stride).Clear();
        double apart = 0, size = 0;
        for (int j = 0; j < width; j++)
        {
            double* uj = u + (nint)j * stride, lj = l + (nint)j * stride;
            uj[j] = values[a.Diagonal[first + j]];
            if (IsSymmetric)
            {
                size += Math.Abs(uj[j]);
                for (int e = a.EntryStart[first + j]; e < a.EntryStart[first + j + 1]; e++)
                {
                    double right = values[a.EntryRight[e]], below = values[a.EntryBelow[e]];
                    uj[a.EntryPlace[e]] = 0.5 * (right + below);
                    apart += Math.Abs(right - below);
                    size += Math.Abs(right) + Math.Abs(below);
                }
            }
            else
            {
                for (int e = a.EntryStart[first + j]; e < a.EntryStart[first + j + 1]; e++)
                {
                    int place = a.EntryPlace[e];
                    uj[place] = values[a.EntryRight[e]];
                    lj[place] = values[a.EntryBelow[e]];
                }
            }
        }
        if (apart > Asymmetry * size && double.IsFinite(apart))
        {
            throw new ArgumentException($"The matrix is not symmetric near row {a.Order[first]}.");
        }
    }

    // A panel as the solves read it: the triangle by rows, each from its diagonal on, then the rest by rows.
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static void Keep(double* panel, double* kept, int width, int rest, int stride)
    {
        for (int k = 0; k < width; k++)
        {
            double* row = panel + (nint)k * stride;
            for (int j = k; j < width; j++)
            {
                *kept++ = row[j];
            }
        }
        for (int k = 0; k < width; k++)
        {
            double* row = panel + (nint)k * stride + width;
            int j = 0;
            for (; j + 8 <= rest; j += 8)
            {
                Vector512.Load(row + j).Store(kept + j);
            }
            for (; j < rest; j++)
            {
                kept[j] = row[j];
            }
            kept += rest;
        }
    }

    // Reciprocal pivots take the places of the diagonal.
    private static void KeepPivots(double* u, double* kept, int width, int stride)
    {
        for (int k = 0; k < width; k++)
        {
            *kept = 1 / u[(nint)k * stride + k];
            kept += width - k;
        }
    }

    // Adds the update matrix of a child to the panels and the update matrix of its parent. c is shifted so that place j of the
    // parent's front is column j. Of a symmetric one only the part right of the diagonal holds anything.
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
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
            if (!IsSymmetric)
            {
                for (int i = 1; i < count; i++)
                {
                    double* row = from + (nint)i * ld, into = l + place[i];
                    int left = Math.Min(i, inside);
                    for (int j = 0; j < left; j++)
                    {
                        into[(nint)place[j] * stride] += row[j];
                    }
                }
            }
            for (int i = inside; i < count; i++)
            {
                double* row = from + (nint)i * ld, into = c + (nint)(place[i] - width) * ldc;
                for (int j = IsSymmetric ? i : inside; j < count; j++)
                {
                    into[place[j]] += row[j];
                }
            }
        }
    }
}
