using System.Globalization;
using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>Reads [tolerance]: first what stands there, then, once the device stands, whom it befalls.</summary>
internal sealed class ToleranceReader(Section root, ContactReader contacts)
{
    // Squares of sizes beyond these over- or underflow in a budget.
    private const double Smallest = 1e-60, Largest = 1e60;

    private readonly FaultList faults = root.Faults;
    private readonly List<Given> given = [];
    private bool present;

    // A cause as written; Contact is null for all contacts, the sheet and layers.
    private sealed record Given(CauseKind Kind, Place At, double Sigma, CauseShape Shape, int? Contact, Layer? Layer);

    private sealed record Layer(string Name, IReadOnlyList<int>? Contacts, Point2 About);

    public void Read()
    {
        if (root.Header("tolerance") is not { } section)
        {
            return;
        }

        present = true;
        Causes(section, CauseScope.Sheet, null, null);
        if (section.Inner("contacts", "{ position = \"50 nm\" }") is { } all)
        {
            Causes(all, CauseScope.Contact, null, null);
            all.Finish();
        }

        var named = new HashSet<string>(StringComparer.Ordinal);
        foreach (TomlTable table in section.Tables("contact"))
        {
            Section one = new(table, "[[tolerance.contact]]", faults);
            TomlText? name = one.Text("name", "c4", required: true);
            int contact = name is null ? -1 : Find(name);
            if (name is not null && !named.Add(name.Value))
            {
                faults.Add(name.At, $"contact '{Values.Short(name.Value)}' already has its [[tolerance.contact]]; write its causes together");
            }

            Causes(one, CauseScope.Contact, contact, null);
            one.Finish();
        }

        named.Clear();
        foreach (TomlTable table in section.Tables("layer"))
        {
            Section one = new(table, "[[tolerance.layer]]", faults);
            TomlText? name = one.Text("name", "gold", required: true);
            if (name is not null && Values.IsName(name.Value, name.At, "'name'", faults) && !named.Add(name.Value))
            {
                faults.Add(name.At, $"there is a layer '{Values.Short(name.Value)}' already");
            }

            IReadOnlyList<int>? members = one.Take("contacts") is { } list ? Members(list) : null;
            Point2 about = one.Take("about") is { } point ? Values.Point(point.Value, "'about'", faults) ?? default : default;
            Causes(one, CauseScope.Layer, null, new Layer(name?.Value ?? "", members, about));
            one.Finish();
        }

        section.Finish();
    }

    /// <summary>The causes of a sound device; faults where one cannot befall what it names.</summary>
    public ToleranceSpec? Resolve(SheetDevice device)
    {
        if (!present)
        {
            return null;
        }

        var causes = new List<SheetCause>();
        var notes = new List<string>();
        var left = new List<(CauseKind Kind, string Why, string Name)>();
        foreach (CauseKind kind in CauseCatalogue.Of(CauseScope.Contact))
        {
            for (int c = 0; c < device.Contacts.Count; c++)
            {
                CauseTarget target = CauseTarget.One(device, c);
                Given? own = given.LastOrDefault(g => g.Kind == kind && g.Contact == c);
                Given? g = own ?? given.LastOrDefault(x => x.Kind == kind && x.Contact is null);
                if (g is null || (own is null && !kind.Fits(device.Contacts[c].Kind)))
                {
                    continue;
                }

                if (kind.Refuse(device, target) is not { } why)
                {
                    Add(causes, g, target);
                }
                else if (own is not null)
                {
                    faults.Add(own.At, $"'{kind.Key}': contact '{target.Name}' {why}");
                }
                else
                {
                    left.Add((kind, why, target.Name));
                }
            }
        }

        foreach (var g in left.GroupBy(l => (l.Name, l.Why)).GroupBy(l => (l.Key.Why, Keys: string.Join(" and ", l.Select(x => $"'{x.Kind.Key}'")))))
        {
            notes.Add($"{g.Key.Keys} of {(g.Count() == 1 ? "contact" : "contacts")} {string.Join(", ", g.Select(c => $"'{c.Key.Name}'"))} left out: the contact {g.Key.Why}.");
        }

        // Given for all contacts, befalling none.
        foreach (Given g in given.Where(x => x.Kind.Scope == CauseScope.Contact && x.Contact is null && !causes.Any(c => c.Kind == x.Kind) && !left.Any(l => l.Kind == x.Kind) && x.Sigma > 0))
        {
            notes.Add($"'{g.Kind.Key}' befalls no contact of this device.");
        }

        foreach (Given g in given.Where(x => x.Kind.Scope == CauseScope.Sheet))
        {
            if (g.Kind.Refuse(device, CauseTarget.Sheet) is { } why)
            {
                faults.Add(g.At, $"'{g.Kind.Key}' {why}");
            }
            else
            {
                Add(causes, g, CauseTarget.Sheet);
            }
        }

        foreach (Given g in given.Where(x => x.Layer is not null))
        {
            int[] members = [.. g.Layer!.Contacts ?? [.. Enumerable.Range(0, device.Contacts.Count)]];
            Add(causes, g, new CauseTarget(g.Layer.Name, members, g.Layer.About));
        }

        return new(causes, notes);
    }

    private static void Add(List<SheetCause> causes, Given g, CauseTarget target)
    {
        if (g.Sigma > 0)
        {
            causes.Add(new(g.Kind, target, g.Sigma, g.Shape));
        }
    }

    private void Causes(Section section, CauseScope scope, int? contact, Layer? layer)
    {
        foreach (CauseKind kind in CauseCatalogue.Of(scope))
        {
            // In a layer the table says what it is: x, not layer_x.
            string key = scope == CauseScope.Layer ? kind.Key["layer_".Length..] : kind.Key;
            if (section.Take(key) is { } entry && Size(entry, kind) is { } size)
            {
                given.Add(new(kind, entry.At, size.Sigma, size.Shape, contact, layer));
            }
        }
    }

    // "50 nm", or { sigma = "50 nm", shape = "uniform" }, or { half_width = "80 nm" }.
    private (double Sigma, CauseShape Shape)? Size(TomlEntry entry, CauseKind kind)
    {
        bool plain = kind.Dimension == Dimension.None;
        string what = $"'{entry.Key}'", example = plain ? "0.1" : kind.Dimension == Dimension.Length ? "\"50 nm\"" : kind.Dimension == Dimension.Angle ? "\"1 deg\"" : $"\"{kind.Dimension.Example}\"";
        if (entry.Value is not TomlTable table)
        {
            return One(entry.Value, what) is { } sigma ? (sigma, CauseShape.Normal) : null;
        }

        Section section = new(table, what, faults);
        TomlEntry? deviation = section.Take("sigma"), half = section.Take("half_width");
        TomlText? shape = section.Text("shape", "uniform", required: false);
        if (deviation is null == half is null)
        {
            section.MissingUnlessMisspelt($"{what} needs 'sigma' or 'half_width', one of them, for example {{ sigma = {example}, shape = \"uniform\" }}", "sigma", "half_width");
        }

        section.Finish();
        bool uniform = half is not null || shape?.Value == "uniform";
        if (shape is not null && (shape.Value is not ("normal" or "uniform") || (half is not null && !uniform)))
        {
            faults.Add(shape.At, $"'shape' is \"{Values.Short(shape.Value)}\"; it must be normal or uniform");
            return null;
        }

        if (shape?.Value == "normal" && half is not null)
        {
            faults.Add(shape.At, "a normal distribution has no half width; give 'sigma'");
            return null;
        }

        return (deviation ?? half) is { } number && One(number.Value, $"{what}, '{number.Key}'") is { } value
            ? (half is null ? value : value / Math.Sqrt(3), uniform ? CauseShape.Uniform : CauseShape.Normal)
            : null;

        double? One(TomlValue value, string name)
        {
            double? size = plain
                ? Values.Number(value, name, Range.NonNegative, integer: false, faults)
                : Values.Quantity(value, name, kind.Dimension, Range.NonNegative, faults, example.Trim('"'));
            if (size is > 0 and (< Smallest or > Largest))
            {
                faults.Add(value.At, string.Create(CultureInfo.InvariantCulture, $"{name} is {size:G3} in SI units, beyond any sheet; check its unit"));
                return null;
            }

            return size;
        }
    }

    private List<int>? Members(TomlEntry entry)
    {
        if (entry.Value is not TomlArray { OfTables: false } list || list.Items.Count == 0)
        {
            faults.Add(entry.Value.At, "'contacts' lists the names of the layer's contacts, for example [\"c1\", \"c2\"]; leave it out for all");
            return null;
        }

        var members = new List<int>();
        foreach (TomlValue item in list.Items)
        {
            if (Values.Text(item, "'contacts'", "c1", faults) is { } name && Find(name) is >= 0 and var contact)
            {
                if (members.Contains(contact))
                {
                    faults.Add(name.At, $"contact '{Values.Short(name.Value)}' stands twice");
                }

                members.Add(contact);
            }
        }

        return members;
    }

    private int Find(TomlText name)
    {
        string?[] names = [.. contacts.Contacts.Select(c => c.Name)];
        int k = Array.IndexOf(names, name.Value);
        if (k < 0 && contacts.NamesComplete)
        {
            faults.Add(name.At, $"there is no contact '{Values.Short(name.Value)}'{Suggest.Hint(name.Value, [.. names.OfType<string>()])}");
        }

        return k;
    }
}
