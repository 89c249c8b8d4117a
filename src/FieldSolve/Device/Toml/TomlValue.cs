namespace FieldSolve.Device;

/// <summary>A place in a file.</summary>
/// <param name="Line">1-based.</param>
/// <param name="Column">1-based, in characters.</param>
internal readonly record struct Place(int Line, int Column)
{
    public static Place Start => new(1, 1);
}

/// <summary>A TOML value that knows where it stands.</summary>
internal abstract class TomlValue(Place at)
{
    public Place At { get; } = at;

    /// <summary>What it is, with its article, for messages.</summary>
    public abstract string Kind { get; }
}

/// <summary>A string.</summary>
internal sealed class TomlText(Place at, string value) : TomlValue(at)
{
    public string Value { get; } = value;

    public override string Kind => "text";
}

/// <summary>An integer or a float.</summary>
internal sealed class TomlNumber(Place at, double value, bool isInteger, string raw) : TomlValue(at)
{
    public double Value { get; } = value;

    public bool IsInteger { get; } = isInteger;

    /// <summary>As written.</summary>
    public string Raw { get; } = raw;

    public override string Kind => "a number";
}

/// <summary>true or false.</summary>
internal sealed class TomlFlag(Place at, bool value) : TomlValue(at)
{
    public bool Value { get; } = value;

    public override string Kind => Value ? "true" : "false";
}

/// <summary>A date or a time, which no key takes.</summary>
internal sealed class TomlDate(Place at) : TomlValue(at)
{
    public override string Kind => "a date or time";
}

/// <summary>A list; of tables where it was written as [[name]].</summary>
internal sealed class TomlArray(Place at, bool ofTables) : TomlValue(at)
{
    public List<TomlValue> Items { get; } = [];

    /// <summary>Written as [[name]] headers.</summary>
    public bool OfTables { get; } = ofTables;

    public override string Kind => OfTables ? "a list of tables" : "a list";
}

/// <summary>How a table came about, which decides whether it may be added to.</summary>
internal enum TableOrigin
{
    /// <summary>By a header that names a table below it; its own header may still come.</summary>
    Implied,

    /// <summary>By its own header.</summary>
    Header,

    /// <summary>By dotted keys.</summary>
    Dotted,

    /// <summary>In braces.</summary>
    Inline,
}

/// <summary>A table.</summary>
internal sealed class TomlTable(Place at, TableOrigin origin) : TomlValue(at)
{
    private readonly List<TomlEntry> entries = [];
    private readonly Dictionary<string, TomlEntry> byKey = [];

    /// <summary>In the order of the file.</summary>
    public IReadOnlyList<TomlEntry> Entries => entries;

    public TableOrigin Origin { get; set; } = origin;

    /// <summary>A line of it could not be read, so that a key may be missing for that reason alone.</summary>
    public bool Damaged { get; set; }

    public override string Kind => "a table";

    public TomlEntry? Find(string key) => byKey.GetValueOrDefault(key);

    public void Add(TomlEntry entry)
    {
        byKey.Add(entry.Key, entry);
        entries.Add(entry);
    }
}

/// <summary>A key with its value.</summary>
/// <param name="Key">The key.</param>
/// <param name="At">Where the key stands.</param>
/// <param name="Value">The value.</param>
internal sealed record TomlEntry(string Key, Place At, TomlValue Value);
