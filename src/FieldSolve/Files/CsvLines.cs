using System.Text;

namespace FieldSolve.Files;

/// <summary>Lines of a table: RFC 4180 (comma, CRLF, quotes where needed).</summary>
internal static class CsvLines
{
    /// <summary>Adds one line.</summary>
    public static void Add(StringBuilder text, IEnumerable<string> cells)
    {
        bool first = true;
        foreach (string cell in cells)
        {
            text.Append(first ? "" : ",").Append(Quoted(cell));
            first = false;
        }

        text.Append("\r\n");
    }

    private static string Quoted(string cell) =>
        cell.AsSpan().IndexOfAny(",\"\r\n") < 0 ? cell : $"\"{cell.Replace("\"", "\"\"", StringComparison.Ordinal)}\"";
}
