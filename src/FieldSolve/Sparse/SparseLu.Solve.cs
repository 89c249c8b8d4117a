using System.Collections.Concurrent;
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
            space = GC.AllocateUninitializedArray<double>(n + analysis.LargestFront + 16, pinned: true);
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

    // Eliminates the steps of one supernode from the right-hand side: with L, or with Uᵀ for the transposed matrix.
    private void Forward(int t, double* y, double* work, bool transposed)
    {
        SupernodeTree tree = analysis.Tree;
        int width = tree.Width(t), stride = analysis.Stride(t), start = tree.RowStart[t], rest = tree.RowStart[t + 1] - start;
        double* u = panels + analysis.PanelStart[t], panel = transposed ? u : u + (nint)width * stride;
        double* own = y + tree.First[t];
        for (int k = 0; k < width; k++)
        {
            double* row = panel + (nint)k * stride;
            if (transposed)
            {
                own[k] /= row[k];
            }
            double value = -own[k];
            for (int j = k + 1; j < width; j++)
            {
                own[j] = Math.FusedMultiplyAdd(value, row[j], own[j]);
            }
        }
        if (rest == 0)
        {
            return;
        }
        int from = width & -8;
        int c = from;
        for (; c + 32 <= stride; c += 32)
        {
            double* row = panel + c;
            Vector512<double> s0 = default, s1 = default, s2 = default, s3 = default;
            for (int k = 0; k < width; k++)
            {
                Vector512<double> v = Vector512.Create(own[k]);
                s0 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row), s0);
                s1 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row + 8), s1);
                s2 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row + 16), s2);
                s3 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row + 24), s3);
                row += stride;
            }
            s0.Store(work + c - from);
            s1.Store(work + c - from + 8);
            s2.Store(work + c - from + 16);
            s3.Store(work + c - from + 24);
        }
        for (; c < stride; c += 8)
        {
            double* row = panel + c;
            Vector512<double> sum = default;
            for (int k = 0; k < width; k++)
            {
                sum = Vector512.FusedMultiplyAdd(Vector512.Create(own[k]), Vector512.Load(row), sum);
                row += stride;
            }
            sum.Store(work + c - from);
        }
        fixed (int* rows = &tree.Rows[start])
        {
            double* sums = work + width - from;
            for (int i = 0; i < rest; i++)
            {
                y[rows[i]] -= sums[i];
            }
        }
    }

    // Solves for the steps of one supernode: with U, or with Lᵀ for the transposed matrix.
    private void Backward(int t, double* y, double* work, bool transposed)
    {
        SupernodeTree tree = analysis.Tree;
        int width = tree.Width(t), stride = analysis.Stride(t), start = tree.RowStart[t], rest = tree.RowStart[t + 1] - start;
        double* u = panels + analysis.PanelStart[t], panel = transposed ? u + (nint)width * stride : u;
        double* own = y + tree.First[t];
        int from = width & -8, length = stride - from;
        if (rest > 0)
        {
            new Span<double>(work, length).Clear();
            fixed (int* rows = &tree.Rows[start])
            {
                double* gathered = work + width - from;
                for (int i = 0; i < rest; i++)
                {
                    gathered[i] = y[rows[i]];
                }
            }
            int r = 0;
            for (; r + 4 <= width; r += 4)
            {
                double* row0 = panel + (nint)r * stride + from, row1 = row0 + stride, row2 = row1 + stride, row3 = row2 + stride;
                Vector512<double> s0 = default, s1 = default, s2 = default, s3 = default;
                for (int j = 0; j < length; j += 8)
                {
                    Vector512<double> v = Vector512.Load(work + j);
                    s0 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row0 + j), s0);
                    s1 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row1 + j), s1);
                    s2 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row2 + j), s2);
                    s3 = Vector512.FusedMultiplyAdd(v, Vector512.Load(row3 + j), s3);
                }
                own[r] -= Vector512.Sum(s0);
                own[r + 1] -= Vector512.Sum(s1);
                own[r + 2] -= Vector512.Sum(s2);
                own[r + 3] -= Vector512.Sum(s3);
            }
            for (; r < width; r++)
            {
                double* row = panel + (nint)r * stride + from;
                Vector512<double> sum = default;
                for (int j = 0; j < length; j += 8)
                {
                    sum = Vector512.FusedMultiplyAdd(Vector512.Load(work + j), Vector512.Load(row + j), sum);
                }
                own[r] -= Vector512.Sum(sum);
            }
        }
        for (int k = width - 1; k >= 0; k--)
        {
            double* row = panel + (nint)k * stride;
            double s = own[k];
            int j = k + 1;
            if (width - j >= 16)
            {
                Vector512<double> sum = default;
                for (; j + 8 <= width; j += 8)
                {
                    sum = Vector512.FusedMultiplyAdd(Vector512.Load(row + j), Vector512.Load(own + j), sum);
                }
                s -= Vector512.Sum(sum);
            }
            for (; j < width; j++)
            {
                s = Math.FusedMultiplyAdd(-row[j], own[j], s);
            }
            own[k] = transposed ? s : s / row[k];
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
        int width = tree.Width(t), stride = analysis.Stride(t), start = tree.RowStart[t], rest = tree.RowStart[t + 1] - start;
        double* u = panels + analysis.PanelStart[t], panel = transposed ? u : u + (nint)width * stride;
        double* own = y + (nint)tree.First[t] * Together;
        new Span<double>(work, rest * Together).Clear();
        for (int k = 0; k < width; k++)
        {
            double* row = panel + (nint)k * stride;
            Vector512<double> value = Vector512.Load(own + (nint)k * Together);
            if (transposed)
            {
                value /= Vector512.Create(row[k]);
                value.Store(own + (nint)k * Together);
            }
            value = -value;
            for (int j = k + 1; j < width; j++)
            {
                double* at = own + (nint)j * Together;
                Vector512.FusedMultiplyAdd(Vector512.Create(row[j]), value, Vector512.Load(at)).Store(at);
            }
            for (int i = 0; i < rest; i++)
            {
                double* at = work + (nint)i * Together;
                Vector512.FusedMultiplyAdd(Vector512.Create(row[width + i]), value, Vector512.Load(at)).Store(at);
            }
        }
        for (int i = 0; i < rest; i++)
        {
            double* at = y + (nint)tree.Rows[start + i] * Together;
            (Vector512.Load(at) + Vector512.Load(work + (nint)i * Together)).Store(at);
        }
    }

    private void BackwardMany(int t, double* y, double* work, bool transposed)
    {
        SupernodeTree tree = analysis.Tree;
        int width = tree.Width(t), stride = analysis.Stride(t), start = tree.RowStart[t], rest = tree.RowStart[t + 1] - start;
        double* u = panels + analysis.PanelStart[t], panel = transposed ? u + (nint)width * stride : u;
        double* own = y + (nint)tree.First[t] * Together;
        for (int i = 0; i < rest; i++)
        {
            Vector512.Load(y + (nint)tree.Rows[start + i] * Together).Store(work + (nint)i * Together);
        }
        for (int k = width - 1; k >= 0; k--)
        {
            double* row = panel + (nint)k * stride;
            Vector512<double> sum = default, more = default;
            for (int j = k + 1; j < width; j++)
            {
                sum = Vector512.FusedMultiplyAdd(Vector512.Create(row[j]), Vector512.Load(own + (nint)j * Together), sum);
            }
            int i = 0;
            for (; i + 2 <= rest; i += 2)
            {
                double* at = work + (nint)i * Together;
                sum = Vector512.FusedMultiplyAdd(Vector512.Create(row[width + i]), Vector512.Load(at), sum);
                more = Vector512.FusedMultiplyAdd(Vector512.Create(row[width + i + 1]), Vector512.Load(at + Together), more);
            }
            if (i < rest)
            {
                sum = Vector512.FusedMultiplyAdd(Vector512.Create(row[width + i]), Vector512.Load(work + (nint)i * Together), sum);
            }
            Vector512<double> value = Vector512.Load(own + (nint)k * Together) - (sum + more);
            if (!transposed)
            {
                value /= Vector512.Create(row[k]);
            }
            value.Store(own + (nint)k * Together);
        }
    }
}
