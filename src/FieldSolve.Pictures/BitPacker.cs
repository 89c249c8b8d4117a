using System.Numerics;

namespace FieldSolve.Pictures;

/// <summary>
/// Whole numbers, most of them small, in few bits: in blocks, each with the number of low bits that suits it (R. F. Rice, J. R. Plaunt, IEEE Trans. Commun. Technol. 19,
/// 889 (1971)). The page reads them without waiting, and the bytes depend on nothing but the numbers.
/// </summary>
internal static class BitPacker
{
    // The script of the page has the same three.
    private const int Block = 96, MostOnes = 24, Whole = 44;

    /// <summary>Packs numbers below 2^43 in size.</summary>
    public static byte[] Pack(ReadOnlySpan<long> numbers)
    {
        Writer bits = new();
        ulong[] block = new ulong[Block];
        for (int from = 0; from < numbers.Length; from += Block)
        {
            int count = Math.Min(Block, numbers.Length - from);
            for (int i = 0; i < count; i++)
            {
                long v = numbers[from + i];
                block[i] = (ulong)((v << 1) ^ (v >> 63));
            }

            int low = Best(block.AsSpan(0, count));
            bits.Add((ulong)low, 6);
            for (int i = 0; i < count; i++)
            {
                ulong high = block[i] >> low;
                if (high >= MostOnes)
                {
                    bits.Add((1UL << MostOnes) - 1, MostOnes);
                    bits.Add(block[i], Whole);
                }
                else
                {
                    bits.Add((1UL << ((int)high + 1)) - 2, (int)high + 1);
                    bits.Add(block[i] & ((1UL << low) - 1), low);
                }
            }
        }

        return bits.Bytes();
    }

    /// <summary>About how many bits the numbers will take.</summary>
    public static double Cost(ReadOnlySpan<long> numbers)
    {
        double sum = 0;
        foreach (long v in numbers)
        {
            sum += BitOperations.Log2((ulong)Math.Abs(v) + 1);
        }

        return sum;
    }

    private static int Best(ReadOnlySpan<ulong> block)
    {
        // The best number of low bits lies near the logarithm of the mean.
        ulong sum = 0;
        foreach (ulong v in block)
        {
            sum += v;
        }

        int guess = BitOperations.Log2((sum / (ulong)block.Length) + 1), best = 0;
        ulong least = ulong.MaxValue;
        for (int low = Math.Max(0, guess - 2); low <= guess + 1; low++)
        {
            ulong cost = 0;
            foreach (ulong v in block)
            {
                cost += v >> low >= MostOnes ? MostOnes + Whole : (v >> low) + 1 + (ulong)low;
            }

            (least, best) = cost < least ? (cost, low) : (least, best);
        }

        return best;
    }

    private sealed class Writer
    {
        private readonly List<byte> bytes = [];
        private int open, free = 8;

        public void Add(ulong value, int count)
        {
            while (count > 0)
            {
                int take = Math.Min(free, count);
                open |= (int)((value >> (count - take)) & ((1UL << take) - 1)) << (free - take);
                (free, count) = (free - take, count - take);
                if (free == 0)
                {
                    bytes.Add((byte)open);
                    (open, free) = (0, 8);
                }
            }
        }

        public byte[] Bytes() => free < 8 ? [.. bytes, (byte)open] : [.. bytes];
    }
}
