using FieldSolve.Geometry;

namespace FieldSolve.Device;

/// <summary>What the geometry of a device was made from: the live rim and where each contact sits on it.</summary>
/// <param name="Live">The conducting sheet, without its dead edge.</param>
/// <param name="Contacts">By contact index.</param>
public sealed record SheetLayout(Outline Live, IReadOnlyList<ContactPlacement> Contacts)
{
    /// <summary>The same layout with one contact elsewhere.</summary>
    public SheetLayout With(int contact, ContactPlacement placement) =>
        this with { Contacts = [.. Contacts.Select((c, i) => i == contact ? placement : c)] };

    /// <summary>A device laid out anew: the domain and each contact's shape, width and middle follow; tips, law and wirings stay.</summary>
    /// <exception cref="LayoutException">Contacts overlap, leave the sheet or are otherwise no good there.</exception>
    public SheetDevice Apply(SheetDevice device)
    {
        ArgumentNullException.ThrowIfNull(device);
        return device with
        {
            Layout = this,
            Domain = DomainBuilder.Build(Live, Contacts, [.. device.Tips.Select(t => t.At)]),
            Contacts = [.. device.Contacts.Select((c, i) => ContactShape.On(Live, Contacts[i], c))],
        };
    }
}
