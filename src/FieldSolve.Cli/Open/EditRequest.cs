using System.Text.Json;
using System.Text.RegularExpressions;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Sessions;

namespace FieldSolve.Cli.Open;

/// <summary>A change that a page asks for.</summary>
/// <param name="Gesture">Changes of one drag share a name and are undone together.</param>
/// <param name="Ops">What to do, in this order; all or nothing.</param>
internal sealed record EditRequest(string? Gesture, IReadOnlyList<EditOp>? Ops)
{
    private const int MostOps = 100;

    /// <summary>Makes the change.</summary>
    /// <returns>Empty, or the faults with the paths of the values they are about.</returns>
    /// <exception cref="LayoutEditException">The change cannot be made.</exception>
    public IReadOnlyList<(Fault Fault, string? Path)> Apply(EditSession session)
    {
        if (Ops is null || Ops.Count is 0 or > MostOps)
        {
            throw new LayoutEditException("the request holds no change");
        }

        EditableToml? candidate = null;
        IReadOnlyList<Fault> faults = session.Apply(
            (text, device) => candidate = Ops.Aggregate(text, (t, op) => op.On(t, device)), Gesture);
        return [.. faults.Select(f => (f, candidate?.At(f.Line, f.Column)?.Path))];
    }
}

/// <summary>One step of a change.</summary>
/// <param name="Op">"set", "remove", "move", "own", "drop", "add", "pair", "corner-move", "corner-add", "corner-drop", "outline-own", "trace-use".</param>
/// <param name="Path">Of a value: "set" and "remove"; of a wiring: "pair".</param>
/// <param name="Value">For "set": what was typed.</param>
/// <param name="Plain">For "set" of a new key: a number or a flag, without quotes.</param>
/// <param name="Name">Of a contact or tip: "move", "own" and "drop"; of a file: "trace-use".</param>
/// <param name="Kind">For "add": "edge", "pad", "point" or "wiring"; for "pair": "along", "across" or "pairs"; for "trace-use": "alone" when other contacts go.</param>
/// <param name="X">Metres.</param>
/// <param name="Y">Metres.</param>
/// <param name="Loop">Of the outline: 0 is the rim, others are holes.</param>
/// <param name="Corner">Number of a corner in its loop, from 0.</param>
internal sealed partial record EditOp(string? Op, string? Path, string? Value, bool Plain, string? Name, string? Kind, double X, double Y, int Loop, int Corner)
{
    /// <summary>The changed text.</summary>
    public EditableToml On(EditableToml text, SheetDevice device) => Op switch
    {
        "set" when Path is not null && Value is not null => text.With(Path, Literal(text.Find(Path)?.Kind)),
        "remove" when Path is not null => text.Without(Path),
        "move" when Name is not null && double.IsFinite(X) && double.IsFinite(Y) => LayoutEdit.Move(text, device, Name, new Point2(X, Y)),
        "own" when Name is not null => LayoutEdit.OwnBlock(text, Name).Text,
        "drop" when Name is not null => LayoutParts.Drop(text, device, Name),
        "add" when Kind is not null && double.IsFinite(X) && double.IsFinite(Y) => LayoutParts.Add(text, device, Kind, new Point2(X, Y)),
        "pair" when Path is not null && Kind is not null => LayoutParts.AddPair(text, device, Path, Kind),
        "corner-move" when double.IsFinite(X) && double.IsFinite(Y) => LayoutOutline.Move(text, device, Loop, Corner, new Point2(X, Y)),
        "corner-add" when double.IsFinite(X) && double.IsFinite(Y) => LayoutOutline.Add(text, device, Loop, Corner, new Point2(X, Y)),
        "corner-drop" => LayoutOutline.Drop(text, device, Loop, Corner),
        "outline-own" => LayoutOutline.Own(text, device),
        "trace-use" when Name is not null => LayoutTrace.Use(text, device, Name, alone: Kind == "alone"),
        _ => throw new LayoutEditException("the request holds a change that is not known"),
    };

    // What was typed into the field of a number stays a number where it is one; else the reader says what is wrong with it.
    private string Literal(string? kind)
    {
        bool plain = kind is "number" or "flag" || (kind is null && Plain);
        string typed = Value!.Trim().Replace('\u2212', '-');
        return plain && PlainLiteral().IsMatch(typed) ? typed : EditableToml.Quoted(Value!);
    }

    [GeneratedRegex(@"^([-+]?[0-9][0-9_]*(\.[0-9]+)?([eE][-+]?[0-9]+)?|true|false)$")]
    private static partial Regex PlainLiteral();
}

/// <summary>What was traced on a picture, to be saved beside the device file.</summary>
/// <param name="Name">Of the file.</param>
/// <param name="Overwrite">Also when it exists.</param>
/// <param name="Shapes">The polygons.</param>
internal sealed record TraceRequest(string? Name, bool Overwrite, IReadOnlyList<TraceRequest.Shape>? Shapes)
{
    /// <summary>The polygons with places for numbers.</summary>
    /// <exception cref="LayoutEditException">They are not what a page sends.</exception>
    public IReadOnlyList<TraceShape> Read() => [.. (Shapes ?? []).Select(s => new TraceShape(
        s.Kind switch
        {
            "outline" => TraceKind.Outline,
            "hole" => TraceKind.Hole,
            "pad" => TraceKind.Pad,
            _ => throw new LayoutEditException("the request holds a polygon of a kind that is not known"),
        },
        s.Name ?? "",
        [.. (s.Corners ?? []).Chunk(2).Where(c => c.Length == 2).Select(c => new Point2(c[0], c[1]))]))];

    /// <summary>One polygon.</summary>
    /// <param name="Kind">"outline", "hole" or "pad".</param>
    /// <param name="Name">Of a pad.</param>
    /// <param name="Corners">x, y, x, y, … in metres.</param>
    internal sealed record Shape(string? Kind, string? Name, double[]? Corners);
}

/// <summary>Reads and writes the small JSON of requests without reflection on anything else.</summary>
internal static class EditJson
{
    public static readonly JsonSerializerOptions Options = new(JsonSerializerDefaults.Web) { MaxDepth = 8 };
}
