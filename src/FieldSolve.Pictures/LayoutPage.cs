using System.Text.Json;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Files;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Sessions;

namespace FieldSolve.Pictures;

/// <summary>
/// The page on which a layout is tried: its HTML, script and style, and what it is told of layouts and answers. The page draws with the same parts as the report. Text
/// always travels as JSON and goes into the page as text.
/// </summary>
public static class LayoutPage
{
    // In the order in which they use one another; the first ones are those of the report.
    private static readonly string[] Parts =
    [
        "base.js", "plane.js", "colours.js", "packed.js", "mesh.js", "law.js", "lines.js", "canvas.js", "bars.js", "matrix.js", "chart.js", "frames.js", "layout-image.js", "layout-trace.js", "layout-picture.js", "layout-marks.js",
        "layout-stage.js", "layout-fields.js", "layout-readings.js", "layout.js",
    ];

    /// <summary>The page; it names its script and style as page.js and page.css beside it.</summary>
    public static string Html { get; } = Page();

    /// <summary>The script.</summary>
    public static string Script { get; } = "'use strict';\n(() => {\n" + string.Concat(Parts.Select(LiveScript.Read)) + "})();\n";

    /// <summary>The style sheet.</summary>
    public static string Style { get; } = LiveScript.Style + LiveScript.Read("layout.css");

    /// <summary>Content of the policy header: nothing but the page's own script, style and server.</summary>
    public const string Policy =
        "default-src 'none'; script-src 'self'; style-src 'self'; img-src 'self' data: blob:; connect-src 'self'; base-uri 'none'; form-action 'none'; frame-ancestors 'none'";

    /// <summary>Writes what the page must know of a layout: the sheet, what touches it, and every value of the file.</summary>
    /// <param name="w">Where to.</param>
    /// <param name="state">The session.</param>
    public static void WriteState(Utf8JsonWriter w, SessionState state)
    {
        ArgumentNullException.ThrowIfNull(w);
        ArgumentNullException.ThrowIfNull(state);
        SheetDevice device = state.Device;
        w.WriteStartObject();
        w.WriteNumber("version", state.Version);
        w.WriteString("title", device.Title);
        w.WriteString("file", Path.GetFileName(state.Path));
        w.WriteString("program", RunRecord.Version);
        w.WriteBoolean("canUndo", state.CanUndo);
        w.WriteBoolean("canRedo", state.CanRedo);
        w.WriteBoolean("saved", state.IsSaved);
        w.WriteBoolean("changedOnDisk", state.ChangedOnDisk);
        w.WriteString("shape", device.Shape);
        w.WriteNumber("axis", device.Axis * 180 / Math.PI);
        w.WriteNumber("size", device.Domain.Size);
        w.WriteStartArray("rim");
        foreach (Point2[] loop in SheetFrame.RimLoops(device.Domain))
        {
            LiveData.Values(w, LiveDevice.Flat(loop));
        }

        w.WriteEndArray();
        Outline(w, state);
        Contacts(w, device);
        Wirings(w, device);
        LiveData.Array(w, "values", state.Text.Pieces, (w, piece) =>
        {
            w.WriteString("path", piece.Path);
            w.WriteString("kind", piece.Kind);
            w.WriteString("value", piece.Value);
        });
        LiveData.Words(w, "tables", state.Text.Blocks.Select(b => b.Path));
        Laws(w);
        w.WriteEndObject();
    }

    // Corners that can be moved: loops as drawn, and where each corner stands in the text.
    private static void Outline(Utf8JsonWriter w, SessionState state)
    {
        if (state.Device.Shape != "outline" || state.Device.Drawn.Sum(l => l.Count) > LayoutOutline.MostCorners)
        {
            return;
        }

        IReadOnlyList<IReadOnlyList<string?>> paths = LayoutOutline.Paths(state.Text, state.Device);
        w.WriteStartObject("outline");
        w.WriteString("file", state.Text.Find("sheet.outline.file")?.Value);
        LiveData.Array(w, "loops", state.Device.Drawn.Zip(paths), (w, loop) =>
        {
            LiveData.Numbers(w, "points", LiveDevice.Flat([.. loop.First.Select(c => c.Start)]));
            LiveData.Words(w, "paths", loop.Second);
        });
        w.WriteEndObject();
    }

    private static void Contacts(Utf8JsonWriter w, SheetDevice device)
    {
        w.WriteStartArray("contacts");
        foreach (Contact c in device.Contacts)
        {
            One(c.Name, c.Kind == ContactKind.Pad ? "pad" : "edge", LiveDevice.Flat(SheetFrame.Points(c.Shape)), c.Middle, c.Width);
        }

        foreach (Tip t in device.Tips)
        {
            One(t.Name, "tip", [t.At.X, t.At.Y], t.At, 0);
        }

        w.WriteEndArray();

        void One(string name, string kind, double[] points, Point2 middle, double width)
        {
            w.WriteStartObject();
            w.WriteString("name", name);
            w.WriteString("kind", kind);
            w.WriteNumber("width", width);
            LiveData.Numbers(w, "points", points);
            LiveData.Numbers(w, "middle", [middle.X, middle.Y]);
            w.WriteEndObject();
        }
    }

    private static void Wirings(Utf8JsonWriter w, SheetDevice device)
    {
        Terminal[] terminals = [.. device.Contacts.Select((_, k) => new Terminal(false, k)), .. device.Tips.Select((_, k) => new Terminal(true, k))];
        LiveData.Array(w, "wirings", device.Wirings, (w, wiring) =>
        {
            w.WriteString("name", wiring.Name);
            LiveData.Words(w, "roles", terminals.Select(t => LiveDevice.AllRoles(wiring, t)));
        });
    }

    private static void Laws(Utf8JsonWriter w) => LiveData.Array(w, "laws", LawCatalogue.Kinds, (w, law) =>
    {
        w.WriteString("name", law.Name);
        w.WriteString("summary", law.Summary);
        LiveData.Array(w, "keys", law.Parameters, (w, p) =>
        {
            w.WriteString("key", p.Key);
            w.WriteString("meaning", p.Meaning);
            w.WriteBoolean("required", p.Required);
            w.WriteString("example", p.IsFile ? "table.csv" : p.Dimension == Quantities.Dimension.None ? "2" : p.Dimension.Example);
            w.WriteBoolean("plain", !p.IsFile && p.Dimension == Quantities.Dimension.None);
        });
    });

    private static string Page()
    {
        Html page = new();
        page.Raw("<!DOCTYPE html>").Raw("<html lang=\"en\">").Raw("<head>").Raw("<meta charset=\"utf-8\">");
        page.Raw("<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">").Raw("<meta name=\"referrer\" content=\"no-referrer\">");
        page.Element("title", "FieldSolve layout").Raw("<link rel=\"icon\" href=\"data:,\">").Raw("<link rel=\"stylesheet\" href=\"page.css\">");
        page.Raw("<script src=\"page.js\" defer></script>").Raw("</head>").Raw("<body class=\"layout\">").Raw("<noscript>This page needs scripts.</noscript>");
        return page.Raw("</body>").Raw("</html>").ToString();
    }
}
