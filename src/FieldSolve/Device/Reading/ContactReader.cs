using System.Globalization;
using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>Reads [[contact]], [[contacts]] and [[point]].</summary>
internal sealed class ContactReader(Section root, SheetReading sheet, FileSource files)
{
    private const int MostInRing = 1000;
    private const int MostContacts = 1000;
    private static readonly string[] Kinds = ["contact", "contacts", "point"];

    private readonly FaultList faults = root.Faults;
    private readonly EdgeReader edges = new(sheet, root.Faults);
    private readonly List<ContactDraft> contacts = [];
    private readonly List<TipDraft> tips = [];
    private readonly List<RingDraft> rings = [];

    /// <summary>In the order of the file, rings expanded.</summary>
    public IReadOnlyList<ContactDraft> Contacts => contacts;

    /// <summary>In the order of the file.</summary>
    public IReadOnlyList<TipDraft> Tips => tips;

    public IReadOnlyList<RingDraft> Rings => rings;

    /// <summary>False if a name may have been lost to a fault, so that one that seems absent may be there.</summary>
    public bool NamesComplete { get; private set; } = !root.Table.Damaged && !root.Table.Entries.Any(IsLost);

    public void Read()
    {
        IEnumerable<(TomlTable Table, bool Ring)> tables =
        [
            .. root.Tables("contact").Select(t => (t, false)),
            .. root.Tables("contacts").Select(t => (t, true)),
        ];
        foreach ((TomlTable table, bool ring) in tables.OrderBy(t => t.Table.At.Line).ThenBy(t => t.Table.At.Column))
        {
            NamesComplete &= !table.Damaged;
            if (contacts.Count > MostContacts)
            {
                faults.Add(table.At, string.Create(CultureInfo.InvariantCulture, $"there are more than {MostContacts} contacts; no sheet takes so many"));
                NamesComplete = false;
                break;
            }

            bool single = table.Find("edge") is not null || table.Find("pad") is not null, many = table.Find("ring") is not null;
            if (ring && single && !many)
            {
                faults.Add(table.At, "[[contacts]] makes a ring of equal contacts; one contact is written [[contact]], without the s");
                NamesComplete = false;
            }
            else if (!ring && many && !single)
            {
                faults.Add(table.At, "[[contact]] is one contact; a ring of equal contacts is written [[contacts]], with an s");
                NamesComplete = false;
            }
            else if (ring)
            {
                Ring(new Section(table, "[[contacts]]", faults));
            }
            else
            {
                Contact(new Section(table, "[[contact]]", faults));
            }
        }

        foreach (TomlTable table in root.Tables("point"))
        {
            NamesComplete &= !table.Damaged;
            Section section = new(table, "[[point]]", faults);
            (string? name, Place at) = Name(section, "p1");
            TomlEntry? entry = section.Need("at", "[\"2 um\", \"0 um\"]");
            tips.Add(new(name, at, entry?.Value.At ?? section.At, entry is null ? null : Values.Point(entry.Value, "'at'", faults)));
            section.Finish();
        }
    }

    private void Contact(Section section)
    {
        (string? name, Place nameAt) = Name(section, "w");
        TomlEntry? edge = section.Take("edge"), pad = section.Take("pad");
        ContactDraft draft = new(name, nameAt, (edge ?? pad)?.Value.At ?? section.At);
        if (edge is not null && pad is not null)
        {
            TomlEntry later = (edge.At.Line, edge.At.Column).CompareTo((pad.At.Line, pad.At.Column)) > 0 ? edge : pad;
            faults.Add(later.At, "a contact is either an 'edge' or a 'pad'; remove one of them");
        }
        else if (edge is not null)
        {
            Misplaced(section, "resistivity", "is for a pad; an edge contact takes 'resistance', for example \"120 ohm um\"");
            draft = Edge(section, draft);
        }
        else if (pad is not null)
        {
            Misplaced(section, "resistance", "is for an edge contact; a pad takes 'resistivity', for example \"1e-7 ohm cm^2\"");
            Misplaced(section, "shift", "is for an edge contact; move the pad's corners instead");
            draft = draft with
            {
                Resistivity = section.Quantity("resistivity", Dimension.ContactResistivity, Range.NonNegative) ?? 0,
                Pad = new PadReader(sheet, files, faults).Read(pad),
            };
        }
        else
        {
            section.MissingUnlessMisspelt(
                "[[contact]] needs 'edge' or 'pad', for example edge = { at = \"180 deg\", width = \"0.7 um\" }", "edge", "pad");
        }

        foreach (string key in new[] { "resistance", "resistivity", "shift" })
        {
            section.Take(key);
        }

        section.Finish();
        contacts.Add(draft);
    }

    private ContactDraft Edge(Section section, ContactDraft draft)
    {
        double? shift = section.Quantity("shift", Dimension.Length, Range.Coordinate, example: "50 nm");
        bool sound = Sound(section, "shift", shift);
        RimSpan? span = section.Inner("edge", "{ at = \"180 deg\", width = \"0.7 um\" }") is { } edge ? edges.Read(edge, shift ?? 0) : null;
        return draft with
        {
            LineResistance = section.Quantity("resistance", Dimension.LineResistance, Range.NonNegative) ?? 0,
            Span = sound ? span : null,
        };
    }

    private void Ring(Section section)
    {
        TomlEntry? ring = section.Need("ring", "12");
        int count = (int)(section.Number("ring", new(1, MostInRing, "from 1 to 1000"), integer: true) ?? 0);
        double? width = section.Quantity("width", Dimension.Length, Range.Extent, required: true, "0.7 um");
        double? first = section.Quantity("first", Dimension.Angle, Range.Angle, example: "0 deg");
        double? resistance = section.Quantity("resistance", Dimension.LineResistance, Range.NonNegative);
        double? shift = section.Quantity("shift", Dimension.Length, Range.Coordinate, example: "50 nm");
        TomlText? prefix = section.Text("prefix", "c", required: true);
        bool named = prefix is not null && Values.IsName(prefix.Value + MostInRing, prefix.At, "'prefix'", faults);
        section.Finish();
        NamesComplete &= named && count > 0;

        bool placed = count > 0 && width is not null && ring is not null && sheet.Live is not null && Fits(ring, count, width.Value);
        placed &= Sound(section, "first", first) && Sound(section, "shift", shift);
        if (named && count > 0)
        {
            rings.Add(new(prefix!.Value, contacts.Count, count));
        }

        for (int k = 0; k < count; k++)
        {
            contacts.Add(new(
                named ? string.Create(CultureInfo.InvariantCulture, $"{prefix!.Value}{k + 1}") : null,
                prefix?.At ?? section.At,
                ring?.Value.At ?? section.At)
            {
                Span = placed ? edges.Shifted(edges.About((first ?? 0) + (2 * Math.PI * k / count), width!.Value), shift ?? 0) : null,
                LineResistance = resistance ?? 0,
            });
        }
    }

    /// <summary>One fault for a ring that cannot be, instead of one for each of its contacts.</summary>
    private bool Fits(TomlEntry ring, int count, double width)
    {
        if (!sheet.Plan!.IsRound)
        {
            faults.Add(ring.At, "a ring of contacts needs a disc or a ring; on this sheet write each [[contact]] by itself");
            return false;
        }

        double rim = sheet.Live!.LoopLength(0);
        if (count > 1 ? count * width < rim * (1 - 1e-9) : width <= rim)
        {
            return true;
        }

        faults.Add(ring.Value.At, string.Create(
            CultureInfo.InvariantCulture,
            $"{count} contacts of {Values.Length(width)} do not fit without touching on a rim {Values.Length(rim)} long; the width must stay below {Values.Length(rim / count)}"));
        return false;
    }

    private (string? Name, Place At) Name(Section section, string example)
    {
        TomlText? text = section.Text("name", example, required: true);
        bool good = text is not null && Values.IsName(text.Value, text.At, "'name'", faults);
        NamesComplete &= good;
        return (good ? text!.Value : null, text?.At ?? section.At);
    }

    private void Misplaced(Section section, string key, string why)
    {
        if (section.Take(key) is { } entry)
        {
            faults.Add(entry.At, $"'{key}' {why}");
        }
    }

    /// <summary>Whether a table that looks like one of contacts or points is misspelt or written with single brackets.</summary>
    private static bool IsLost(TomlEntry entry) => Kinds.Contains(entry.Key)
        ? entry.Value is not TomlArray
        : Suggest.Nearest(entry.Key, Kinds) is not null && entry.Value is TomlArray { OfTables: true };

    private static bool Sound(Section section, string key, double? value) => value is not null || section.Take(key) is null;
}
