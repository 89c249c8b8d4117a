using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Geometry;

namespace FieldSolve.Sessions;

/// <summary>Adds and removes contacts, tips and wirings.</summary>
public static class LayoutParts
{
    private const double WidthShare = 0.05;

    /// <summary>Removes a contact or a tip, or a wiring of that name when there is neither.</summary>
    /// <exception cref="LayoutEditException">There is nothing of that name.</exception>
    public static EditableToml Drop(EditableToml text, SheetDevice device, string name)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(device);
        if (device.Contacts.Any(c => c.Name == name))
        {
            (text, string block) = LayoutEdit.OwnBlock(text, name);
            return text.Without(block);
        }

        TomlPiece? piece = text.Pieces.FirstOrDefault(p => p.Value == name && (p.Path.StartsWith("point[", StringComparison.Ordinal) || p.Path.StartsWith("wiring[", StringComparison.Ordinal))
            && p.Path.EndsWith("].name", StringComparison.Ordinal));
        return piece is null ? throw new LayoutEditException($"there is nothing named '{name}'") : text.Without(piece.Path[..^".name".Length]);
    }

    /// <summary>Adds a contact at the edge, a pad, a tip or a wiring, with a name that is free.</summary>
    /// <param name="text">The device file.</param>
    /// <param name="device">What it says.</param>
    /// <param name="kind">"edge", "pad", "point" or "wiring".</param>
    /// <param name="at">Where, metres; an edge contact takes the nearest point of the edge.</param>
    /// <exception cref="LayoutEditException">The kind is not known, or nothing can be added.</exception>
    public static EditableToml Add(EditableToml text, SheetDevice device, string kind, Point2 at)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(device);
        double step = 1e-4 * device.Domain.Size, width = WidthShare * device.Domain.Size;
        string Length(double value) => $"\"{QuantityText.Like(null, value, step, "um")}\"";
        string Pair(Point2 p) => $"[{Length(p.X)}, {Length(p.Y)}]";
        string? Last(params string[] kinds) => text.Blocks.LastOrDefault(b => kinds.Any(k => b.Path.StartsWith(k + "[", StringComparison.Ordinal)))?.Path;
        string? metal = Last("contact", "contacts");
        switch (kind)
        {
            case "point":
                return text.Appended($"[[point]]\nname = \"{Free(device, "p")}\"\nat = {Pair(at)}", Last("point") ?? metal);
            case "pad":
                double h = width / 2;
                string corners = string.Join(", ", new[] { (-h, -h), (h, -h), (h, h), (-h, h) }.Select(c => Pair(new(at.X + c.Item1, at.Y + c.Item2))));
                return text.Appended($"[[contact]]\nname = \"{Free(device, "pad")}\"\npad = [{corners}]", metal);
            case "edge":
                string place = device.Shape is "disc" or "ring"
                    ? $"{{ at = \"{QuantityText.Like(null, Math.Atan2(at.Y, at.X), 1e-4, "deg")}\", width = {Length(width)} }}"
                    : Stretch(device, at, width, Pair);
                return text.Appended($"[[contact]]\nname = \"{Free(device, "e")}\"\nedge = {place}", metal);
            case "wiring":
                return Wiring(text, device, Last("wiring"));
            default:
                throw new LayoutEditException($"'{kind}' cannot be added; an edge contact, a pad, a tip or a wiring can");
        }
    }

    /// <summary>Adds a pair to a wiring, of probes that serve no pair yet where there are such.</summary>
    /// <param name="text">The device file.</param>
    /// <param name="device">What it says.</param>
    /// <param name="block">Path of the wiring, such as "wiring[0]".</param>
    /// <param name="kind">"along", "across", or "pairs" for a further one with a name that is free.</param>
    /// <exception cref="LayoutEditException">There is no such wiring or kind, or fewer than two probes.</exception>
    public static EditableToml AddPair(EditableToml text, SheetDevice device, string block, string kind)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(device);
        if (text.Blocks.All(b => b.Path != block) || device.Wirings.FirstOrDefault(w => w.Name == text.Find(block + ".name")?.Value) is not { } wiring || kind is not ("along" or "across" or "pairs"))
        {
            throw new LayoutEditException("there is no such wiring, or no such pair");
        }

        HashSet<Terminal> used = [new(false, wiring.Source), new(false, wiring.Drain), .. wiring.Pairs.SelectMany(p => new[] { p.Plus, p.Minus })];
        Terminal[] all = [.. device.Contacts.Select((_, k) => new Terminal(false, k)), .. device.Tips.Select((_, k) => new Terminal(true, k))];
        string[] names = [.. all.OrderBy(t => used.Contains(t)).Select(t => NameOf(device, t))];
        string literal = $"[{EditableToml.Quoted(names[0])}, {EditableToml.Quoted(names[1])}]";
        if (kind != "pairs")
        {
            return text.With($"{block}.{kind}", literal);
        }

        int n = 1;
        while (text.Find(string.Create(CultureInfo.InvariantCulture, $"{block}.pairs.pair{n}")) is not null)
        {
            n++;
        }

        string key = string.Create(CultureInfo.InvariantCulture, $"pair{n}");
        return text.Find(block + ".pairs") is null ? text.With(block + ".pairs", $"{{ {key} = {literal} }}") : text.With($"{block}.pairs.{key}", literal);
    }

    private static EditableToml Wiring(EditableToml text, SheetDevice device, string? after)
    {
        Wiring? like = device.Wirings.Count > 0 ? device.Wirings[^1] : null;
        string source = device.Contacts[like?.Drain ?? 0].Name, drain = device.Contacts[like?.Source ?? 1].Name;
        string name = "reversed";
        for (int k = 2; device.Wirings.Any(w => w.Name == name); k++)
        {
            name = string.Create(CultureInfo.InvariantCulture, $"wiring {k}");
        }

        string table = $"[[wiring]]\nname = {EditableToml.Quoted(name)}\nsource = {EditableToml.Quoted(source)}\ndrain = {EditableToml.Quoted(drain)}";
        foreach (Pair pair in new[] { like?.Along, like?.Across }.OfType<Pair>())
        {
            // The current is turned round, so the two probes change places.
            table += $"\n{pair.Name} = [{EditableToml.Quoted(NameOf(device, pair.Minus))}, {EditableToml.Quoted(NameOf(device, pair.Plus))}]";
        }

        return text.Appended(table, after);
    }

    private static string NameOf(SheetDevice device, Terminal t) => t.IsTip ? device.Tips[t.Index].Name : device.Contacts[t.Index].Name;

    // Two points on the straight edge nearest to the place.
    private static string Stretch(SheetDevice device, Point2 at, double width, Func<Point2, string> pair)
    {
        Curve edge = device.Drawn.SelectMany(l => l).MinBy(c => c.Distance(at));
        double length = edge.Length, half = Math.Min(width, 0.8 * length) / 2, s = Math.Clamp(edge.NearestParameter(at) * length, half * 1.1, length - (half * 1.1));
        return $"{{ from = {pair(edge.At((s - half) / length))}, to = {pair(edge.At((s + half) / length))} }}";
    }

    private static string Free(SheetDevice device, string prefix)
    {
        for (int k = 1; ; k++)
        {
            string name = string.Create(CultureInfo.InvariantCulture, $"{prefix}{k}");
            if (device.Contacts.All(c => c.Name != name) && device.Tips.All(t => t.Name != name))
            {
                return name;
            }
        }
    }
}
