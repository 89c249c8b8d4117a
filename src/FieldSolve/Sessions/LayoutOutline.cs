using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Sessions;

/// <summary>
/// Moves, adds and removes corners of an outline, as changes of the device file. An outline in a file of its own, which other devices may share, is first written into
/// the device file; its file stays as it is. Contacts between two points of an edge keep their place on it, as a share of its length.
/// </summary>
public static class LayoutOutline
{
    /// <summary>With more corners an outline is not changed by hand: it would fill the device file.</summary>
    public const int MostCorners = 2000;

    private const int CornersPerLine = 4;
    private const double LengthShare = 5e-5;
    private const string Rim = "sheet.outline.corners";
    private const string Holes = "sheet.outline.holes";

    /// <summary>For each loop of the sheet as drawn and each of its corners the path of the corner in the text; null where it stands in a file.</summary>
    public static IReadOnlyList<IReadOnlyList<string?>> Paths(EditableToml text, SheetDevice device)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(device);
        Dictionary<Point2, string> known = [];
        foreach (TomlPiece ring in text.Pieces.Where(p => p.Kind == "list" && (p.Path == Rim || (p.Path.StartsWith(Holes + "[", StringComparison.Ordinal) && p.Path.Count(c => c == '[') == 1))))
        {
            for (int k = 0; text.Find(Item(ring.Path, k)) is { } corner; k++)
            {
                if (Read(text, corner.Path) is { } at)
                {
                    known.TryAdd(at, corner.Path);
                }
            }
        }

        return [.. device.Drawn.Select(loop => (IReadOnlyList<string?>)[.. loop.Select(c => known.GetValueOrDefault(c.Start))])];
    }

    /// <summary>Writes an outline that stands in a file into the device file; does nothing to one that stands there.</summary>
    /// <exception cref="LayoutEditException">The sheet is no outline, or has too many corners.</exception>
    public static EditableToml Own(EditableToml text, SheetDevice device)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(device);
        if (device.Shape != "outline")
        {
            throw new LayoutEditException($"a {device.Shape.Replace('_', ' ')} has no corners to move; its sizes are under [sheet]");
        }

        int count = device.Drawn.Sum(l => l.Count);
        if (count > MostCorners)
        {
            throw new LayoutEditException(string.Create(CultureInfo.InvariantCulture, $"the outline has {count} corners, and up to {MostCorners} are moved by hand; simplify it first"));
        }

        if (text.Find(Rim) is not null)
        {
            return text;
        }

        string unit = text.Find("sheet.outline.unit")?.Value ?? "um";
        string newLine = text.Text.Contains("\r\n", StringComparison.Ordinal) ? "\r\n" : "\n";
        string[] rings = [.. device.Drawn.Select(l => Ring(l, unit, device.Domain.Size, newLine))];
        string holes = "[" + string.Join(", ", rings[1..]) + "]";
        if (text.Find("sheet.outline") is { Kind: "table" })
        {
            // Pads in files may lean on the unit.
            return text.With("sheet.outline", $"{{ unit = {EditableToml.Quoted(unit)}, corners = {rings[0]}{(rings.Length > 1 ? $", holes = {holes}" : "")} }}");
        }

        // Under a header of its own, or by dotted keys: these need the old key as their neighbour until the new one stands.
        text = text.With(Rim, rings[0]).Without("sheet.outline.file");
        return rings.Length > 1 ? text.With(Holes, holes) : text;
    }

    /// <summary>Puts a corner elsewhere.</summary>
    /// <param name="text">The device file.</param>
    /// <param name="device">What it says.</param>
    /// <param name="loop">Loop of the sheet as drawn; 0 for the outer rim.</param>
    /// <param name="corner">Its number in the loop, from 0.</param>
    /// <param name="to">Where to, metres.</param>
    /// <exception cref="LayoutEditException">There is no such corner.</exception>
    public static EditableToml Move(EditableToml text, SheetDevice device, int loop, int corner, Point2 to)
    {
        (text, string path, Point2[] ring) = Corner(text, device, loop, corner);
        double step = LengthShare * device.Domain.Size;
        text = text.With(path + "[0]", EditableToml.Quoted(QuantityText.Like(text.Find(path + "[0]")?.Value, to.X, step, "um")));
        text = text.With(path + "[1]", EditableToml.Quoted(QuantityText.Like(text.Find(path + "[1]")?.Value, to.Y, step, "um")));
        Point2 now = Read(text, path) ?? to;
        Point2 before = ring[Before(ring, corner)], after = ring[After(ring, corner)];
        return Follow(text, device, loop, (edge, t) =>
            edge == corner ? Between(now, after, t) : edge == Before(ring, corner) ? Between(before, now, t) : null);
    }

    /// <summary>Adds a corner on the edge behind a corner.</summary>
    /// <param name="text">The device file.</param>
    /// <param name="device">What it says.</param>
    /// <param name="loop">Loop of the sheet as drawn.</param>
    /// <param name="corner">The corner at which the edge begins.</param>
    /// <param name="at">Where the new corner belongs, metres.</param>
    /// <exception cref="LayoutEditException">There is no such edge.</exception>
    public static EditableToml Add(EditableToml text, SheetDevice device, int loop, int corner, Point2 at)
    {
        (text, string path, Point2[] ring) = Corner(text, device, loop, corner);
        string next = Corner(text, device, loop, After(ring, corner)).Path;
        double step = LengthShare * device.Domain.Size, split = Math.Clamp(device.Drawn[loop][corner].NearestParameter(at), 1e-3, 1 - 1e-3);
        string x = QuantityText.Like(text.Find(path + "[0]")?.Value, at.X, step, "um"), y = QuantityText.Like(text.Find(path + "[1]")?.Value, at.Y, step, "um");
        string literal = $"[{EditableToml.Quoted(x)}, {EditableToml.Quoted(y)}]";

        // The sheet's loops may run against the order of the text; the two corners are neighbours either way, or the first and the last.
        int p = IndexOf(path), q = IndexOf(next);
        bool wraps = Math.Min(p, q) == 0 && Math.Max(p, q) == ring.Length - 1;
        text = wraps && ring.Length > 2 ? text.ItemAfter(p > q ? path : next, literal) : text.ItemBefore(p > q ? path : next, literal);
        Point2 here = ring[corner], there = ring[After(ring, corner)];
        return Follow(text, device, loop, (edge, t) => edge != corner ? null : t <= split ? Between(here, at, t / split) : Between(at, there, (t - split) / (1 - split)));
    }

    /// <summary>Removes a corner; its two neighbours are joined.</summary>
    /// <param name="text">The device file.</param>
    /// <param name="device">What it says.</param>
    /// <param name="loop">Loop of the sheet as drawn.</param>
    /// <param name="corner">Its number in the loop.</param>
    /// <exception cref="LayoutEditException">There is no such corner, or the outline would be left with two.</exception>
    public static EditableToml Drop(EditableToml text, SheetDevice device, int loop, int corner)
    {
        (text, string path, Point2[] ring) = Corner(text, device, loop, corner);
        if (ring.Length <= 3)
        {
            if (loop == 0)
            {
                throw new LayoutEditException("an outline keeps at least three corners");
            }

            // A hole of three corners goes as a whole.
            string hole = path[..path.LastIndexOf('[')];
            return text.WithoutItem(hole);
        }

        text = text.WithoutItem(path);
        Point2 before = ring[Before(ring, corner)], after = ring[After(ring, corner)];
        double first = Point2.Distance(before, ring[corner]), second = Point2.Distance(ring[corner], after), whole = first + second;
        return Follow(text, device, loop, (edge, t) =>
            edge == corner ? Between(before, after, (first + (t * second)) / whole) : edge == Before(ring, corner) ? Between(before, after, t * first / whole) : null);
    }

    private static (EditableToml Text, string Path, Point2[] Ring) Corner(EditableToml text, SheetDevice device, int loop, int corner)
    {
        bool inFile = text.Find(Rim) is null;
        text = Own(text, device);
        if (loop < 0 || loop >= device.Drawn.Count || corner < 0 || corner >= device.Drawn[loop].Count)
        {
            throw Missing(loop, corner);
        }

        // What was just written is in the order of the sheet; it may differ in the last digit.
        string own = Item(loop == 0 ? Rim : Item(Holes, loop - 1), corner);
        string path = inFile ? own : Paths(text, device)[loop][corner] ?? (text.Find(own) is null ? throw Missing(loop, corner) : own);
        return (text, path, [.. device.Drawn[loop].Select(c => c.Start)]);
    }

    private static LayoutEditException Missing(int loop, int corner) =>
        new(string.Create(CultureInfo.InvariantCulture, $"the outline has no corner {corner + 1}{(loop > 0 ? $" in hole {loop}" : "")}"));

    // Ends of contacts on edges that changed go along: where gives the new place of a share of an edge, or null for an edge that stays.
    private static EditableToml Follow(EditableToml text, SheetDevice device, int loop, Func<int, double, Point2?> where)
    {
        double near = 2e-3 * device.Domain.Size, step = LengthShare * device.Domain.Size;
        foreach (TomlBlock block in text.Blocks.Where(b => b.Path.StartsWith("contact[", StringComparison.Ordinal)).ToArray())
        {
            foreach (string end in new[] { ".edge.from", ".edge.to" })
            {
                if (Read(text, block.Path + end) is not { } at)
                {
                    continue;
                }

                (int l, int edge, double t, double distance) = device.Drawn.SelectMany((curves, i) => curves.Select((c, k) =>
                {
                    double s = c.NearestParameter(at);
                    return (i, k, s, Point2.Distance(at, c.At(s)));
                })).MinBy(p => p.Item4);
                if (l == loop && distance <= near && where(edge, t) is { } to)
                {
                    for (int i = 0; i < 2; i++)
                    {
                        string path = Item(block.Path + end, i);
                        text = text.With(path, EditableToml.Quoted(QuantityText.Like(text.Find(path)?.Value, i == 0 ? to.X : to.Y, step, "um")));
                    }
                }
            }
        }

        return text;
    }

    private static Point2? Read(EditableToml text, string path) =>
        text.Find(path + "[0]")?.Value is { } x && text.Find(path + "[1]")?.Value is { } y
        && Quantity.TryParse(x, out double px, out _, out _, out _) && Quantity.TryParse(y, out double py, out _, out _, out _) ? new Point2(px, py) : null;

    // As exact as the file that it comes from, as far as a picometre in a micrometre matters.
    private static string Ring(IReadOnlyList<Curve> loop, string unit, double size, string newLine)
    {
        string[] corners = [.. loop.Select(c => $"[{Length(c.Start.X)}, {Length(c.Start.Y)}]")];
        string[] lines = [.. corners.Chunk(CornersPerLine).Select(c => "    " + string.Join(", ", c))];
        return "[" + newLine + string.Join("," + newLine, lines) + newLine + "]";

        string Length(double v) => $"\"{QuantityText.Like("1 " + unit, v, 1e-9 * size, "um")}\"";
    }

    private static string Item(string path, int k) => string.Create(CultureInfo.InvariantCulture, $"{path}[{k}]");

    private static int IndexOf(string path) => int.Parse(path[(path.LastIndexOf('[') + 1)..^1], CultureInfo.InvariantCulture);

    private static int Before(Point2[] ring, int k) => (k + ring.Length - 1) % ring.Length;

    private static int After(Point2[] ring, int k) => (k + 1) % ring.Length;

    private static Point2 Between(Point2 a, Point2 b, double t) => a + (t * (b - a));
}
