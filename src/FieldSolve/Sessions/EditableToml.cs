using System.Globalization;
using System.Text;
using Tomlyn.Parsing;
using Tomlyn.Syntax;

namespace FieldSolve.Sessions;

/// <summary>One value of a TOML text, with its place in it.</summary>
/// <param name="Path">Such as "law.a", "contact[2].edge.at" or "wiring[0].along[1]".</param>
/// <param name="Kind">"text", "number", "flag", "list", "table" (in braces) or "other".</param>
/// <param name="Value">The text without quotes, or the literal as it stands; empty for lists and tables.</param>
/// <param name="Start">Offset of the value's first character.</param>
/// <param name="End">Offset behind its last character.</param>
/// <param name="KeyStart">Offset of the key; equal to <paramref name="Start"/> inside a list.</param>
public sealed record TomlPiece(string Path, string Kind, string Value, int Start, int End, int KeyStart);

/// <summary>A table under a header.</summary>
/// <param name="Path">Such as "law" or "contact[2]"; empty for what stands before the first header.</param>
/// <param name="Start">Offset of the header.</param>
/// <param name="End">Offset behind the table's last value (or its header).</param>
public sealed record TomlBlock(string Path, int Start, int End);

/// <summary>
/// A TOML text that is changed in place: a change touches the characters of the values that it names and no other, so comments, order, spacing and
/// line ends stay. Immutable; each change gives a new text.
/// </summary>
public sealed class EditableToml
{
    private readonly Dictionary<string, TomlPiece> byPath = new(StringComparer.Ordinal);
    private readonly List<TomlPiece> pieces = [];
    private readonly List<TomlBlock> blocks = [];
    private readonly string newLine;

    /// <summary>Reads a text. What cannot be read has no pieces; faults are the device reader's business.</summary>
    /// <param name="text">TOML; a byte order mark in front is kept.</param>
    public EditableToml(string text)
    {
        ArgumentNullException.ThrowIfNull(text);
        Text = text;
        newLine = text.Contains("\r\n", StringComparison.Ordinal) ? "\r\n" : "\n";
        int skip = text.StartsWith('\uFEFF') ? 1 : 0;
        DocumentSyntax document = SyntaxParser.Parse(text[skip..], "");
        Add("", document.KeyValues, skip);
        if (pieces.Count > 0)
        {
            blocks.Add(new("", skip, pieces.Max(p => p.End)));
        }

        Dictionary<string, int> count = new(StringComparer.Ordinal);
        foreach (TableSyntaxBase table in document.Tables)
        {
            string name = NameOf(table.Name);
            if (table is TableArraySyntax)
            {
                int k = count.GetValueOrDefault(name);
                count[name] = k + 1;
                name = string.Create(CultureInfo.InvariantCulture, $"{name}[{k}]");
            }

            int before = pieces.Count, start = table.Span.Start.Offset + skip;
            Add(name + ".", table.Items, skip);
            int end = pieces.Skip(before).Select(p => p.End).DefaultIfEmpty(0).Max();
            blocks.Add(new(name, start, end > 0 ? end : LineEnd(start)));
        }
    }

    /// <summary>The text.</summary>
    public string Text { get; }

    /// <summary>All values in the order of the text.</summary>
    public IReadOnlyList<TomlPiece> Pieces => pieces;

    /// <summary>All tables under headers, in the order of the text.</summary>
    public IReadOnlyList<TomlBlock> Blocks => blocks;

    /// <summary>The value at a path, or null.</summary>
    public TomlPiece? Find(string path) => byPath.GetValueOrDefault(path);

    /// <summary>The value that holds a place of the text, the innermost one; null when there is none.</summary>
    /// <param name="line">1-based.</param>
    /// <param name="column">1-based.</param>
    public TomlPiece? At(int line, int column)
    {
        int offset = Text.StartsWith('\uFEFF') ? 1 : 0;
        for (int k = 1; k < line; k++)
        {
            offset = Text.IndexOf('\n', offset) + 1;
            if (offset == 0)
            {
                return null;
            }
        }

        offset += column - 1;
        return pieces.Where(p => p.KeyStart <= offset && offset < p.End).MinBy(p => p.End - p.KeyStart);
    }

    /// <summary>A text as a TOML literal.</summary>
    public static string Quoted(string value)
    {
        ArgumentNullException.ThrowIfNull(value);
        StringBuilder made = new("\"");
        foreach (char c in value)
        {
            made.Append(c switch
            {
                '"' => "\\\"",
                '\\' => "\\\\",
                '\n' => "\\n",
                '\r' => "\\r",
                '\t' => "\\t",
                < ' ' or '\u007F' => string.Create(CultureInfo.InvariantCulture, $"\\u{(int)c:X4}"),
                _ => c.ToString(),
            });
        }

        return made.Append('"').ToString();
    }

    /// <summary>The text with one value changed, or with a new key at the end of its table; a table that is missing is added at the end.</summary>
    /// <param name="path">Path of the value.</param>
    /// <param name="literal">TOML.</param>
    /// <exception cref="LayoutEditException">The path names no place where a value may stand.</exception>
    public EditableToml With(string path, string literal)
    {
        ArgumentNullException.ThrowIfNull(path);
        ArgumentNullException.ThrowIfNull(literal);
        if (Find(path) is { } piece)
        {
            return literal == Text[piece.Start..piece.End] ? this : new(Text[..piece.Start] + literal + Text[piece.End..]);
        }

        int dot = path.LastIndexOf('.');
        (string parent, string key) = dot < 0 ? ("", path) : (path[..dot], path[(dot + 1)..]);
        if (key.Length == 0 || !key.All(c => char.IsAsciiLetterOrDigit(c) || c is '_' or '-'))
        {
            throw new LayoutEditException($"'{path}' names no value of the device file");
        }

        string line = $"{key} = {literal}";
        if (blocks.FirstOrDefault(b => b.Path == parent) is { } block)
        {
            int end = LineEnd(block.End);
            return new(Text[..end] + newLine + line + Text[end..]);
        }

        if (Find(parent) is { Kind: "table" } braces)
        {
            int close = Text.LastIndexOf('}', braces.End - 1);
            string inside = Text[(braces.Start + 1)..close];
            string kept = inside.TrimEnd();
            string comma = kept.Length == 0 ? " " : kept.EndsWith(',') ? " " : ", ";
            return new(Text[..(braces.Start + 1)] + kept + comma + line + (inside.Length > kept.Length ? inside[kept.Length..] : " ") + Text[close..]);
        }

        // A table written by dotted keys, as in outline.file = "…", gets another of them.
        if (pieces.LastOrDefault(p => p.KeyStart < p.Start && IsChild(p.Path, parent)) is { } dotted)
        {
            string written = Text[dotted.KeyStart..Text.IndexOf('=', dotted.KeyStart)];
            string more = string.Concat(written.AsSpan(0, written.LastIndexOf('.') + 1), line);
            int behind = BeginsLine(dotted) ? LineEnd(dotted.End) : dotted.End;
            return new(Text[..behind] + (BeginsLine(dotted) ? newLine : ", ") + more + Text[behind..]);
        }

        return parent.Length == 0
            ? new(line + newLine + Text)
            : parent.Contains('[', StringComparison.Ordinal) || parent.Contains('.', StringComparison.Ordinal)
            ? throw new LayoutEditException($"'{path}' names no value of the device file")
            : Appended($"[{parent}]{newLine}{line}", after: null);
    }

    /// <summary>The text without a key, or without a whole table; the line goes with its comment.</summary>
    /// <param name="path">Path of a key under a header or in braces, or of a table with a header or of dotted keys.</param>
    /// <exception cref="LayoutEditException">There is no such key or table, or it is written inside a list.</exception>
    public EditableToml Without(string path)
    {
        if (blocks.FirstOrDefault(b => b.Path == path) is { } block)
        {
            int start = LineStart(block.Start), end = AfterLine(LineEnd(block.End));
            while (end < Text.Length && Text[end..].TrimStart(' ', '\t') is var rest && (rest.StartsWith('\n') || rest.StartsWith("\r\n", StringComparison.Ordinal)))
            {
                end = AfterLine(LineEnd(end));
            }

            return new(Text[..start] + Text[end..]);
        }

        if (Find(path) is not { } piece)
        {
            string prefix = path + ".";
            EditableToml rest = this;
            while (rest.pieces.FirstOrDefault(p => p.Path.StartsWith(prefix, StringComparison.Ordinal)) is { } dotted)
            {
                rest = rest.Without(dotted.Path);
            }

            return ReferenceEquals(rest, this) ? throw new LayoutEditException($"the device file has no '{path}'") : rest;
        }

        if (!BeginsLine(piece))
        {
            return pieces.LastOrDefault(p => p.Kind is "table" or "list" && p.Start < piece.KeyStart && piece.End < p.End) is { Kind: "table" }
                ? WithoutInBraces(piece)
                : throw new LayoutEditException($"'{path}' is written inside a list; take it out of the file by hand");
        }

        return new(Text[..LineStart(piece.KeyStart)] + Text[AfterLine(LineEnd(piece.End))..]);
    }

    private bool BeginsLine(TomlPiece piece) => Text.AsSpan(LineStart(piece.KeyStart), piece.KeyStart - LineStart(piece.KeyStart)).IsWhiteSpace();

    private static bool IsChild(string path, string parent) =>
        path.Length > parent.Length + 1 && path.StartsWith(parent, StringComparison.Ordinal) && path[parent.Length] == '.' && path.AsSpan(parent.Length + 1).IndexOfAny('.', '[') < 0;

    // With the comma that follows, or else with the one before.
    private EditableToml WithoutInBraces(TomlPiece piece)
    {
        int start = piece.KeyStart, end = piece.End, next = end, before = start;
        while (next < Text.Length && Text[next] is ' ' or '\t')
        {
            next++;
        }

        while (before > 0 && Text[before - 1] is ' ' or '\t')
        {
            before--;
        }

        if (next < Text.Length && Text[next] == ',')
        {
            end = next + 1;
            while (end < Text.Length && Text[end] is ' ' or '\t')
            {
                end++;
            }
        }
        else if (before > 0 && Text[before - 1] == ',')
        {
            start = before - 1;
        }

        return new(Text[..start] + Text[end..]);
    }

    /// <summary>The text with an item put before one of a list.</summary>
    /// <param name="path">Path of the item that it goes before.</param>
    /// <param name="literal">TOML.</param>
    /// <exception cref="LayoutEditException">There is no such item.</exception>
    public EditableToml ItemBefore(string path, string literal)
    {
        TomlPiece piece = Item(path);
        return new(Text[..piece.Start] + literal + ", " + Text[piece.Start..]);
    }

    /// <summary>The text with an item put behind one of a list.</summary>
    /// <param name="path">Path of the item that it goes behind.</param>
    /// <param name="literal">TOML.</param>
    /// <exception cref="LayoutEditException">There is no such item.</exception>
    public EditableToml ItemAfter(string path, string literal)
    {
        TomlPiece piece = Item(path);
        return new(Text[..piece.End] + ", " + literal + Text[piece.End..]);
    }

    /// <summary>The text without an item of a list; its comma goes along.</summary>
    /// <param name="path">Path of the item.</param>
    /// <exception cref="LayoutEditException">There is no such item.</exception>
    public EditableToml WithoutItem(string path)
    {
        TomlPiece piece = Item(path);
        int open = path.LastIndexOf('['), k = int.Parse(path[(open + 1)..^1], CultureInfo.InvariantCulture);
        if (Find(string.Create(CultureInfo.InvariantCulture, $"{path[..open]}[{k + 1}]")) is not null)
        {
            int end = Text.IndexOf(',', piece.End) + 1;
            while (end < Text.Length && Text[end] is ' ' or '\t')
            {
                end++;
            }

            return new(Text[..piece.Start] + Text[end..]);
        }

        int start = k > 0 ? Item(string.Create(CultureInfo.InvariantCulture, $"{path[..open]}[{k - 1}]")).End : piece.Start;
        return new(Text[..start] + Text[piece.End..]);
    }

    private TomlPiece Item(string path) => path.EndsWith(']') && Find(path) is { } piece ? piece : throw new LayoutEditException($"the device file has no item '{path}'");

    /// <summary>The text with a table added.</summary>
    /// <param name="table">Header and keys, lines parted by \n.</param>
    /// <param name="after">Path of the table it follows; null for the end of the text.</param>
    public EditableToml Appended(string table, string? after)
    {
        ArgumentNullException.ThrowIfNull(table);
        table = table.ReplaceLineEndings(newLine);
        if (after is not null && blocks.FirstOrDefault(b => b.Path == after) is { } block)
        {
            int end = LineEnd(block.End);
            return new(Text[..end] + newLine + newLine + table + (end == Text.Length ? newLine : "") + Text[end..]);
        }

        string before = Text.Length == 0 || Text.EndsWith('\n') ? Text : Text + newLine;
        return new(before + newLine + table + newLine);
    }

    /// <summary>The text with a table put in the place of another; comments between the old table's keys go with it.</summary>
    /// <exception cref="LayoutEditException">There is no such table.</exception>
    public EditableToml Replaced(string path, string tables)
    {
        ArgumentNullException.ThrowIfNull(tables);
        TomlBlock block = blocks.FirstOrDefault(b => b.Path == path) ?? throw new LayoutEditException($"the device file has no table '{path}'");
        return new(Text[..block.Start] + tables.ReplaceLineEndings(newLine) + Text[LineEnd(block.End)..]);
    }

    private int LineStart(int offset) => offset == 0 ? 0 : Text.LastIndexOf('\n', offset - 1) + 1;

    // Before the line's end characters.
    private int LineEnd(int offset)
    {
        int end = Text.IndexOf('\n', offset);
        return end < 0 ? Text.Length : end > offset && Text[end - 1] == '\r' ? end - 1 : end;
    }

    private int AfterLine(int end) => end >= Text.Length ? Text.Length : Text[end] == '\r' ? end + 2 : end + 1;

    private void Add(string prefix, SyntaxList<KeyValueSyntax> items, int skip)
    {
        foreach (KeyValueSyntax item in items)
        {
            if (item.Key is not null && item.Value is not null)
            {
                Add(prefix + NameOf(item.Key), item.Value, item.Key.Span.Start.Offset + skip, skip);
            }
        }
    }

    private void Add(string path, SyntaxNode value, int keyStart, int skip)
    {
        int start = value.Span.Start.Offset + skip, end = value.Span.End.Offset + 1 + skip;
        (string kind, string shown) = value switch
        {
            StringValueSyntax s => ("text", s.Value ?? ""),
            IntegerValueSyntax or FloatValueSyntax => ("number", Text[start..end]),
            BooleanValueSyntax => ("flag", Text[start..end]),
            ArraySyntax => ("list", ""),
            InlineTableSyntax => ("table", ""),
            _ => ("other", Text[start..Math.Min(end, Text.Length)]),
        };
        TomlPiece piece = new(path, kind, shown, start, end, keyStart < 0 ? start : keyStart);
        pieces.Add(piece);
        byPath.TryAdd(path, piece);
        if (value is ArraySyntax list)
        {
            int k = 0;
            foreach (ArrayItemSyntax item in list.Items)
            {
                if (item.Value is not null)
                {
                    Add(string.Create(CultureInfo.InvariantCulture, $"{path}[{k++}]"), item.Value, -1, skip);
                }
            }
        }
        else if (value is InlineTableSyntax braces)
        {
            foreach (InlineTableItemSyntax item in braces.Items)
            {
                if (item.KeyValue?.Key is { } key && item.KeyValue.Value is { } inner)
                {
                    Add(path + "." + NameOf(key), inner, key.Span.Start.Offset + skip, skip);
                }
            }
        }
    }

    private static string NameOf(KeySyntax? key) => key is null ? ""
        : string.Join('.', new[] { PartOf(key.Key) }.Concat(key.DotKeys.Select(d => PartOf(d.Key))));

    private static string PartOf(SyntaxNode? part) => part switch
    {
        BareKeySyntax bare => bare.Key?.Text ?? "",
        StringValueSyntax text => text.Value ?? "",
        _ => "",
    };
}
