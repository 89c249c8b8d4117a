using System.Globalization;

namespace FieldSolve.Device;

/// <summary>Reads [[wiring]] and turns names into indices.</summary>
internal sealed class WiringReader
{
    private static readonly string[] TakenPairNames = ["along", "across", "source"];

    private readonly Section root;
    private readonly FaultList faults;
    private readonly bool namesComplete; // false if a name may have been lost to a fault
    private readonly Dictionary<string, Terminal> terminals = [];
    private readonly List<string> contactNames = [];
    private readonly List<string> allNames = [];

    public WiringReader(Section root, ContactReader contacts)
    {
        (this.root, faults) = (root, root.Faults);

        // Without any contact that is the fault, not each name.
        namesComplete = contacts.NamesComplete && contacts.Contacts.Count > 0;
        Dictionary<string, Place> first = [];
        Place? reported = null;
        IEnumerable<(string? Name, Place At, Terminal Terminal)> all =
        [
            .. contacts.Contacts.Select((c, k) => (c.Name, c.NameAt, new Terminal(false, k))),
            .. contacts.Tips.Select((t, k) => (t.Name, t.NameAt, new Terminal(true, k))),
        ];

        // The later of two equal names is the one at fault, whatever kind it names. A ring is reported once.
        foreach ((string? name, Place at, Terminal terminal) in all.OrderBy(n => n.At.Line).ThenBy(n => n.At.Column))
        {
            if (name is null)
            {
                continue;
            }

            if (!terminals.TryAdd(name, terminal))
            {
                if (reported != at)
                {
                    faults.Add(at, string.Create(CultureInfo.InvariantCulture, $"the name '{name}' is already taken in line {first[name].Line}; contacts and points need different names"));
                }

                // One of the two was meant to be called otherwise.
                (reported, namesComplete) = (at, false);
                continue;
            }

            first[name] = at;
            allNames.Add(name);
            if (!terminal.IsTip)
            {
                contactNames.Add(name);
            }
        }
    }

    /// <summary>The wirings that are sound, in the order of the file.</summary>
    public IReadOnlyList<Wiring> Read()
    {
        List<Wiring> wirings = [];
        Dictionary<string, Place> names = [];
        IReadOnlyList<TomlTable> tables = root.Tables("wiring");
        if (tables.Count == 0 && root.Table.Find("wiring") is null)
        {
            root.MissingUnlessMisspelt(
                "the file has no [[wiring]], which says where the current goes, for example name = \"0 deg\", source = \"w\", drain = \"e\"", "wiring");
        }

        foreach (TomlTable table in tables)
        {
            Section section = new(table, "[[wiring]]", faults);
            TomlText? name = section.Text("name", "0 deg", required: true);
            bool named = name is not null && Values.IsName(name.Value, name.At, "'name'", faults);
            if (named && !names.TryAdd(name!.Value, name.At))
            {
                faults.Add(name.At, string.Create(CultureInfo.InvariantCulture, $"the name '{name.Value}' is already taken by the wiring in line {names[name.Value].Line}"));
            }

            int? source = ContactOf(section, "source"), drain = ContactOf(section, "drain");
            if (source is not null && source == drain)
            {
                faults.Add(section.Take("drain")!.Value.At, "'source' and 'drain' are the same contact; a current needs two");
            }

            Pair? along = PairOf(section.Take("along"), "along"), across = PairOf(section.Take("across"), "across");
            List<Pair> extra = Extra(section);
            section.Finish();
            if (named && source is { } s && drain is { } d)
            {
                wirings.Add(new(name!.Value, s, d, along, across, extra));
            }
        }

        return wirings;
    }

    private int? ContactOf(Section section, string key)
    {
        TomlText? name = section.Text(key, "w", required: true);
        Terminal? terminal = name is null ? null : TerminalOf(name, contactNames, "contact");
        if (terminal is { IsTip: true })
        {
            faults.Add(name!.At, $"'{Values.Short(name.Value)}' is a point, which draws no current; '{key}' must be a contact");
            return null;
        }

        return terminal?.Index;
    }

    private Terminal? TerminalOf(TomlText name, IReadOnlyList<string> candidates, string what)
    {
        if (terminals.TryGetValue(name.Value, out Terminal terminal))
        {
            return terminal;
        }

        if (namesComplete)
        {
            faults.Add(name.At, $"unknown {what} '{Values.Short(name.Value)}'{Suggest.Hint(name.Value, candidates)}");
        }

        return null;
    }

    private Pair? PairOf(TomlEntry? entry, string name)
    {
        if (entry is null)
        {
            return null;
        }

        if (entry.Value is not TomlArray { OfTables: false, Items: [TomlText plus, TomlText minus] })
        {
            faults.Add(entry.Value.At, $"'{Values.Short(entry.Key)}' must list the two names of a voltage pair, for example [\"c6\", \"c2\"]");
            return null;
        }

        Terminal? p = TerminalOf(plus, allNames, "contact or point"), m = TerminalOf(minus, allNames, "contact or point");
        if (p is not null && p == m)
        {
            faults.Add(minus.At, $"the pair '{Values.Short(entry.Key)}' names '{Values.Short(minus.Value)}' twice; a voltage needs two places");
        }

        return p is { } a && m is { } b ? new Pair(name, a, b) : null;
    }

    private List<Pair> Extra(Section section)
    {
        List<Pair> pairs = [];
        if (section.Inner("pairs", "{ extra = [\"c5\", \"c3\"] }") is not { } inner)
        {
            return pairs;
        }

        foreach (TomlEntry entry in inner.Table.Entries)
        {
            if (TakenPairNames.Contains(entry.Key))
            {
                faults.Add(entry.At, $"the name '{entry.Key}' has a meaning of its own in the tables; choose another for this pair");
            }
            else if (!Values.IsName(entry.Key, entry.At, "the pair's name", faults))
            {
                continue;
            }

            if (PairOf(entry, entry.Key) is { } pair)
            {
                pairs.Add(pair);
            }
        }

        return pairs;
    }
}
