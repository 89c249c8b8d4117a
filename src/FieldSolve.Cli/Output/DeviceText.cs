using System.Globalization;
using System.Text;
using System.Text.Json.Nodes;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Laws;
using FieldSolve.Readings;

namespace FieldSolve.Cli.Output;

/// <summary>Says what was understood from a device file.</summary>
internal static class DeviceText
{
    public static string Plain(SheetDevice device)
    {
        var text = new StringBuilder();
        void Line(string name, string value) => text.Append(name.PadRight(11)).Append(value).Append('\n');
        Line("title", device.Title);
        Line("sheet", $"{device.Shape}, {AreaText(Area(device))} conducting, "
            + Extent(device)
            + (device.DeadEdge > 0 ? $", dead edge {Engineering.Text(device.DeadEdge, "m")}" : "")
            + (device.Thickness is { } t ? $", {Engineering.Text(t, "m")} thick" : ""));
        Line("law", LawSummary.Describe(device.Law).ReplaceLineEndings("\n" + new string(' ', 11)));
        Line("axis", string.Create(CultureInfo.InvariantCulture, $"crystal a at {device.Axis * 180 / Math.PI:G6} deg from lab x"));
        foreach (Contact c in device.Contacts)
        {
            Line("contact", $"{c.Name}: {Place(device, c)}, {Engineering.Text(c.Width, "m")} {(c.Kind == ContactKind.Edge ? "wide" : "across")}{Resistance(c)}{(Floats(device, c) ? ", floats in every wiring" : "")}");
        }

        foreach (Tip p in device.Tips)
        {
            Line("point", $"{p.Name}: at ({Engineering.Text(p.At.X, "m")}, {Engineering.Text(p.At.Y, "m")})");
        }

        foreach (Wiring w in device.Wirings)
        {
            string pairs = string.Join("", w.Pairs.Select(p => $"; {p.Name} {Name(device, p.Plus)} - {Name(device, p.Minus)}"));
            Line("wiring", $"{w.Name}: {device.Contacts[w.Source].Name} -> {device.Contacts[w.Drain].Name}{pairs}");
        }

        if (device.Drive is { } d)
        {
            Line("drive", (d.Steps == 1 ? Engineering.Text(d.From, "A") : $"{Engineering.Text(d.From, "A")} to {Engineering.Text(d.To, "A")} in {d.Steps} values")
                + (d.BothSigns ? ", both signs" : ", one sign; no odd and even parts without both_signs = true")
                + (d.Frequencies.Count > 0 ? $"; lockin at {string.Join(", ", d.Frequencies.Select(f => Engineering.Text(f, "Hz")))}" : "")
                + (d.Offset != 0 ? $", offset {Engineering.Text(d.Offset, "A")}" : ""));
        }

        foreach (var g in (device.Tolerance?.Causes ?? []).GroupBy(c => (c.Kind, c.Sigma, c.Shape)))
        {
            string size = g.First().Unit is "m" or "S" ? Engineering.Text(g.Key.Sigma, g.First().Unit)
                : string.Create(CultureInfo.InvariantCulture, $"{g.Key.Sigma / g.First().UnitSize:G6}{(g.First().Unit == "1" ? "" : " " + g.First().Unit)}");
            string whom = g.First().Target.Name.Length == 0 ? "" : $" of {string.Join(", ", g.Select(c => c.Target.Name))}";
            Line("tolerance", $"{g.Key.Kind.Key}{whom}: {size}{(g.Key.Shape == CauseShape.Uniform ? ", uniform" : "")}");
        }

        foreach (string note in device.Tolerance?.Notes ?? [])
        {
            Line("note", note);
        }

        Line("accuracy", string.Create(
            CultureInfo.InvariantCulture,
            $"error {device.Mesh.Error:G3} of the largest along voltage, even parts to {device.Mesh.EvenError:G3} of themselves, at most {device.Mesh.MaxUnknowns} unknowns"));
        if (Cautions.OfMeanFreePath(device) is { } caution)
        {
            Line("caution", caution);
        }

        foreach (string strip in NarrowStrips.Of(device))
        {
            Line("warning", strip);
        }

        return text.ToString();
    }

    public static string Json(SheetDevice device)
    {
        var json = new JsonObject
        {
            ["title"] = device.Title,
            ["sha256"] = device.Sha256,
            ["shape"] = device.Shape,
            ["area_m2"] = Area(device),
            ["size_m"] = device.Domain.Size,
            ["law"] = LawSummary.Describe(device.Law),
            ["axis_deg"] = device.Axis * 180 / Math.PI,
            ["contacts"] = new JsonArray([.. device.Contacts.Select(c => (JsonNode)new JsonObject
            {
                ["name"] = c.Name,
                ["kind"] = c.Kind == ContactKind.Edge ? "edge" : "pad",
                ["width_m"] = c.Width,
                ["x_m"] = c.Middle.X,
                ["y_m"] = c.Middle.Y,
                ["line_resistance_ohm_m"] = c.LineResistance,
                ["resistivity_ohm_m2"] = c.Resistivity,
            })]),
            ["points"] = new JsonArray([.. device.Tips.Select(p => (JsonNode)new JsonObject { ["name"] = p.Name, ["x_m"] = p.At.X, ["y_m"] = p.At.Y })]),
            ["wirings"] = new JsonArray([.. device.Wirings.Select(w => (JsonNode)new JsonObject
            {
                ["name"] = w.Name,
                ["source"] = device.Contacts[w.Source].Name,
                ["drain"] = device.Contacts[w.Drain].Name,
                ["pairs"] = new JsonObject(w.Pairs.Select(p => KeyValuePair.Create(
                    p.Name, (JsonNode?)new JsonArray(Name(device, p.Plus), Name(device, p.Minus))))),
            })]),
            ["currents_A"] = new JsonArray([.. (device.Drive?.Currents ?? []).Select(c => (JsonNode)c)]),
            ["warnings"] = new JsonArray([.. NarrowStrips.Of(device).Select(w => (JsonNode)w)]),
        };
        return SummaryJson.Text(json);
    }

    private static string Name(SheetDevice device, Terminal t) => t.IsTip ? device.Tips[t.Index].Name : device.Contacts[t.Index].Name;

    private static string Place(SheetDevice device, Contact c)
    {
        // Rounding leaves 1e-22 m where 0 is meant.
        string Text(double x) => Engineering.Text(Math.Abs(x) < 1e-9 * device.Domain.Size ? 0 : x, "m", 4);
        return $"{(c.Kind == ContactKind.Edge ? "edge" : "pad")} at ({Text(c.Middle.X)}, {Text(c.Middle.Y)})";
    }

    private static string Resistance(Contact c) => c.LineResistance > 0
        ? string.Create(CultureInfo.InvariantCulture, $", {c.LineResistance * 1e6:G5} ohm um")
        : c.Resistivity > 0 ? string.Create(CultureInfo.InvariantCulture, $", {c.Resistivity * 1e4:G5} ohm cm^2") : "";

    // Width and height of the box about the live sheet; an arc may bulge beyond its ends.
    private static string Extent(SheetDevice device)
    {
        Point2[] points = [.. device.Domain.Edges.Where(e => e.IsRim).SelectMany(e => Enumerable.Range(0, 33).Select(k => e.Curve.At(k / 32.0)))];
        double width = points.Max(p => p.X) - points.Min(p => p.X), height = points.Max(p => p.Y) - points.Min(p => p.Y);
        return $"{Engineering.Text(width, "m", 4)} wide, {Engineering.Text(height, "m", 4)} high";
    }

    private static bool Floats(SheetDevice device, Contact c) => device.Wirings.Count > 0 && !device.Wirings.Any(
        w => device.Contacts[w.Source] == c || device.Contacts[w.Drain] == c
            || w.Pairs.Any(p => (!p.Plus.IsTip && device.Contacts[p.Plus.Index] == c) || (!p.Minus.IsTip && device.Contacts[p.Minus.Index] == c)));

    // A prefix would stand for its square: 2160 µm², not 2.16 kµm².
    private static string AreaText(double area)
    {
        (double size, string unit) = area >= 1e-7 ? (1e-6, "mm²") : area >= 1e-13 ? (1e-12, "µm²") : (1e-18, "nm²");
        return $"{(area / size).ToString("G6", CultureInfo.InvariantCulture)} {unit}";
    }

    // Green's theorem over the rim; exact on arcs.
    private static double Area(SheetDevice device)
    {
        double twice = 0;
        foreach (DomainEdge e in device.Domain.Edges.Where(e => e.IsRim))
        {
            Curve c = e.Curve;
            twice += Point2.Cross(c.Start, c.End);
            if (c.IsArc)
            {
                twice += c.Radius * c.Radius * (c.Sweep - Math.Sin(c.Sweep));
            }
        }

        return twice / 2;
    }
}
