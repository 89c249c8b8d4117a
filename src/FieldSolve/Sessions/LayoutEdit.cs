using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Sessions;

/// <summary>What lithography may move, as changes of the device file: each takes the text and the device it describes and gives the new text.</summary>
public static class LayoutEdit
{
    // A drag is no finer than this share of the sheet's size, or than this angle.
    private const double LengthShare = 5e-5;
    private const double AngleStep = 0.01 * Math.PI / 180;

    /// <summary>Puts a contact or tip at a place: an edge contact slides along its edge to the nearest point, pads and tips are carried there.</summary>
    /// <param name="text">The device file.</param>
    /// <param name="device">What it says.</param>
    /// <param name="name">Contact or tip. A member of a ring is first written as a contact of its own, with the whole ring.</param>
    /// <param name="to">Where its middle belongs, metres.</param>
    /// <exception cref="LayoutEditException">There is no such contact, or it covers a whole edge.</exception>
    public static EditableToml Move(EditableToml text, SheetDevice device, string name, Point2 to)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(device);
        double step = LengthShare * device.Domain.Size;
        if (device.Tips.FirstOrDefault(t => t.Name == name) is not null)
        {
            string point = BlockOf(text, name, "point");
            return Place(text, point + ".at", to, step);
        }

        Contact contact = device.Contacts.FirstOrDefault(c => c.Name == name) ?? throw new LayoutEditException($"there is no contact '{name}'");
        (text, string block) = OwnBlock(text, name);
        if (contact.Kind == ContactKind.Pad)
        {
            return Carry(text, contact, block, to - contact.Middle, step);
        }

        if (text.Find(block + ".edge.at") is { } at)
        {
            double turned = Angle(at.Value) + Math.IEEERemainder(AngleOf(to) - AngleOf(contact.Middle), 2 * Math.PI);
            return text.With(at.Path, EditableToml.Quoted(QuantityText.Like(at.Value, Wrapped(turned), AngleStep, "deg")));
        }

        if (text.Find(block + ".edge.rim") is not null)
        {
            throw new LayoutEditException($"'{name}' covers a whole rim and cannot move along it");
        }

        double moved = AlongRim(device, contact.Middle, to);
        string? old = text.Find(block + ".shift")?.Value;
        double before = old is not null && Quantity.TryParse(old, out double shift, out _, out _, out _) ? shift : 0;
        return text.With(block + ".shift", EditableToml.Quoted(QuantityText.Like(old, before + moved, step, NearUnit(device))));
    }

    /// <summary>
    /// Writes a ring of contacts as single contacts, each at the place it has, and takes it out of [turn]; does nothing to other contacts.
    /// </summary>
    /// <param name="text">The device file.</param>
    /// <param name="name">A contact.</param>
    /// <returns>The text and the path of the contact's own table.</returns>
    /// <exception cref="LayoutEditException">There is no such contact.</exception>
    public static (EditableToml Text, string Block) OwnBlock(EditableToml text, string name)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(name);
        foreach (TomlBlock ring in text.Blocks.Where(b => b.Path.StartsWith("contacts[", StringComparison.Ordinal)))
        {
            string prefix = text.Find(ring.Path + ".prefix")?.Value ?? "";
            int count = int.TryParse(text.Find(ring.Path + ".ring")?.Value, CultureInfo.InvariantCulture, out int n) ? n : 0;
            if (name.StartsWith(prefix, StringComparison.Ordinal)
                && int.TryParse(name[prefix.Length..], NumberStyles.None, CultureInfo.InvariantCulture, out int k) && k >= 1 && k <= count)
            {
                text = text.Replaced(ring.Path, Single(text, ring.Path, prefix, count));

                // There is no ring left for [turn] to step round; it then takes each wiring as one direction.
                text = text.Find("turn.around")?.Value == prefix ? text.Without("turn.around") : text;
                return (text, BlockOf(text, name, "contact"));
            }
        }

        return (text, BlockOf(text, name, "contact"));
    }

    /// <summary>Path of the table of that name.</summary>
    private static string BlockOf(EditableToml text, string name, string kind) =>
        text.Pieces.FirstOrDefault(p => p.Value == name && p.Path.StartsWith(kind + "[", StringComparison.Ordinal) && p.Path.EndsWith("].name", StringComparison.Ordinal))?.Path[..^".name".Length]
        ?? throw new LayoutEditException($"there is no [[{kind}]] of the name '{name}'");

    private static string Single(EditableToml text, string ring, string prefix, int count)
    {
        string? first = text.Find(ring + ".first")?.Value;
        double start = first is null ? 0 : Angle(first);
        string width = Literal(text, ring + ".width") ?? "\"\"";
        List<string> tables = [];
        for (int k = 0; k < count; k++)
        {
            // Fine enough that the ring stays where it is to the last digit that matters.
            string at = QuantityText.Like(first, start + (2 * Math.PI * k / count), 1e-10, "deg");
            string table = $"[[contact]]\nname = {EditableToml.Quoted(string.Create(CultureInfo.InvariantCulture, $"{prefix}{k + 1}"))}\nedge = {{ at = \"{at}\", width = {width} }}";
            foreach (string key in new[] { "resistance", "shift" })
            {
                table += Literal(text, $"{ring}.{key}") is { } literal ? $"\n{key} = {literal}" : "";
            }

            tables.Add(table);
        }

        return string.Join("\n\n", tables);
    }

    private static string? Literal(EditableToml text, string path) => text.Find(path) is { } p ? text.Text[p.Start..p.End] : null;

    private static EditableToml Place(EditableToml text, string path, Point2 to, double step)
    {
        text = text.With(path + "[0]", EditableToml.Quoted(QuantityText.Like(text.Find(path + "[0]")?.Value, to.X, step, "um")));
        return text.With(path + "[1]", EditableToml.Quoted(QuantityText.Like(text.Find(path + "[1]")?.Value, to.Y, step, "um")));
    }

    private static EditableToml Carry(EditableToml text, Contact contact, string block, Point2 by, double step)
    {
        string pad = block + ".pad";
        if (text.Find(pad) is not { Kind: "list" })
        {
            // From a file, which other devices may share: the corners move into the device file.
            IEnumerable<string> corners = contact.Shape.Select(c => c.Start + by).Select(p =>
                $"[\"{QuantityText.Like(null, p.X, step, "um")}\", \"{QuantityText.Like(null, p.Y, step, "um")}\"]");
            return text.With(pad, "[" + string.Join(", ", corners) + "]");
        }

        for (int k = 0; text.Find(string.Create(CultureInfo.InvariantCulture, $"{pad}[{k}]")) is { } corner; k++)
        {
            for (int i = 0; i < 2; i++)
            {
                string path = string.Create(CultureInfo.InvariantCulture, $"{corner.Path}[{i}]");
                if (text.Find(path)?.Value is { } old && Quantity.TryParse(old, out double at, out _, out _, out _))
                {
                    text = text.With(path, EditableToml.Quoted(QuantityText.Like(old, at + (i == 0 ? by.X : by.Y), step, "um")));
                }
            }
        }

        return text;
    }

    // Signed length along the loop of the drawn rim that is nearest to the contact, counter-clockwise round the sheet or round the hole.
    private static double AlongRim(SheetDevice device, Point2 from, Point2 to)
    {
        int loop = Enumerable.Range(0, device.Drawn.Count).MinBy(l => device.Drawn[l].Min(c => c.Distance(from)));
        IReadOnlyList<Curve> curves = device.Drawn[loop];
        double length = curves.Sum(c => c.Length);
        double along = Math.IEEERemainder(Place(curves, to) - Place(curves, from), length);
        return loop == 0 ? along : -along;
    }

    private static double Place(IReadOnlyList<Curve> loop, Point2 p)
    {
        double before = 0, place = 0, nearest = double.PositiveInfinity;
        foreach (Curve c in loop)
        {
            double t = c.NearestParameter(p), distance = Point2.Distance(p, c.At(t));
            if (distance < nearest)
            {
                (nearest, place) = (distance, before + (t * c.Length));
            }

            before += c.Length;
        }

        return place;
    }

    private static string NearUnit(SheetDevice device) => device.Domain.Size switch { > 1e-2 => "mm", < 1e-6 => "nm", _ => "um" };

    private static double Angle(string text) => Quantity.TryParse(text, out double value, out _, out _, out _) ? value : 0;

    private static double AngleOf(Point2 p) => Math.Atan2(p.Y, p.X);

    // -180 to 360 degrees are all common ways to write an angle; bring back only what left that range.
    private static double Wrapped(double angle) =>
        angle >= 2 * Math.PI ? angle - (2 * Math.PI) : angle < -Math.PI ? angle + (2 * Math.PI) : angle;
}
