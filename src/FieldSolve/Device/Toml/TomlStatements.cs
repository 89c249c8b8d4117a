using System.Buffers;

namespace FieldSolve.Device;

/// <summary>
/// Splits a TOML text into its statements (a header, or a key with its value) by lines, so that a statement that cannot be
/// read does not drag down those after it.
/// </summary>
internal static class TomlStatements
{
    /// <summary>An open bracket is followed so far at most; a list longer than this is reported as one that never closes.</summary>
    private const int LongestStatement = 2000;

    /// <summary>Lines looked ahead at in one file, which keeps noise full of brackets from costing quadratic time.</summary>
    private const int LookAhead = 100_000;

    private static readonly SearchValues<char> KeyCharacters =
        SearchValues.Create("abcdefghijklmnopqrstuvwxyzABCDEFGHIJKLMNOPQRSTUVWXYZ0123456789_-. ");

    /// <summary>First line and number of lines of each statement.</summary>
    public static IEnumerable<(int First, int Count)> Split(IReadOnlyList<string> lines)
    {
        int budget = LookAhead;
        for (int k = 0; k < lines.Count;)
        {
            int count = Extent(lines, k, ref budget);
            yield return (k, count);
            k += count;
        }
    }

    /// <summary>True when a line looks like a table's header, complete or not. Rows of a list start with a quote, a digit or a bracket.</summary>
    public static bool LooksLikeHeader(string line)
    {
        ReadOnlySpan<char> s = line.AsSpan().Trim();
        if (s.Length < 2 || s[0] != '[')
        {
            return false;
        }

        s = s[(s[1] == '[' ? 2 : 1)..].TrimStart();
        return s.Length > 0 && (char.IsAsciiLetter(s[0]) || s[0] == '_');
    }

    private static int Extent(IReadOnlyList<string> lines, int first, ref int budget)
    {
        Scanner scanner = default;
        scanner.Pass(lines[first]);
        if (!scanner.Open || LooksLikeHeader(lines[first]))
        {
            return 1;
        }

        int firstKey = 0;
        for (int k = first + 1; k < lines.Count && k - first < LongestStatement && budget > 0; k++, budget--)
        {
            if (LooksLikeHeader(lines[k]) && !scanner.InText)
            {
                break;
            }

            if (firstKey == 0 && LooksLikeKey(lines[k]))
            {
                firstKey = k - first;
            }

            scanner.Pass(lines[k]);
            if (!scanner.Open)
            {
                return k - first + 1;
            }
        }

        // Never closed: leave what follows to itself.
        return Math.Max(1, firstKey);
    }

    private static bool LooksLikeKey(string line)
    {
        int equals = line.IndexOf('=', StringComparison.Ordinal);
        return equals > 0 && line.AsSpan(0, equals).Trim().IndexOfAnyExcept(KeyCharacters) < 0;
    }

    /// <summary>Follows brackets and strings over lines.</summary>
    private struct Scanner
    {
        private int depth;
        private char longQuote;

        public readonly bool InText => longQuote != 0;

        public readonly bool Open => depth > 0 || InText;

        public void Pass(string line)
        {
            for (int k = 0; k < line.Length; k++)
            {
                char c = line[k];
                if (longQuote != 0)
                {
                    if (c == '\\' && longQuote == '"')
                    {
                        k++;
                    }
                    else if (IsTriple(line, k, longQuote))
                    {
                        longQuote = '\0';
                        k += 2;
                    }
                }
                else if (c is '"' or '\'')
                {
                    if (IsTriple(line, k, c))
                    {
                        longQuote = c;
                        k += 2;
                    }
                    else
                    {
                        k = EndOfText(line, k);
                    }
                }
                else if (c == '#')
                {
                    return;
                }
                else if (c is '[' or '{')
                {
                    depth++;
                }
                else if (c is ']' or '}')
                {
                    depth = Math.Max(0, depth - 1);
                }
            }
        }

        private static bool IsTriple(string line, int k, char quote) =>
            k + 2 < line.Length && line[k] == quote && line[k + 1] == quote && line[k + 2] == quote;

        private static int EndOfText(string line, int start)
        {
            for (int k = start + 1; k < line.Length; k++)
            {
                if (line[k] == '\\' && line[start] == '"')
                {
                    k++;
                }
                else if (line[k] == line[start])
                {
                    return k;
                }
            }

            return line.Length;
        }
    }
}
