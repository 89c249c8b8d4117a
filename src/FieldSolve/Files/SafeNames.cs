using System.Globalization;
using System.Text;

namespace FieldSolve.Files;

/// <summary>Turns names from a device file into file names that every file system takes.</summary>
public static class SafeNames
{
    private const int MostCharacters = 48;

    private static readonly HashSet<string> Reserved = new(
        ["con", "prn", "aux", "nul", .. Enumerable.Range(0, 10).SelectMany(k => new[] { $"com{k}", $"lpt{k}" })],
        StringComparer.OrdinalIgnoreCase);

    /// <summary>One file name (without extension) per name.</summary>
    /// <param name="names">Any text.</param>
    /// <returns>ASCII letters, digits, '-', '_', '.' and '+' only; different even where letter case is ignored; the same names in the same
    /// order always give the same result.</returns>
    public static IReadOnlyList<string> Of(IEnumerable<string> names)
    {
        ArgumentNullException.ThrowIfNull(names);
        HashSet<string> taken = new(StringComparer.OrdinalIgnoreCase);
        List<string> result = [];
        foreach (string name in names)
        {
            string plain = Plain(name), candidate = plain;
            for (int k = 2; !taken.Add(candidate); k++)
            {
                candidate = string.Create(CultureInfo.InvariantCulture, $"{plain}-{k}");
            }

            result.Add(candidate);
        }

        return result;
    }

    /// <summary>File name of the map of a wiring at a current, for example "0-deg-010.vtu".</summary>
    /// <param name="safeWiring">The wiring's name as <see cref="Of"/> gave it.</param>
    /// <param name="currentIndex">Position in the drive's list of currents.</param>
    public static string Map(string safeWiring, int currentIndex) =>
        string.Create(CultureInfo.InvariantCulture, $"{safeWiring}-{currentIndex:000}.vtu");

    private static string Plain(string name)
    {
        StringBuilder text = new();
        foreach (char c in name)
        {
            string piece = c switch
            {
                _ when char.IsAsciiLetterOrDigit(c) || c is '_' or '.' or '+' => c.ToString(),
                '\u00b5' or '\u03bc' => "u",
                '\u00b0' => "deg",
                '\u03a9' or '\u2126' => "ohm",
                _ => "-",
            };
            if (piece != "-" || (text.Length > 0 && text[^1] != '-'))
            {
                text.Append(piece);
            }
        }

        if (text.Length > MostCharacters)
        {
            text.Length = MostCharacters;
        }

        string plain = text.ToString().Trim('-', '.');
        string stem = plain.Split('.')[0];
        return plain.Length == 0 ? "wiring" : Reserved.Contains(stem) ? $"{plain.Replace('.', '-')}-wiring" : plain;
    }
}
