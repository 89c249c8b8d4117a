using System.Globalization;
using Tomlyn.Syntax;

namespace FieldSolve.Device;

/// <summary>Makes tables out of the parser's syntax nodes and reports keys and tables that are defined twice.</summary>
/// <param name="faults">Where to report.</param>
/// <param name="lost">Lines that could not be read, in order, and whether each was a header.</param>
internal sealed class TomlTreeBuilder(FaultList faults, IReadOnlyList<(int Line, bool Header)> lost)
{
    private readonly TomlTable root = new(Place.Start, TableOrigin.Header);

    public TomlTable Build(DocumentSyntax document)
    {
        List<(int Line, TomlTable Table)> starts = [(0, root)];
        Fill(root, document.KeyValues);
        foreach (TableSyntaxBase t in document.Tables)
        {
            if (t.Name is { } name && Open(name, t is TableArraySyntax, At(t)) is { } table)
            {
                starts.Add((At(t).Line, table));
                Fill(table, t.Items);
            }
            else
            {
                root.Damaged = true; // what stands below the refused header is lost
            }
        }

        int k = 0;
        foreach ((int line, bool header) in lost)
        {
            while (k + 1 < starts.Count && starts[k + 1].Line < line)
            {
                k++;
            }

            (header ? root : starts[k].Table).Damaged = true;
        }

        return root;
    }

    private TomlTable? Open(KeySyntax name, bool isArray, Place at)
    {
        List<(string Key, Place At)> path = Path(name);
        TomlTable parent = root;
        for (int k = 0; k < path.Count - 1; k++)
        {
            TomlEntry? entry = parent.Find(path[k].Key);
            if (entry is null)
            {
                entry = new(path[k].Key, at, new TomlTable(at, TableOrigin.Implied));
                parent.Add(entry);
            }

            TomlTable? next = entry.Value as TomlTable ?? (entry.Value as TomlArray is { OfTables: true } list ? (TomlTable)list.Items[^1] : null);
            if (next is null or { Origin: TableOrigin.Inline })
            {
                faults.Add(at, Twice(path[k].Key, entry.At));
                return null;
            }

            parent = next;
        }

        (string key, _) = path[^1];
        TomlEntry? old = parent.Find(key);
        if (isArray)
        {
            if (old is not null and not { Value: TomlArray { OfTables: true } })
            {
                faults.Add(at, Twice(key, old.At));
                return null;
            }

            if (old is null)
            {
                old = new(key, at, new TomlArray(at, true));
                parent.Add(old);
            }

            TomlTable item = new(at, TableOrigin.Header);
            ((TomlArray)old.Value).Items.Add(item);
            return item;
        }

        if (old is null)
        {
            TomlTable table = new(at, TableOrigin.Header);
            parent.Add(new(key, at, table));
            return table;
        }

        if (old.Value is TomlTable { Origin: TableOrigin.Implied } implied)
        {
            implied.Origin = TableOrigin.Header;
            return implied;
        }

        faults.Add(at, Twice(key, old.At));
        return null;
    }

    private void Fill(TomlTable table, SyntaxList<KeyValueSyntax> items)
    {
        foreach (KeyValueSyntax item in items)
        {
            Add(table, item);
        }
    }

    private void Add(TomlTable table, KeyValueSyntax item)
    {
        if (item.Key is null || item.Value is null)
        {
            return;
        }

        List<(string Key, Place At)> path = Path(item.Key);
        for (int k = 0; k < path.Count - 1; k++)
        {
            (string name, Place at) = path[k];
            TomlEntry? entry = table.Find(name);
            if (entry is null)
            {
                entry = new(name, at, new TomlTable(at, TableOrigin.Dotted));
                table.Add(entry);
            }

            if (entry.Value is not TomlTable { Origin: TableOrigin.Dotted } next)
            {
                faults.Add(at, Twice(name, entry.At));
                return;
            }

            table = next;
        }

        (string key, Place keyAt) = path[^1];
        if (table.Find(key) is { } old)
        {
            faults.Add(keyAt, Twice(key, old.At));
            return;
        }

        table.Add(new(key, keyAt, Value(item.Value)));
    }

    private TomlValue Value(ValueSyntax value)
    {
        Place at = At(value);
        switch (value)
        {
            case StringValueSyntax s:
                return new TomlText(at, s.Value ?? "");
            case IntegerValueSyntax i:
                return new TomlNumber(at, i.Value, true, value.ToString()!.Trim());
            case FloatValueSyntax f:
                return new TomlNumber(at, f.Value, false, value.ToString()!.Trim());
            case BooleanValueSyntax b:
                return new TomlFlag(at, b.Value);
            case ArraySyntax a:
                TomlArray list = new(at, false);
                list.Items.AddRange(a.Items.Where(x => x.Value is not null).Select(x => Value(x.Value!)));
                return list;
            case InlineTableSyntax t:
                TomlTable table = new(at, TableOrigin.Dotted);
                foreach (InlineTableItemSyntax x in t.Items)
                {
                    Add(table, x.KeyValue!);
                }

                table.Origin = TableOrigin.Inline;
                return table;
            default:
                return new TomlDate(at);
        }
    }

    private static List<(string Key, Place At)> Path(KeySyntax key)
    {
        List<(string, Place)> path = [(Name(key.Key), At(key))];
        foreach (DottedKeyItemSyntax d in key.DotKeys)
        {
            path.Add((Name(d.Key), d.Key is null ? At(key) : At(d.Key)));
        }

        return path;
    }

    private static string Name(SyntaxNode? node) => node switch
    {
        BareKeySyntax b => b.Key?.Text ?? "",
        StringValueSyntax s => s.Value ?? "",
        _ => node?.ToString()?.Trim() ?? "",
    };

    private static Place At(SyntaxNode node) => new(node.Span.Start.Line + 1, node.Span.Start.Column + 1);

    private static string Twice(string key, Place first) =>
        string.Create(CultureInfo.InvariantCulture, $"'{key}' is set twice; it stands already in line {first.Line}");
}
