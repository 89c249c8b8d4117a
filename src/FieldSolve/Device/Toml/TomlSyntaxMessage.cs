using System.Text.RegularExpressions;

namespace FieldSolve.Device;

/// <summary>Turns what the TOML parser says into what the user should do.</summary>
internal static partial class TomlSyntaxMessage
{
    private const string Quotes = "text and quantities stand in quotes, for example \"5 um\"";

    public static string Of(string message)
    {
        if (Expecting().Match(message) is { Success: true } m)
        {
            return m.Groups[1].Value == "`<eof>`" || m.Groups[1].Value.Length == 0
                ? "the line ends too early; a line is a [table], a key = value or a # comment"
                : $"{Quoted(m.Groups[1].Value)} may not follow here; a line holds one key = value, and {Quotes}";
        }

        if (NoValue().Match(message) is { Success: true } v)
        {
            return v.Groups[1].Value == "`<eof>`" ? "the value is missing"
                : v.Groups[1].Value.Trim('`') is { } word && word.ToUpperInvariant() is "TRUE" or "FALSE" or "YES" or "NO" or "ON" or "OFF"
                    ? $"{Quoted(v.Groups[1].Value)} is no value; write true or false, in small letters and without quotes"
                    : $"{Quoted(v.Groups[1].Value)} is no value; {Quotes}";
        }

        if (message.Contains("`=` after a key", StringComparison.Ordinal))
        {
            return "'=' is missing after the key; write key = value";
        }

        if (message.Contains("string literal", StringComparison.Ordinal) || message.Contains("newline in a string", StringComparison.Ordinal))
        {
            return "the closing quote is missing";
        }

        if (message.Contains("multi-line string", StringComparison.Ordinal))
        {
            return "the three closing quotes are missing";
        }

        if (message.Contains("to separate items", StringComparison.Ordinal))
        {
            return "a comma is missing between the items of a list";
        }

        if (InTable().Match(message) is { Success: true } t)
        {
            return t.Groups[1].Value is "`<eof>`" or "`\n`"
                ? "the closing '}' is missing"
                : $"{Quoted(t.Groups[1].Value)} may not stand here between braces; there stands key = value, and {Quotes}";
        }

        if (message.Contains("closing `]`", StringComparison.Ordinal) || message.Contains("expecting `]`", StringComparison.Ordinal))
        {
            return "the closing ']' is missing";
        }

        if (message.Contains("expecting `]]`", StringComparison.Ordinal))
        {
            return "the closing ']]' is missing";
        }

        return Unexpected().Match(message) is { Success: true } u
            ? $"'{u.Groups[1].Value}' is not expected here; a line is a [table], a key = value or a # comment"
            : Plain(message) + Remedy(message);
    }

    // The parser's own words, without the names of its tokens and its full stops.
    private static string Plain(string message)
    {
        string text = TokenNames().Replace(message, "").Replace('`', '\'').Trim().TrimEnd('.');
        return text.Length == 0 ? "this line cannot be read" : char.ToLowerInvariant(text[0]) + text[1..];
    }

    private static string Remedy(string message)
    {
        bool Says(params string[] words) => words.Any(w => message.Contains(w, StringComparison.OrdinalIgnoreCase));
        return Says("escape", "Unicode scalar", "surrogate") ? "; write \\\\ for a backslash, or put the text in single quotes"
            : Says("control character", "\\r not followed") ? "; remove it, or save the file as plain text"
            : Says("end-of-line found while expecting a value") ? "; write key = value, and " + Quotes
            : Says("digit", "leading zero", "underscore", "integer", "float", "hexadecimal", "octal", "binary", "date", "prefix")
                ? "; write a plain number such as 5, -0.2 or 1e-3, and put everything else in quotes, for example \"5 um\""
            : "; a line is a [table], a key = value or a # comment";
    }

    private static string Quoted(string token)
    {
        const int Longest = 40;
        string bare = token.Trim('`');
        return bare.Length > Longest ? $"'{bare[..Longest]}…'" : $"'{bare}'";
    }

    [GeneratedRegex("^Unexpected token found (`.*?`).* while expecting token `newline`", RegexOptions.Singleline)]
    private static partial Regex Expecting();

    [GeneratedRegex("^Unexpected token (`.*`) for a value", RegexOptions.Singleline)]
    private static partial Regex NoValue();

    [GeneratedRegex("while parsing inline table.* instead of (`.*`)", RegexOptions.Singleline)]
    private static partial Regex InTable();

    [GeneratedRegex(@"^Unexpected token \[(.*)\] found", RegexOptions.Singleline)]
    private static partial Regex Unexpected();

    [GeneratedRegex(@" \(token: [^)]*\)")]
    private static partial Regex TokenNames();
}
