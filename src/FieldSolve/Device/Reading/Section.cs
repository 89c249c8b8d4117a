using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>
/// One table of the device file while it is read: hands out the values of the keys asked for, with a fault for each that is
/// no good, and at the end reports the keys nobody asked for and those that are missing.
/// </summary>
/// <param name="table">The table.</param>
/// <param name="what">How messages call it, for example "[[contact]]".</param>
/// <param name="faults">Where to report.</param>
internal sealed class Section(TomlTable table, string what, FaultList faults)
{
    private readonly List<string> known = [];
    private readonly List<(string[] Keys, string Message)> missing = [];

    public TomlTable Table { get; } = table;

    public FaultList Faults { get; } = faults;

    public Place At => Table.At;

    /// <summary>How messages call the table.</summary>
    public string What { get; } = what;

    /// <summary>The entry of a key, which thereby becomes a known one; null if the file does not give it.</summary>
    public TomlEntry? Take(string key)
    {
        if (!known.Contains(key))
        {
            known.Add(key);
        }

        return Table.Find(key);
    }

    /// <summary>As <see cref="Take"/>; a missing key is a fault, and the example shows what to write.</summary>
    public TomlEntry? Need(string key, string example)
    {
        TomlEntry? entry = Take(key);
        if (entry is null)
        {
            MissingUnlessMisspelt($"{What} needs '{key}', for example {key} = {example}", key);
        }

        return entry;
    }

    /// <summary>Keeps a fault about absent keys for the end, where it is dropped if one of them is there but misspelt, or in a lost line.</summary>
    public void MissingUnlessMisspelt(string message, params string[] keys) => missing.Add((keys, message));

    /// <summary>A quantity in SI; null if absent or faulty.</summary>
    public double? Quantity(string key, Dimension dimension, Range range, bool required = false, string? example = null)
    {
        TomlEntry? entry = required ? Need(key, $"\"{example ?? dimension.Example}\"") : Take(key);
        return entry is null ? null : Values.Quantity(entry.Value, $"'{key}'", dimension, range, Faults, example);
    }

    /// <summary>A plain number; null if absent or faulty.</summary>
    public double? Number(string key, Range range, bool integer = false)
    {
        TomlEntry? entry = Take(key);
        return entry is null ? null : Values.Number(entry.Value, $"'{key}'", range, integer, Faults);
    }

    /// <summary>true or false; null if absent or faulty.</summary>
    public bool? Flag(string key)
    {
        TomlEntry? entry = Take(key);
        if (entry?.Value is TomlFlag or null)
        {
            return (entry?.Value as TomlFlag)?.Value;
        }

        Faults.Add(entry.Value.At, $"'{key}' is {entry.Value.Kind}; write true or false, without quotes");
        return null;
    }

    /// <summary>A text; null if absent or faulty.</summary>
    public TomlText? Text(string key, string example, bool required)
    {
        TomlEntry? entry = required ? Need(key, $"\"{example}\"") : Take(key);
        return entry is null ? null : Values.Text(entry.Value, $"'{key}'", example, Faults);
    }

    /// <summary>The tables written under [[key]] headers, or as a list of tables in braces.</summary>
    public IReadOnlyList<TomlTable> Tables(string key)
    {
        TomlEntry? entry = Take(key);
        switch (entry?.Value)
        {
            case null:
                return [];
            case TomlArray list when list.Items.All(i => i is TomlTable):
                return [.. list.Items.Cast<TomlTable>()];
            case TomlTable one:
                Faults.Add(one.At, $"write [[{key}]] with two brackets on each side: there may be several");
                return [one];
            default:
                Faults.Add(entry.Value.At, $"'{key}' is {entry.Value.Kind}; write a table under the header [[{key}]]");
                return [];
        }
    }

    /// <summary>A table in braces or under its own header, as a section of its own; null if absent or faulty.</summary>
    public Section? Inner(string key, string example)
    {
        TomlEntry? entry = Take(key);
        return entry is null ? null : Inner(entry, $"'{key}'", $"{key} = {example}");
    }

    /// <summary>The table [key]; null if absent or no table.</summary>
    public Section? Header(string key)
    {
        TomlEntry? entry = Take(key);
        return entry is null ? null : Inner(entry, $"[{key}]", $"a table under the header [{key}]");
    }

    /// <summary>Reports unknown and missing keys. A misspelt key is not reported as a missing one as well.</summary>
    public void Finish()
    {
        HashSet<string> meant = [];
        foreach (TomlEntry e in Table.Entries.Where(e => !known.Contains(e.Key)))
        {
            string? near = Suggest.Nearest(e.Key, known);
            meant.Add(near ?? "");
            string right = near is null ? $"allowed are {Suggest.List(known)}" : $"did you mean '{near}'?";
            Faults.Add(e.At, $"unknown key '{Values.Short(e.Key)}' in {What}; {right}");
        }

        foreach ((string[] keys, string message) in missing)
        {
            if (!Table.Damaged && !keys.Any(meant.Contains))
            {
                Faults.Add(At, message);
            }
        }
    }

    private Section? Inner(TomlEntry entry, string what, string right)
    {
        if (entry.Value is TomlTable table)
        {
            return new Section(table, what, Faults);
        }

        // A header that was meant to stand once shows as a list where it has two brackets.
        string wrong = entry.Value is TomlArray { OfTables: true } ? "has two brackets on each side" : $"is {entry.Value.Kind}";
        Faults.Add(entry.Value.At, $"{what} {wrong}; write {right}");
        return null;
    }
}
