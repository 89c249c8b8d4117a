using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>
/// Changes a device by hand: "c4=50nm" moves contact c4 along its edge, "c4.width=20nm", "p.x=1um", "axis=1deg", "d12=1e-11 A m/V^2" and "growth=-20nm"
/// apply the causes of those names.
/// </summary>
public static class CauseText
{
    /// <summary>Applies changes.</summary>
    /// <param name="device">As designed.</param>
    /// <param name="changes">Each NAME=VALUE.</param>
    /// <returns>The changed device, or what is wrong with a change.</returns>
    public static (SheetDevice? Device, string? Error) Apply(SheetDevice device, IReadOnlyList<string> changes)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(changes);
        var draft = new DeviceDraft(device);
        foreach (string change in changes)
        {
            int equals = change.LastIndexOf('=');
            if (equals <= 0)
            {
                return (null, $"'{change}': write NAME=VALUE, for example c4=50nm or c4.width=20nm or axis=1deg");
            }

            string name = change[..equals].Trim(), value = change[(equals + 1)..].Trim();
            (CauseKind? kind, CauseTarget target, string? error) = Find(device, name);
            if (kind is null)
            {
                return (null, $"'{change}': {error}");
            }

            if (!TryValue(value, kind, out double by, out error))
            {
                return (null, $"'{change}': {error}");
            }

            if (kind.Refuse(device, target) is { } why)
            {
                return (null, $"'{change}': {(target.Contacts.Count == 1 ? $"contact '{target.Name}' {why}" : $"'{kind.Key}' {why}")}");
            }

            try
            {
                kind.Apply(draft, target, by);
            }
            catch (Exception e) when (e is LayoutException or LawException)
            {
                return (null, $"'{change}': {e.Message}");
            }
        }

        try
        {
            return (draft.Build(), null);
        }
        catch (Exception e) when (e is LayoutException or LawException)
        {
            return (null, $"{string.Join(", ", changes.Select(c => $"'{c}'"))}: {e.Message}");
        }
    }

    private static (CauseKind? Kind, CauseTarget Target, string? Error) Find(SheetDevice device, string name)
    {
        int contact = Index(device, name);
        if (contact >= 0)
        {
            return (CauseCatalogue.Find("position", CauseScope.Contact), CauseTarget.One(device, contact), null);
        }

        if (CauseCatalogue.Find(name, CauseScope.Sheet) is { } sheet)
        {
            return (sheet, CauseTarget.Sheet, null);
        }

        int dot = name.LastIndexOf('.');
        contact = dot > 0 ? Index(device, name[..dot]) : -1;
        if (contact >= 0 && CauseCatalogue.Find(name[(dot + 1)..], CauseScope.Contact) is { } own)
        {
            return (own, CauseTarget.One(device, contact), null);
        }

        string[] keys = [.. CauseCatalogue.Of(CauseScope.Contact).Select(k => k.Key).Distinct()];
        return (null, CauseTarget.Sheet, contact >= 0
            ? $"a contact has no '{name[(dot + 1)..]}' to change; it has {Suggest.List(keys)}"
            : $"there is no contact and no cause '{name}'{Suggest.Hint(name, [.. device.Contacts.Select(c => c.Name), .. CauseCatalogue.Of(CauseScope.Sheet).Select(k => k.Key)])}");
    }

    private static bool TryValue(string text, CauseKind kind, out double by, out string? error)
    {
        if (!Quantity.TryParse(text, out by, out Dimension dimension, out _, out string? wrong))
        {
            error = $"\"{text}\": {wrong}; {kind.Dimension.NameWithArticle} is wanted, for example {kind.Dimension.Example}";
            return false;
        }

        error = dimension == kind.Dimension ? null
            : $"\"{text}\" is {dimension.NameWithArticle}; {kind.Dimension.NameWithArticle} is wanted, for example {kind.Dimension.Example}";
        return error is null;
    }

    private static int Index(SheetDevice device, string name) => device.Contacts.ToList().FindIndex(c => c.Name == name);
}
