namespace FieldSolve.Sparse;

/// <summary>
/// Rows that may be left out while the graph is cut: a row follows a neighbour whose neighbourhood contains its own. A small cut never needs
/// a follower for itself, so it goes where its neighbours go. The nodes in the middles of the edges of quadratic triangles are of this kind, three
/// quarters of all.
/// </summary>
internal static class Followers
{
    /// <summary>What <see cref="Find"/> sets for a follower.</summary>
    public const int Mark = -2;

    private const int Probes = 256;

    /// <summary>Sets <paramref name="number"/> of the followers to <see cref="Mark"/> and returns them, ascending; none where they are few.</summary>
    /// <param name="pattern">The graph.</param>
    /// <param name="number">Negative for rows that stay out of it.</param>
    /// <param name="cancel">Stops the work.</param>
    public static int[] Find(SymmetricPattern pattern, int[] number, CancellationToken cancel)
    {
        int n = pattern.Size, found = 0;
        int[] seen = new int[n];
        int probes = Math.Min(n, Probes);
        for (int k = 0; k < probes; k++)
        {
            int i = (int)((long)k * n / probes);
            found += number[i] >= 0 && Follows(pattern, number, seen, i) ? 1 : 0;
        }
        if (2 * found < probes)
        {
            return [];
        }
        int[] followers = GC.AllocateUninitializedArray<int>(n);
        found = 0;
        for (int i = 0; i < n; i++)
        {
            if ((i & 0xFFFF) == 0)
            {
                cancel.ThrowIfCancellationRequested();
            }
            if (number[i] != -1 && Follows(pattern, number, seen, i))
            {
                followers[found++] = i;
            }
        }
        if (2 * found < n)
        {
            return [];
        }
        Array.Resize(ref followers, found);
        foreach (int i in followers)
        {
            number[i] = Mark;
        }
        return followers;
    }

    // Only a neighbour with more neighbours counts, so that two rows never follow each other. seen[j] = i + 1: j is a neighbour of i.
    private static bool Follows(SymmetricPattern pattern, int[] number, int[] seen, int i)
    {
        int[] start = pattern.Start, column = pattern.Column;
        int from = start[i], to = start[i + 1], count = 0;
        for (int k = from; k < to; k++)
        {
            int j = column[k];
            seen[j] = i + 1;
            count += number[j] == -1 ? 0 : 1;
        }
        for (int k = from; k < to; k++)
        {
            int j = column[k], left = start[j + 1] - start[j];
            if (left <= to - from || number[j] == -1)
            {
                continue;
            }
            int shared = 0;
            for (int m = start[j]; m < start[j + 1] && shared + left >= count; m++, left--)
            {
                int w = column[m];
                shared += seen[w] == i + 1 && number[w] != -1 ? 1 : 0;
            }
            if (shared == count)
            {
                return true;
            }
        }
        return false;
    }
}
