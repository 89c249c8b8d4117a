using Tomlyn;
using Tomlyn.Parsing;
using Tomlyn.Syntax;

namespace FieldSolve.Device;

/// <summary>Reads TOML text into tables with places, reporting every statement that cannot be read and keeping the others.</summary>
internal static class TomlDocument
{
    /// <param name="text">The file's text without a byte order mark.</param>
    /// <param name="hasBadBytes">Bytes that are not UTF-8 stand in it as U+FFFD; they are faults.</param>
    /// <param name="faults">Where to report.</param>
    /// <returns>The root table; <see cref="TomlTable.Damaged"/> marks tables that lost a line.</returns>
    public static TomlTable Parse(string text, bool hasBadBytes, FaultList faults)
    {
        if (!hasBadBytes && TryParse(text, out DocumentSyntax? whole, out _, out _))
        {
            return new TomlTreeBuilder(faults, []).Build(whole!);
        }

        string[] lines = text.ReplaceLineEndings("\n").Split('\n');
        string[] good = new string[lines.Length];
        Array.Fill(good, "");
        List<(int Line, bool Header)> lost = [];
        bool orphans = false; // lines below a header that could not be read
        foreach ((int first, int count) in TomlStatements.Split(lines))
        {
            string statement = count == 1 ? lines[first] : string.Join('\n', lines, first, count);
            bool header = count == 1 && TomlStatements.LooksLikeHeader(statement);
            orphans &= !header;
            if (Reads(statement, hasBadBytes, out Place at, out string? message))
            {
                if (!orphans)
                {
                    Array.Copy(lines, first, good, first, count);
                }

                continue;
            }

            faults.Add(at with { Line = at.Line + first }, message!);
            if (!orphans)
            {
                lost.Add((first + 1, header));
            }

            orphans |= header;
        }

        if (TryParse(string.Join('\n', good), out DocumentSyntax? rest, out Place left, out string? why))
        {
            return new TomlTreeBuilder(faults, lost).Build(rest!);
        }

        faults.Add(left, why!);
        return new TomlTable(Place.Start, TableOrigin.Header) { Damaged = true };
    }

    private static bool Reads(string statement, bool hasBadBytes, out Place at, out string? message)
    {
        int bad = hasBadBytes ? statement.IndexOf('\uFFFD', StringComparison.Ordinal) : -1;
        if (bad >= 0)
        {
            int line = statement.AsSpan(0, bad).Count('\n');
            int start = bad == 0 ? 0 : statement.LastIndexOf('\n', bad - 1) + 1;
            (at, message) = (new(line + 1, statement.AsSpan(start, bad - start).Length + 1), "this byte is not valid UTF-8; save the file as UTF-8");
            return false;
        }

        return TryParse(statement, out _, out at, out message);
    }

    private static bool TryParse(string text, out DocumentSyntax? document, out Place at, out string? message)
    {
        (at, message) = (Place.Start, null);
        try
        {
            document = SyntaxParser.Parse(text, "", validate: false);
        }
        catch (TomlException e)
        {
            // The parser stops at a depth of nesting that no device file needs.
            document = null;
            at = e.Line is > 0 ? new(e.Line.Value, Math.Max(1, e.Column ?? 1)) : Place.Start;
            message = "lists and tables are nested too deeply";
            return false;
        }

        catch (ArgumentOutOfRangeException)
        {
            // What the parser does when the text ends right after a backslash.
            document = null;
            message = "a backslash ends the text; write \\\\ for a backslash, and close the quote";
            return false;
        }

        if (!document.HasErrors)
        {
            return true;
        }

        DiagnosticMessage first = document.Diagnostics.OrderBy(d => d.Span.Start.Offset).First();
        at = new(first.Span.Start.Line + 1, first.Span.Start.Column + 1);
        message = TomlSyntaxMessage.Of(first.Message);
        return false;
    }
}
