using FieldSolve.Device;
using FieldSolve.Readings;

namespace FieldSolve.Turning;

/// <summary>The wirings of all directions.</summary>
public static class Directions
{
    /// <summary>The first wiring stepped round the ring that [turn] names, or all wirings of the file; by direction.</summary>
    /// <param name="device">The device.</param>
    /// <exception cref="TurnException">There are fewer than two directions, or a wiring has none.</exception>
    public static IReadOnlyList<Wiring> Of(SheetDevice device)
    {
        ArgumentNullException.ThrowIfNull(device);
        IReadOnlyList<Wiring> wirings = device.Turn is { Around: not null } turn ? Stepped(device, turn.Contacts) : device.Wirings;
        if (wirings.Count < 2)
        {
            throw new TurnException(
                "one wiring is one direction; name the ring to step it round, for example [turn] around = \"c\", write more [[wiring]], or turn the crystal with --turn-axis 36");
        }

        foreach (Wiring w in wirings)
        {
            RequireDirection(device, w);
        }

        return [.. wirings.OrderBy(w => CurrentDirection.Degrees(device, w))];
    }

    /// <summary>Throws when a wiring's source and drain have the same middle.</summary>
    /// <exception cref="TurnException">They have.</exception>
    public static void RequireDirection(SheetDevice device, Wiring wiring)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(wiring);
        if (CurrentDirection.Vector(device, wiring).Length < 1e-9 * device.Domain.Size)
        {
            throw new TurnException($"the wiring '{wiring.Name}' has no direction: source and drain have the same middle; take contacts on different sides of the sheet");
        }
    }

    private static Wiring[] Stepped(SheetDevice device, IReadOnlyList<int> ring)
    {
        Wiring first = device.Wirings[0];
        int[] place = [.. Enumerable.Repeat(-1, device.Contacts.Count)];
        for (int k = 0; k < ring.Count; k++)
        {
            place[ring[k]] = k;
        }

        return [.. Enumerable.Range(0, ring.Count).Select(step =>
        {
            // What does not belong to the ring stays where it is, such as a drain in the middle.
            int Contact(int c) => place[c] < 0 ? c : ring[(place[c] + step) % ring.Count];
            Terminal End(Terminal t) => t.IsTip ? t : new(false, Contact(t.Index));
            Pair Turned(Pair p) => new(p.Name, End(p.Plus), End(p.Minus));
            int source = Contact(first.Source), drain = Contact(first.Drain);
            return new Wiring(
                $"{device.Contacts[source].Name} to {device.Contacts[drain].Name}", source, drain,
                first.Along is null ? null : Turned(first.Along), first.Across is null ? null : Turned(first.Across),
                [.. first.Extra.Select(Turned)]);
        })];
    }
}
