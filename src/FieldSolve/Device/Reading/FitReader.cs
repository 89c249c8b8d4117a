using FieldSolve.Laws;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>
/// Reads [fit]: first what stands there, then, once the device stands, which numbers it leaves free. The keys are those of [tolerance], and each is true, or a
/// table with start, min, max, mean, sigma and interval.
/// </summary>
internal sealed class FitReader(Section root, ContactReader contacts)
{
    private const double UsualShare = 0.2;

    // Without bounds of its own a positive number may change by this factor either way.
    private const double MostFactor = 1e3;

    private readonly FaultList faults = root.Faults;
    private readonly List<Given> given = [];
    private bool present;
    private double share = UsualShare;

    // As written; Contact is null for all contacts and for the sheet.
    private sealed record Given(CauseKind Kind, Place At, int? Contact, bool Free, double? Start, double? Least, double? Most, double? Mean, double? Sigma, bool Interval);

    public void Read()
    {
        if (root.Header("fit") is not { } section)
        {
            return;
        }

        present = true;
        share = section.Number("numerical_share", new(1e-3, 1, "between 0.001 and 1")) ?? UsualShare;
        Keys(section, CauseScope.Sheet, null);
        if (section.Inner("contacts", "{ position = { sigma = \"50 nm\" } }") is { } all)
        {
            Keys(all, CauseScope.Contact, null);
            all.Finish();
        }

        var named = new HashSet<string>(StringComparer.Ordinal);
        foreach (TomlTable table in section.Tables("contact"))
        {
            Section one = new(table, "[[fit.contact]]", faults);
            TomlText? name = one.Text("name", "c4", required: true);
            if (name is not null && !named.Add(name.Value))
            {
                faults.Add(name.At, $"contact '{Values.Short(name.Value)}' already has its [[fit.contact]]; write its numbers together");
            }

            Keys(one, CauseScope.Contact, name is null ? -1 : Find(name));
            one.Finish();
        }

        section.Finish();
    }

    /// <summary>The free numbers of a sound device; faults where a number cannot be free.</summary>
    public FitSpec? Resolve(SheetDevice device)
    {
        if (!present)
        {
            return null;
        }

        var free = new List<FitParameter>();
        var notes = new List<string>();
        foreach (Given g in given.Where(g => g.Kind.Scope == CauseScope.Sheet && g.Free))
        {
            if (g.Kind.Refuse(device, CauseTarget.Sheet) is { } why)
            {
                faults.Add(g.At, $"'{g.Kind.Key}' {why}");
            }
            else
            {
                Add(free, device, g, CauseTarget.Sheet);
            }
        }

        foreach (CauseKind kind in CauseCatalogue.Of(CauseScope.Contact))
        {
            for (int c = 0; c < device.Contacts.Count; c++)
            {
                CauseTarget target = CauseTarget.One(device, c);
                Given? own = given.LastOrDefault(g => g.Kind == kind && g.Contact == c);
                Given? g = own ?? given.LastOrDefault(x => x.Kind == kind && x.Contact is null);
                if (g is not { Free: true } || (own is null && !kind.Fits(device.Contacts[c].Kind)))
                {
                    continue;
                }

                if (kind.Refuse(device, target) is not { } why)
                {
                    Add(free, device, g, target);
                }
                else if (own is not null)
                {
                    faults.Add(own.At, $"'{kind.Key}': contact '{target.Name}' {why}");
                }
                else
                {
                    notes.Add($"'{kind.Key}' of contact '{target.Name}' is not free: the contact {why}.");
                }
            }
        }

        return new(free, share, notes);
    }

    private void Add(List<FitParameter> free, SheetDevice device, Given g, CauseTarget target)
    {
        double designed = g.Kind.Effect switch
        {
            CauseEffect.Law => LawSensitivity.Value(device.Law, g.Kind.Key),
            CauseEffect.Axis => device.Axis,
            CauseEffect.Resistance => device.Contacts[target.Contacts[0]] is var c && c.Kind == ContactKind.Edge ? c.LineResistance : c.Resistivity,
            _ => 0,
        };
        double start = g.Start ?? designed;
        var whole = new FitParameter(g.Kind, target, designed, start, double.NegativeInfinity, double.PositiveInfinity, g.Mean ?? start, g.Sigma, g.Interval) { At = (g.At.Line, g.At.Column) };
        double least = whole.IsPositive ? start / MostFactor : double.NegativeInfinity, most = whole.IsPositive ? start * MostFactor : double.PositiveInfinity;
        if (g.Kind is LawCause law)
        {
            least = Math.Max(least, law.Least);
        }

        FitParameter p = whole with { Least = g.Least ?? least, Most = g.Most ?? most };
        string? wrong = p.Least >= p.Most ? "'min' must be less than 'max'"
            : !(p.Start >= p.Least && p.Start <= p.Most) ? "the fit must start between 'min' and 'max'"
            : whole.IsPositive && !(p.Least > 0 || (g.Least is null && p.Start > 0)) ? "it must stay greater than zero, 'min' too"
            : null;
        if (wrong is not null)
        {
            faults.Add(g.At, $"'{g.Kind.Key}': {wrong}");
            return;
        }

        free.Add(p);
    }

    private void Keys(Section section, CauseScope scope, int? contact)
    {
        foreach (CauseKind kind in CauseCatalogue.Of(scope))
        {
            if (section.Take(kind.Key) is { } entry && Number(entry, kind, contact) is { } number)
            {
                given.Add(number);
            }
        }
    }

    // true, or { start = "3 mS", min = "1 mS", max = "9 mS", mean = "4 mS", sigma = "0.1 mS", interval = true }.
    private Given? Number(TomlEntry entry, CauseKind kind, int? contact)
    {
        bool plain = kind.Dimension == Dimension.None;
        string example = plain ? "2" : kind.Dimension == Dimension.Length ? "\"50 nm\"" : kind.Dimension == Dimension.SheetConductance ? "\"4 mS\"" : $"\"{kind.Dimension.Example}\"";
        switch (entry.Value)
        {
            case TomlFlag flag:
                return new(kind, entry.At, contact, flag.Value, null, null, null, null, null, false);
            case TomlTable table:
                Section section = new(table, $"'{entry.Key}'", faults);
                Given read = new(
                    kind, entry.At, contact, true, One(section, "start", Range.Any), One(section, "min", Range.Any), One(section, "max", Range.Any),
                    One(section, "mean", Range.Any), One(section, "sigma", Range.Positive), section.Flag("interval") ?? false);
                section.Finish();
                if (read.Mean is not null && read.Sigma is null)
                {
                    faults.Add(table.At, $"'{entry.Key}' has a 'mean' but no 'sigma'; a prior needs both");
                }

                return read;
            default:
                faults.Add(entry.Value.At, $"'{entry.Key}' is {entry.Value.Kind}; write true to leave it free, or a table such as {{ start = {example}, sigma = {example} }}");
                return null;
        }

        double? One(Section section, string key, Range range) => section.Take(key) is not { } e ? null
            : plain ? Values.Number(e.Value, $"'{entry.Key}', '{key}'", range, integer: false, faults)
            : Values.Quantity(e.Value, $"'{entry.Key}', '{key}'", kind.Dimension, range, faults, example.Trim('"'));
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
