namespace FieldSolve.Device;

/// <summary>Finds what a misspelt name was meant to be.</summary>
internal static class Suggest
{
    private const int LongestName = 64;

    /// <summary>The candidate with the fewest edits (insert, drop, change or swap of neighbours), if few enough to be a slip; else null.
    /// Of equals the first.</summary>
    public static string? Nearest(string name, IEnumerable<string> candidates)
    {
        if (name.Length > LongestName)
        {
            return null;
        }

        string? best = null;
        int fewest = int.MaxValue;
        foreach (string c in candidates)
        {
            int edits = name.Equals(c, StringComparison.OrdinalIgnoreCase) ? 0 : Distance(name, c);
            if (edits < fewest && edits <= Math.Max(1, Math.Max(name.Length, c.Length) / 3) && edits < Math.Min(name.Length, c.Length))
            {
                (best, fewest) = (c, edits);
            }
        }

        return best;
    }

    /// <summary>"; did you mean 'x'?", or what there is.</summary>
    public static string Hint(string name, IReadOnlyList<string> candidates) =>
        Nearest(name, candidates) is string near ? $"; did you mean '{near}'?"
        : candidates.Count == 0 ? "; there are none"
        : $"; there are {List(candidates, "and")}";

    /// <summary>Names for a message: 'a', 'b' or 'c'; long lists are cut.</summary>
    public static string List(IReadOnlyList<string> names, string joint = "or")
    {
        const int Longest = 16;
        IEnumerable<string> quoted = names.Take(Longest).Select(n => $"'{n}'");
        return names.Count > Longest ? string.Join(", ", quoted) + " …"
            : names.Count < 2 ? string.Concat(quoted)
            : string.Join(", ", quoted.SkipLast(1)) + $" {joint} " + quoted.Last();
    }

    // V. I. Levenshtein, Soviet Physics Doklady 10 (1966) 707, with swaps of neighbours counted as one edit.
    private static int Distance(string a, string b)
    {
        int[,] d = new int[a.Length + 1, b.Length + 1];
        for (int i = 0; i <= a.Length; i++)
        {
            for (int j = 0; j <= b.Length; j++)
            {
                d[i, j] = i == 0 ? j : j == 0 ? i : Math.Min(
                    Math.Min(d[i - 1, j], d[i, j - 1]) + 1,
                    d[i - 1, j - 1] + (a[i - 1] == b[j - 1] ? 0 : 1));
                if (i > 1 && j > 1 && a[i - 1] == b[j - 2] && a[i - 2] == b[j - 1])
                {
                    d[i, j] = Math.Min(d[i, j], d[i - 2, j - 2] + 1);
                }
            }
        }

        return d[a.Length, b.Length];
    }
}
