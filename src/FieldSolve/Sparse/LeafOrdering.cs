using System.Numerics;
using System.Runtime.InteropServices;
using System.Runtime.Intrinsics;

namespace FieldSolve.Sparse;

/// <summary>
/// Exact minimum degree on a small piece of the graph. The neighbours outside the piece are eliminated later: they count in the
/// degrees but are never chosen (constrained minimum degree). Rows of the elimination graph are bit sets.
/// </summary>
/// <remarks>Rule of H. M. Markowitz, Management Sci. 3 (1957) 255-269, in its symmetric form (W. F. Tinney and J. W. Walker, Proc. IEEE 55 (1967) 1801-1809).</remarks>
internal sealed class LeafOrdering
{
    /// <summary>Larger pieces (only a graph without separators gives them) are ordered by their degrees at the start.</summary>
    private const int LargestExact = 1500;

    private readonly SymmetricPattern pattern;
    private readonly int[] local;      // place in the piece + 1, or 0
    private int[] outside = new int[256];
    private ulong[] bits = new ulong[4096];
    private int[] degree = new int[256];
    private int[] done = [];
    private short[] key = [];

    public LeafOrdering(SymmetricPattern pattern)
    {
        this.pattern = pattern;
        local = new int[pattern.Size];
    }

    /// <summary>Puts <paramref name="piece"/> (rows of the pattern) into elimination order.</summary>
    public void Order(Span<int> piece)
    {
        int n = piece.Length;
        if (n < 2)
        {
            return;
        }
        if (n > LargestExact)
        {
            OrderByDegree(piece);
            return;
        }
        int[] start = pattern.Start, column = pattern.Column;
        for (int i = 0; i < n; i++)
        {
            local[piece[i]] = i + 1;
        }
        int halo = 0;
        foreach (int v in piece)
        {
            for (int k = start[v]; k < start[v + 1]; k++)
            {
                int w = column[k];
                if (local[w] == 0)
                {
                    if (halo == outside.Length)
                    {
                        Array.Resize(ref outside, 2 * halo);
                    }
                    outside[halo++] = w;
                    local[w] = n + halo;
                }
            }
        }
        int words = (n + halo + 63) >> 6;
        if (bits.Length < (n + 1) * words)
        {
            bits = new ulong[2 * (n + 1) * words];
        }
        if (degree.Length < n)
        {
            degree = new int[2 * n];
        }
        Span<ulong> rows = bits.AsSpan(0, n * words);
        rows.Clear();
        for (int i = 0; i < n; i++)
        {
            int v = piece[i];
            degree[i] = start[v + 1] - start[v] - 1;
            for (int k = start[v]; k < start[v + 1]; k++)
            {
                int w = local[column[k]] - 1;
                rows[i * words + (w >> 6)] |= 1UL << w;
            }
            rows[i * words + (i >> 6)] &= ~(1UL << i);
        }
        foreach (int v in piece)
        {
            local[v] = 0;
        }
        for (int i = 0; i < halo; i++)
        {
            local[outside[i]] = 0;
        }
        Eliminate(piece, rows, words);
    }

    private void Eliminate(Span<int> piece, Span<ulong> rows, int words)
    {
        int n = piece.Length, insideWords = (n + 63) >> 6, padded = (n + 31) & -32;
        if (key.Length < padded)
        {
            key = new short[2 * padded];
            done = new int[2 * padded];
        }
        Span<short> keys = key.AsSpan(0, padded);
        keys.Fill(short.MaxValue);
        for (int i = 0; i < n; i++)
        {
            keys[i] = (short)Math.Min(degree[i], short.MaxValue - 1);
        }
        for (int step = 0; step < n; step++)
        {
            int p = First(keys);
            keys[p] = short.MaxValue;
            done[step] = piece[p];

            Span<ulong> pivot = rows.Slice(p * words, words);
            int own = p >> 6;
            ulong without = ~(1UL << p);
            for (int word = 0; word < insideWords; word++)
            {
                ulong set = pivot[word];
                while (set != 0)
                {
                    int u = (word << 6) + BitOperations.TrailingZeroCount(set);
                    set &= set - 1;
                    if (u >= n)
                    {
                        break;
                    }
                    Span<ulong> row = rows.Slice(u * words, words);
                    int sum = 0;
                    for (int k = 0; k < row.Length; k++)
                    {
                        ulong merged = row[k] | pivot[k];
                        row[k] = merged;
                        sum += BitOperations.PopCount(merged);
                    }
                    row[word] &= ~(1UL << u);
                    row[own] &= without;
                    keys[u] = (short)Math.Min(sum - 2, short.MaxValue - 1);   // without u itself and p
                }
            }
        }
        done.AsSpan(0, n).CopyTo(piece);
    }

    // Index of the first of the smallest keys; the length is a multiple of 32.
    private static int First(ReadOnlySpan<short> keys)
    {
        ref short start = ref MemoryMarshal.GetReference(keys);
        Vector512<short> least = Vector512.LoadUnsafe(ref start);
        for (int i = 32; i < keys.Length; i += 32)
        {
            least = Vector512.Min(least, Vector512.LoadUnsafe(ref start, (nuint)i));
        }
        Vector256<short> half = Vector256.Min(least.GetLower(), least.GetUpper());
        Vector128<short> quarter = Vector128.Min(half.GetLower(), half.GetUpper());
        short smallest = short.MaxValue;
        for (int i = 0; i < 8; i++)
        {
            smallest = Math.Min(smallest, quarter.GetElement(i));
        }
        return keys.IndexOf(smallest);
    }

    private void OrderByDegree(Span<int> piece)
    {
        int[] start = pattern.Start;
        long[] keys = new long[piece.Length];
        for (int i = 0; i < keys.Length; i++)
        {
            keys[i] = ((long)(start[piece[i] + 1] - start[piece[i]]) << 32) + i;
        }
        keys.AsSpan().Sort(piece);
    }
}
