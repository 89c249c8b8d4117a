using System.Globalization;
using System.Text;
using System.Text.Json;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Geometry;

namespace FieldSolve.Sessions;

/// <summary>What a traced polygon is.</summary>
public enum TraceKind
{
    /// <summary>The rim of the sheet.</summary>
    Outline,

    /// <summary>A hole in the sheet.</summary>
    Hole,

    /// <summary>Metal.</summary>
    Pad,
}

/// <summary>A polygon traced on a picture.</summary>
/// <param name="Kind">What it is.</param>
/// <param name="Name">Of a pad; else not used.</param>
/// <param name="Corners">Metres, in either direction, the first not repeated.</param>
public sealed record TraceShape(TraceKind Kind, string Name, IReadOnlyList<Point2> Corners);

/// <summary>An outline and pads traced on a picture: as a GeoJSON file beside the device file, and as the sheet of the device.</summary>
public static class LayoutTrace
{
    /// <summary>Unit of the file's coordinates.</summary>
    public const string Unit = "um";

    private const double Micrometre = 1e-6;
    private const int MostShapes = 500;
    private const string OutlineName = "outline";

    /// <summary>
    /// The text of the file: a collection of features (RFC 7946: outer rings counter-clockwise, holes clockwise, the first position repeated at the end) with flat coordinates
    /// in micrometres, the outline first, as a device file's outline and pads are read.
    /// </summary>
    /// <param name="shapes">What was traced.</param>
    /// <exception cref="LayoutEditException">It makes no sheet or no pad; the message says why.</exception>
    public static string GeoJson(IReadOnlyList<TraceShape> shapes)
    {
        ArgumentNullException.ThrowIfNull(shapes);
        TraceShape[] outlines = [.. shapes.Where(s => s.Kind == TraceKind.Outline)], holes = [.. shapes.Where(s => s.Kind == TraceKind.Hole)], pads = [.. shapes.Where(s => s.Kind == TraceKind.Pad)];
        if (shapes.Count is 0 or > MostShapes || outlines.Length > 1 || (holes.Length > 0 && outlines.Length == 0))
        {
            throw new LayoutEditException(shapes.Count == 0 ? "nothing was traced yet" : shapes.Count > MostShapes ? $"up to {MostShapes} polygons are saved together"
                : outlines.Length > 1 ? "a sheet has one outline; remove one of the traced ones" : "a hole needs an outline that it lies in; trace that too");
        }

        if (pads.GroupBy(p => p.Name, StringComparer.Ordinal).FirstOrDefault(g => g.Count() > 1) is { } twice)
        {
            throw new LayoutEditException($"two pads are named '{twice.Key}'; names must differ");
        }

        if (pads.FirstOrDefault(p => p.Name.Length is 0 or > 100 || p.Name == OutlineName || p.Name.Any(char.IsControl)) is { } nameless)
        {
            throw new LayoutEditException(nameless.Name == OutlineName ? "a pad cannot be named 'outline'" : "every pad needs a name of one line");
        }

        Point2[] all = [.. shapes.SelectMany(s => s.Corners)];
        if (shapes.Any(s => s.Corners.Count < 3) || all.Any(p => !(Math.Abs(p.X) <= 1000 && Math.Abs(p.Y) <= 1000)))
        {
            throw new LayoutEditException("a traced polygon needs at least three corners, none beyond 1 km");
        }

        double size = Math.Max(all.Max(p => p.X) - all.Min(p => p.X), all.Max(p => p.Y) - all.Min(p => p.Y));
        int decimals = Math.Clamp((int)Math.Ceiling(5 - Math.Log10(size / Micrometre)), 0, 12);
        return Text(
            [
                .. outlines.Select(o => (OutlineName, Checked("the outline", [o, .. holes]))),
                .. pads.Select(p => (p.Name, Checked($"the pad '{p.Name}'", [p]))),
            ],
            decimals);
    }

    /// <summary>Writes the file beside the device file, whole.</summary>
    /// <param name="state">Whose folder.</param>
    /// <param name="name">A plain name that ends in .geojson.</param>
    /// <param name="shapes">What was traced.</param>
    /// <param name="overwrite">Also when a file of that name exists.</param>
    /// <exception cref="LayoutEditException">The name or what was traced is no good.</exception>
    /// <exception cref="IOException">The file cannot be written.</exception>
    public static SaveOutcome Save(SessionState state, string name, IReadOnlyList<TraceShape> shapes, bool overwrite)
    {
        ArgumentNullException.ThrowIfNull(state);
        ArgumentNullException.ThrowIfNull(name);
        PlainName.Check(name, ".geojson", "trace.geojson");
        string text = GeoJson(shapes), target = Path.Combine(Path.GetDirectoryName(state.Path) ?? "", name);
        if (!PlainName.IsFree(target, overwrite))
        {
            return SaveOutcome.Exists;
        }

        WholeFile.RemoveLeftovers(target);
        WholeFile.WriteText(target, text);
        return SaveOutcome.Saved;
    }

    /// <summary>
    /// Makes a saved trace the sheet: its outline becomes the shape, a pad takes the place of the contact of its name or comes in addition. What the device then lacks is
    /// for its reader to say.
    /// </summary>
    /// <param name="text">The device file.</param>
    /// <param name="device">What it says.</param>
    /// <param name="name">A file that <see cref="Save"/> wrote.</param>
    /// <param name="alone">The traced pads become the only contacts, the first two of them the only wiring; what names other contacts goes.</param>
    /// <exception cref="LayoutEditException">There is no such file, or it is no trace.</exception>
    /// <exception cref="IOException">It cannot be read.</exception>
    public static EditableToml Use(EditableToml text, SheetDevice device, string name, bool alone)
    {
        ArgumentNullException.ThrowIfNull(text);
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(name);
        PlainName.Check(name, ".geojson", "trace.geojson");
        IReadOnlyList<PolygonFeature> polygons;
        try
        {
            polygons = GeoJsonPolygons.Read(File.ReadAllText(Path.Combine(Path.GetDirectoryName(device.Path) ?? "", name)));
        }
        catch (PolygonFileException e)
        {
            throw new LayoutEditException($"the file '{name}': {e.Message}", e);
        }

        string file = EditableToml.Quoted(name);
        if (polygons.Any(p => p.Name == OutlineName))
        {
            // Its own braces are filled anew; a header or dotted keys go.
            text = device.Shape == "outline" && text.Find("sheet.outline") is not null ? text : text.Without("sheet." + device.Shape);
            text = text.With("sheet.outline", $"{{ file = {file}, unit = \"{Unit}\" }}");
        }

        string[] pads = [.. polygons.Select(p => p.Name).OfType<string>().Where(n => n != OutlineName)];
        if (alone)
        {
            text = WithoutContacts(text, pads);
        }

        foreach (string pad in pads)
        {
            string literal = $"{{ file = {file}, name = {EditableToml.Quoted(pad)}, unit = \"{Unit}\" }}";
            if (alone || device.Contacts.All(c => c.Name != pad))
            {
                string? after = text.Blocks.LastOrDefault(b => b.Path.StartsWith("contact[", StringComparison.Ordinal) || b.Path.StartsWith("contacts[", StringComparison.Ordinal))?.Path;
                text = text.Appended($"[[contact]]\nname = {EditableToml.Quoted(pad)}\npad = {literal}", after);
                continue;
            }

            (text, string block) = LayoutEdit.OwnBlock(text, pad);
            foreach (string key in new[] { ".edge", ".resistance", ".shift" })
            {
                text = text.Find(block + key) is null ? text : text.Without(block + key);
            }

            text = text.With(block + ".pad", literal);
        }

        return alone ? text.Appended($"[[wiring]]\nname = \"first\"\nsource = {EditableToml.Quoted(pads[0])}\ndrain = {EditableToml.Quoted(pads[1])}", after: null) : text;
    }

    private static EditableToml WithoutContacts(EditableToml text, string[] pads)
    {
        if (pads.Length < 2)
        {
            throw new LayoutEditException("a current needs two contacts; trace at least two pads");
        }

        string[] naming = ["contact", "contacts", "point", "wiring", "turn", "tolerance.contact", "tolerance.layer", "fit.contact"];
        while (text.Blocks.LastOrDefault(b => naming.Contains(b.Path.Split('[')[0], StringComparer.Ordinal)) is { } block)
        {
            text = text.Without(block.Path);
        }

        return text;
    }

    private static Outline Checked(string what, TraceShape[] rings)
    {
        Outline outline = new([.. rings.Select(r => OutlinePolygons.Segments(r.Corners))]);
        return outline.Validate() is [var problem, ..]
            ? throw new LayoutEditException(string.Create(
                CultureInfo.InvariantCulture, $"{what}: {problem.Message}, at ({problem.At.X / Micrometre:0.###}, {problem.At.Y / Micrometre:0.###}) µm"))
            : outline;
    }

    private static string Text(IEnumerable<(string Name, Outline Rings)> features, int decimals)
    {
        using MemoryStream memory = new();
        using (Utf8JsonWriter w = new(memory, new JsonWriterOptions { Indented = true, NewLine = "\n" }))
        {
            w.WriteStartObject();
            w.WriteString("type", "FeatureCollection");
            w.WriteStartArray("features");
            foreach ((string name, Outline rings) in features)
            {
                w.WriteStartObject();
                w.WriteString("type", "Feature");
                w.WriteStartObject("properties");
                w.WriteString("name", name);
                w.WriteEndObject();
                w.WriteStartObject("geometry");
                w.WriteString("type", "Polygon");
                w.WritePropertyName("coordinates");
                w.WriteRawValue(Rings(rings, decimals));
                w.WriteEndObject();
                w.WriteEndObject();
            }

            w.WriteEndArray();
            w.WriteEndObject();
        }

        return Encoding.UTF8.GetString(memory.ToArray()) + "\n";
    }

    // Loops of an outline already run as the format wants them.
    private static string Rings(Outline outline, int decimals) =>
        "[" + string.Join(", ", outline.Loops.Select(l =>
            "[" + string.Join(", ", l.Select(c => c.Start).Append(l[0].Start).Select(p => $"[{Number(p.X, decimals)}, {Number(p.Y, decimals)}]")) + "]")) + "]";

    private static string Number(double v, int decimals) => (Math.Round(v / Micrometre, decimals) + 0.0).ToString("R", CultureInfo.InvariantCulture);
}
