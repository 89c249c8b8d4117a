using FieldSolve.Geometry;
using FieldSolve.Laws;

namespace FieldSolve.Device;

/// <summary>A device that causes of error are changing; built once all have had their turn.</summary>
/// <param name="device">The device as designed.</param>
public sealed class DeviceDraft(SheetDevice device)
{
    // Beyond this nothing is a sheet any more, and squares of lengths overflow.
    private const double MostGrowth = 1e6;

    private readonly Dictionary<string, double> law = new(StringComparer.Ordinal);
    private readonly double[] resistance = [.. device.Contacts.Select(c => c.Kind == ContactKind.Edge ? c.LineResistance : c.Resistivity)];
    private readonly Tip[] tips = [.. device.Tips];
    private bool moved;

    /// <summary>The device as designed.</summary>
    public SheetDevice Designed { get; } = device;

    /// <summary>The live rim.</summary>
    public Outline Live { get; private set; } = device.Layout.Live;

    /// <summary>Where each contact sits.</summary>
    internal ContactPlacement[] Contacts { get; } = [.. device.Layout.Contacts];

    /// <summary>Angle from lab x to crystal a, radians.</summary>
    internal double Axis { get; set; } = device.Axis;

    /// <summary>Puts a contact elsewhere.</summary>
    internal void Place(int contact, ContactPlacement placement)
    {
        Contacts[contact] = placement;
        moved = true;
    }

    /// <summary>Moves the rim; edge contacts and tips on the rim follow.</summary>
    /// <exception cref="LayoutException">The rim cannot be moved so far.</exception>
    internal void Grow(double by)
    {
        Outline was = Live;
        if (!(Math.Abs(by) <= MostGrowth * Designed.Domain.Size))
        {
            throw new LayoutException("the rim is moved by more than a million times the size of the sheet");
        }

        Live = OutlineGrowth.Of(was, by);
        for (int c = 0; c < Contacts.Length; c++)
        {
            if (Contacts[c].Span is { } span)
            {
                Contacts[c] = Contacts[c] with { Span = OutlineGrowth.Follow(span, was, Live) };
            }
        }

        for (int k = 0; k < tips.Length; k++)
        {
            RimPlace place = was.Nearest(tips[k].At);
            if (place.Distance <= was.Tolerance)
            {
                tips[k] = tips[k] with { At = OutlineGrowth.Follow(place, was, Live) };
            }
        }

        moved = true;
    }

    /// <summary>Adds to a parameter of the law.</summary>
    internal void AddToLaw(string key, double by) => law[key] = law.GetValueOrDefault(key, LawSensitivity.Value(Designed.Law, key)) + by;

    /// <summary>Adds to a contact's line resistance or resistivity.</summary>
    internal void AddToResistance(int contact, double by) => resistance[contact] += by;

    /// <summary>The changed device.</summary>
    /// <exception cref="LayoutException">Contacts overlap, a width or a resistance is no longer positive, or the like.</exception>
    /// <exception cref="LawException">A parameter of the law is out of range.</exception>
    public SheetDevice Build()
    {
        SheetDevice built = moved ? new SheetLayout(Live, Contacts).Apply(Designed with { Tips = tips }) : Designed;
        built = built with
        {
            Axis = Axis,
            Law = LawSensitivity.With(Designed.Law, law),
            Contacts = [.. built.Contacts.Select((c, k) => resistance[k] == (c.LineResistance + c.Resistivity) ? c
                : !(resistance[k] > 0) ? throw new LayoutException($"the resistance of contact '{c.Name}' is no longer greater than zero")
                : c.Kind == ContactKind.Edge ? c with { LineResistance = resistance[k] } : c with { Resistivity = resistance[k] })],
        };
        return built;
    }
}
