using FieldSolve.Device;
using FieldSolve.Geometry;

namespace FieldSolve.Pictures;

/// <summary>What a live map shows of the device itself, whatever was run.</summary>
internal static class LiveDevice
{
    // Fields of the quadratic elements beside a contact's end pass those of straight triangles by far less than this.
    private const double FieldMargin = 8;

    /// <summary>Contacts in the device's order, then tips, with their roles in a wiring.</summary>
    public static IReadOnlyList<LiveContact> Contacts(SheetDevice device, Wiring wiring)
    {
        IReadOnlyList<string> roles = Roles(device, wiring);
        return
        [
            .. device.Contacts.Select((c, k) => new LiveContact(
                c.Name, roles[k], c.Kind == ContactKind.Pad ? "pad" : "edge", Flat(SheetFrame.Points(c.Shape)), (c.Middle.X, c.Middle.Y))),
            .. device.Tips.Select((t, k) => new LiveContact(t.Name, roles[device.Contacts.Count + k], "tip", [t.At.X, t.At.Y], (t.At.X, t.At.Y))),
        ];
    }

    /// <summary>Roles of all contacts, then of all tips.</summary>
    public static IReadOnlyList<string> Roles(SheetDevice device, Wiring wiring) =>
    [
        .. device.Contacts.Select((_, k) => Role(wiring, new(false, k))),
        .. device.Tips.Select((_, k) => Role(wiring, new(true, k))),
    ];

    /// <summary>Loops of the rim: x, y, x, y, … in metres.</summary>
    public static IReadOnlyList<double[]> Rim(SheetDevice device) => [.. SheetFrame.RimLoops(device.Domain).Select(Flat)];

    /// <summary>The law over all fields of some potentials.</summary>
    public static LiveLaw Law(SheetDevice device, IEnumerable<(LiveMesh Mesh, double[] Potential)> maps) =>
        new(device.Law, device.Axis, FieldMargin * maps.Select(m => m.Mesh.LargestSlope(m.Potential)).DefaultIfEmpty(0).Max());

    /// <summary>x, y, x, y, …</summary>
    public static double[] Flat(Point2[] points) => [.. points.SelectMany(p => (double[])[p.X, p.Y])];

    /// <summary>All roles of a terminal in a wiring, with blanks between; empty for none.</summary>
    public static string AllRoles(Wiring wiring, Terminal t)
    {
        (string Name, Terminal? Who)[] roles =
        [
            ("source", new(false, wiring.Source)), ("drain", new(false, wiring.Drain)), ("along+", wiring.Along?.Plus), ("along-", wiring.Along?.Minus),
            ("across+", wiring.Across?.Plus), ("across-", wiring.Across?.Minus),
        ];
        return string.Join(' ', roles.Where(r => r.Who == t).Select(r => r.Name));
    }

    /// <summary>Role of a terminal in a wiring; empty for none.</summary>
    public static string Role(Wiring wiring, Terminal t) =>
        t == new Terminal(false, wiring.Source) ? "source"
        : t == new Terminal(false, wiring.Drain) ? "drain"
        : t == wiring.Along?.Plus ? "along+"
        : t == wiring.Along?.Minus ? "along-"
        : t == wiring.Across?.Plus ? "across+"
        : t == wiring.Across?.Minus ? "across-" : "";
}
