using System.Collections.Concurrent;
using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace FieldSolve.Sparse;

public sealed unsafe partial class SparseLu
{
    /// <summary>Right-hand sides solved together: one per lane.</summary>
    private const int Together = 8;

    private readonly ConcurrentBag<double[]> spaces = [];
    private readonly ConcurrentBag<double[]> wideSpaces = [];

    /// <summary>Solves A x = b.</summary>
    /// <param name="b">One value per row.</param>
    /// <param name="x">Solution; may be the same span as <paramref name="b"/>.</param>
    /// <exception cref="InvalidOperationException">There is no factor.</exception>
    /// <exception cref="ArgumentException">A length does not match the matrix.</exception>
    public void Solve(ReadOnlySpan<double> b, Span<double> x) => Single(b, x, transposed: false);

    /// <summary>Solves Aᵀ x = b with the same factor.</summary>
    /// <param name="b">One value per column of A.</param>
    /// <param name="x">Solution; may be the same span as <paramref name="b"/>.</param>
    /// <exception cref="InvalidOperationException">There is no factor.</exception>
    /// <exception cref="ArgumentException">A length does not match the matrix.</exception>
    public void SolveTransposed(ReadOnlySpan<double> b, Span<double> x) => Single(b, x, transposed: true);

    /// <summary>Solves A X = B for several right-hand sides, eight at a time.</summary>
    /// <param name="b">Right-hand sides one after the other, <paramref name="count"/> times the size of the matrix.</param>
    /// <param name="x">Solutions likewise; may be the same span as <paramref name="b"/>.</param>
    /// <param name="count">Number of right-hand sides.</param>
    /// <exception cref="InvalidOperationException">There is no factor.</exception>
    /// <exception cref="ArgumentException">A length does not match the matrix and the count.</exception>
    public void SolveMany(ReadOnlySpan<double> b, Span<double> x, int count) => Many(b, x, count, transposed: false);

    /// <summary>Solves Aᵀ X = B for several right-hand sides, eight at a time.</summary>
    /// <param name="b">Right-hand sides one after the other, <paramref name="count"/> times the size of the matrix.</param>
    /// <param name="x">Solutions likewise; may be the same span as <paramref name="b"/>.</param>
    /// <param name="count">Number of right-hand sides.</param>
    /// <exception cref="InvalidOperationException">There is no factor.</exception>
    /// <exception cref="ArgumentException">A length does not match the matrix and the count.</exception>
    public void SolveTransposedMany(ReadOnlySpan<double> b, Span<double> x, int count) => Many(b, x, count, transposed: true);

    private void Check(ReadOnlySpan<double> b, ReadOnlySpan<double> x, int count)
    {
        if (!factored)
        {
            throw new InvalidOperationException("There is no factor: Factor was not called, or it failed.");
        }
        ArgumentOutOfRangeException.ThrowIfNegative(count);
        long wanted = (long)analysis.Pattern.Size * count;
        if (b.Length != wanted || x.Length != wanted)
        {
            throw new ArgumentException(
                $"{count} vectors of {analysis.Pattern.Size} entries are needed, but b has {b.Length} and x has {x.Length} entries.", nameof(b));
        }
    }

    private void Single(ReadOnlySpan<double> b, Span<double> x, bool transposed)
    {
        Check(b, x, 1);
        int n = analysis.Pattern.Size;
        if (!spaces.TryTake(out double[]? space))
        {
            space = GC.AllocateUninitializedArray<double>(n + analysis.LargestFront + 40, pinned: true);
        }
        int[] order = analysis.Order;
        for (int k = 0; k < n; k++)
        {
            space[k] = b[order[k]];
        }
        fixed (double* y = space)
        {
            double* work = (double*)(((nint)(y + n) + 63) & -64);
            for (int t = 0; t < analysis.Tree.Count; t++)
            {
                Forward(t, y, work, transposed);
            }
            for (int t = analysis.Tree.Count - 1; t >= 0; t--)
            {
                Backward(t, y, work, transposed);
            }
        }
        for (int k = 0; k < n; k++)
        {
            x[order[k]] = space[k];
        }
        spaces.Add(space);
        GC.KeepAlive(this);
    }

    // The panel that eliminates a supernode from the right-hand side: L, or U for the transposed matrix.
    private double* ForwardPanel(int t, bool transposed)
    {
        long start = analysis.PanelStart[t];
        return IsSymmetric ? panels + start : transposed ? panels + 2 * start : panels + start + analysis.PanelStart[t + 1];
    }

    // The panel that solves for the steps of a supernode: U, or L for the transposed or the symmetric matrix.
    private double* BackwardPanel(int t, bool transposed) => ForwardPanel(t, !transposed);

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private void Forward(int t, double* y, double* work, bool transposed)
    {
        SupernodeTree tree = analysis.Tree;
        int width = tree.Width(t), start = tree.RowStart[t], rest = tree.RowStart[t + 1] - start;
        bool scaled = transposed && !IsSymmetric;
        double* own = y + tree.First[t], row = ForwardPanel(t, transposed);
        for (int k = 0; k < width; k++)
        {
            if (scaled)
            {
                own[k] *= row[0];
            }
            double value = -own[k];
            double* at = own + k;
            int left = width - k, j = 1;
            if (left > 16)
            {
                Vector512<double> values = Vector512.Create(value);
                for (; j + 8 <= left; j += 8)
                {
                    Vector512.FusedMultiplyAdd(values, Vector512.Load(row + j), Vector512.Load(at + j)).Store(at + j);
                }
            }
            for (; j < left; j++)
            {
                at[j] = Math.FusedMultiplyAdd(value, row[j], at[j]);
            }
            row += left;
        }
        if (rest == 0)
        {
            return;
        }
        // The last vector of a row runs into the next row: those sums are not used.
        int c = 0;
        for (; c + 24 < rest; c += 32)
        {
            double* at = row + c;
            Vector512<double> s0 = default, s1 = default, s2 = default, s3 = default;
            for (int k = 0; k < width; k++)
            {
                Vector512<double> v = Vector512.Create(own[k]);
                s0 = Vector512.FusedMultiplyAdd(v, Vector512.Load(at), s0);
                s1 = Vector512.FusedMultiplyAdd(v, Vector512.Load(at + 8), s1);
                s2 = Vector512.FusedMultiplyAdd(v, Vector512.Load(at + 16), s2);
                s3 = Vector512.FusedMultiplyAdd(v, Vector512.Load(at + 24), s3);
                at += rest;
            }
            s0.Store(work + c);
            s1.Store(work + c + 8);
            s2.Store(work + c + 16);
            s3.Store(work + c + 24);
        }
        for (; c + 8 < rest; c += 16)
        {
            double* at = row + c;
            Vector512<double> s0 = default, s1 = default;
            for (int k = 0; k < width; k++)
            {
                Vector512<double> v = Vector512.Create(own[k]);
                s0 = Vector512.FusedMultiplyAdd(v, Vector512.Load(at), s0);
                s1 = Vector512.FusedMultiplyAdd(v, Vector512.Load(at + 8), s1);
                at += rest;
            }
            s0.Store(work + c);
            s1.Store(work + c + 8);
        }
        if (c < rest)
        {
            double* at = row + c;
            Vector512<double> sum = default;
            for (int k = 0; k < width; k++)
            {
                sum = Vector512.FusedMultiplyAdd(Vector512.Create(own[k]), Vector512.Load(at), sum);
                at += rest;
            }
            sum.Store(work + c);
        }
        fixed (int* rows = &tree.Rows[start])
        {
            for (int i = 0; i < rest; i++)
            {
                y[rows[i]] -= work[i];
            }
        }
    }

    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private void Backward(int t, double* y, double* work, bool transposed)
    {
        SupernodeTree tree = analysis.Tree;
        int width = tree.Width(t), start = tree.RowStart[t], rest = tree.RowStart[t + 1] - start;
        double* own = y + tree.First[t], panel = BackwardPanel(t, transposed), row = panel;
        if (IsSymmetric)
        {
            for (int k = 0; k < width; k++)
            {
                own[k] *= *row;
                row += width - k;
            }
        }
        else
        {
            row += width * (width + 1) / 2;
        }
        double* last = row;   // behind the triangle
        if (rest > 0)
        {
            // Zeros behind the end meet what follows a row in the panel.
            Vector512<double>.Zero.Store(work + ((rest - 1) & -8));
            fixed (int* rows = &tree.Rows[start])
            {
                for (int i = 0; i < rest; i++)
                {
                    work[i] = y[rows[i]];
                }
            }
            int r = 0;
            for (; r + 4 <= width; r += 4)
            {
                double* row1 = row + rest, row2 = row1 + rest, row3 = row2 + rest;
                Vector512<double> s0 = default, s1 = default, s2 = default, s3 = default;
                for (int j = 0; j < rest; j += 8)
                {
                    Vector512<double> v = Vector512.Load(work + j);
                    s0 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row + j), s0);
                    s1 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row1 + j), s1);
                    s2 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row2 + j), s2);
                    s3 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row3 + j), s3);
                }
                own[r] -= Vector512.Sum(s0);
                own[r + 1] -= Vector512.Sum(s1);
                own[r + 2] -= Vector512.Sum(s2);
                own[r + 3] -= Vector512.Sum(s3);
                row = row3 + rest;
            }
            for (; r < width; r++)
            {
                Vector512<double> sum = default;
                for (int j = 0; j < rest; j += 8)
                {
                    sum = Vector512.FusedMultiplyAdd(Vector512.Load(work + j), Vector512.Load(row + j), sum);
                }
                own[r] -= Vector512.Sum(sum);
                row += rest;
            }
        }
        bool scaled = !transposed && !IsSymmetric;
        row = last;
        for (int k = width - 1; k >= 0; k--)
        {
            int left = width - k, j = 1;
            row -= left;
            double* at = own + k;
            double s = *at;
            if (left > 16)
            {
                Vector512<double> sum = default;
                for (; j + 8 <= left; j += 8)
                {
                    sum = Vector512.FusedMultiplyAdd(Vector512.Load(row + j), Vector512.Load(at + j), sum);
                }
                s -= Vector512.Sum(sum);
            }
            for (; j < left; j++)
            {
                s = Math.FusedMultiplyAdd(-row[j], at[j], s);
            }
            *at = scaled ? s * row[0] : s;
        }
    }

    private void Many(ReadOnlySpan<double> b, Span<double> x, int count, bool transposed)
    {
        Check(b, x, count);
        int n = analysis.Pattern.Size;
        int[] order = analysis.Order;
        for (int done = 0; done < count; done += Together)
        {
            int now = Math.Min(Together, count - done);
            if (!wideSpaces.TryTake(out double[]? space))
            {
                space = GC.AllocateUninitializedArray<double>(checked((n + analysis.LargestFront + 2) * Together), pinned: true);
            }
            fixed (double* raw = space)
            {
                double* y = (double*)(((nint)raw + 63) & -64), work = y + (nint)n * Together;
                for (int k = 0; k < n; k++)
                {
                    for (int lane = 0; lane < Together; lane++)
                    {
                        y[(nint)k * Together + lane] = lane < now ? b[(done + lane) * n + order[k]] : 0;
                    }
                }
                for (int t = 0; t < analysis.Tree.Count; t++)
                {
                    ForwardMany(t, y, work, transposed);
                }
                for (int t = analysis.Tree.Count - 1; t >= 0; t--)
                {
                    BackwardMany(t, y, work, transposed);
                }
                for (int k = 0; k < n; k++)
                {
                    for (int lane = 0; lane < now; lane++)
                    {
                        x[(done + lane) * n + order[k]] = y[(nint)k * Together + lane];
                    }
                }
            }
            wideSpaces.Add(space);
        }
        GC.KeepAlive(this);
    }

    private void ForwardMany(int t, double* y, double* work, bool transposed)
    {
        SupernodeTree tree = analysis.Tree;
        int width = tree.Width(t), start = tree.RowStart[t], rest = tree.RowStart[t + 1] - start;
        bool scaled = transposed && !IsSymmetric;
        double* own = y + (nint)tree.First[t] * Together, row = ForwardPanel(t, transposed);
        for (int k = 0; k < width; k++)
        {
            double* at = own + (nint)k * Together;
            Vector512<double> value = Vector512.Load(at);
            if (scaled)
            {
                value *= Vector512.Create(row[0]);
                value.Store(at);
            }
            value = -value;
            for (int j = 1; j < width - k; j++)
            {
                at += Together;
                Vector512.FusedMultiplyAdd(Vector512.Create(row[j]), value, Vector512.Load(at)).Store(at);
            }
            row += width - k;
        }
        // Four rows of the result at a time in registers.
        int i = 0;
        for (; i + 4 <= rest; i += 4)
        {
            double* at = row + i;
            Vector512<double> s0 = default, s1 = default, s2 = default, s3 = default;
            for (int k = 0; k < width; k++)
            {
                Vector512<double> v = Vector512.Load(own + (nint)k * Together);
                s0 = Vector512.FusedMultiplyAdd(Vector512.Create(at[0]), v, s0);
                s1 = Vector512.FusedMultiplyAdd(Vector512.Create(at[1]), v, s1);
                s2 = Vector512.FusedMultiplyAdd(Vector512.Create(at[2]), v, s2);
                s3 = Vector512.FusedMultiplyAdd(Vector512.Create(at[3]), v, s3);
                at += rest;
            }
            Add(y, tree.Rows[start + i], s0);
            Add(y, tree.Rows[start + i + 1], s1);
            Add(y, tree.Rows[start + i + 2], s2);
            Add(y, tree.Rows[start + i + 3], s3);
        }
        for (; i < rest; i++)
        {
            double* at = row + i;
            Vector512<double> sum = default;
            for (int k = 0; k < width; k++)
            {
                sum = Vector512.FusedMultiplyAdd(Vector512.Create(*at), Vector512.Load(own + (nint)k * Together), sum);
                at += rest;
            }
            Add(y, tree.Rows[start + i], sum);
        }

        static void Add(double* y, int i, Vector512<double> sum)
        {
            double* at = y + (nint)i * Together;
            (Vector512.Load(at) - sum).Store(at);
        }
    }

    private void BackwardMany(int t, double* y, double* work, bool transposed)
    {
        SupernodeTree tree = analysis.Tree;
        int width = tree.Width(t), start = tree.RowStart[t], rest = tree.RowStart[t + 1] - start;
        double* panel = BackwardPanel(t, transposed), own = y + (nint)tree.First[t] * Together;
        for (int i = 0; i < rest; i++)
        {
            Vector512.Load(y + (nint)tree.Rows[start + i] * Together).Store(work + (nint)i * Together);
        }
        double* row = panel + (width * (width + 1) / 2), below = row + (nint)width * rest;
        for (int k = width - 1; k >= 0; k--)
        {
            row -= width - k;
            below -= rest;
            double* at = own + (nint)k * Together;
            Vector512<double> sum = default, more = default;
            for (int j = 1; j < width - k; j++)
            {
                sum = Vector512.FusedMultiplyAdd(Vector512.Create(row[j]), Vector512.Load(at + (nint)j * Together), sum);
            }
            int i = 0;
            for (; i + 2 <= rest; i += 2)
            {
                double* gathered = work + (nint)i * Together;
                sum = Vector512.FusedMultiplyAdd(Vector512.Create(below[i]), Vector512.Load(gathered), sum);
                more = Vector512.FusedMultiplyAdd(Vector512.Create(below[i + 1]), Vector512.Load(gathered + Together), more);
            }
            if (i < rest)
            {
                sum = Vector512.FusedMultiplyAdd(Vector512.Create(below[i]), Vector512.Load(work + (nint)i * Together), sum);
            }
            Vector512<double> value = Vector512.Load(at), pivot = Vector512.Create(row[0]);
            value = IsSymmetric ? (value * pivot) - (sum + more) : value - (sum + more);
            (transposed || IsSymmetric ? value : value * pivot).Store(at);
        }
    }
}
