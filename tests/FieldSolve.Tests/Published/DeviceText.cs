using System.Globalization;
using System.Text;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>Writes device files for tests. Numbers are SI and go out with all their digits.</summary>
internal sealed class DeviceText
{
    private readonly StringBuilder text = new();
    private readonly string law;
    private string drive = "";
    private string mesh = "";

    private DeviceText(string sheet, string law)
    {
        text.AppendLine("title = \"Test sheet\"").AppendLine("[sheet]").AppendLine(sheet);
        this.law = law;
    }

    public static DeviceText Disc(double radius, string law) => new($"disc = {{ diameter = {M(2 * radius)} }}", law);

    public static DeviceText Bar(double length, double width, string law) => new($"bar = {{ length = {M(length)}, width = {M(width)} }}", law);

    public static DeviceText Ring(double inner, double outer, string law) => new($"ring = {{ inner = {M(inner)}, outer = {M(outer)} }}", law);

    /// <summary>An outline in a file beside the device, in metres.</summary>
    public static DeviceText Outline(string file, string law) => new($"outline = {{ file = \"{file}\", unit = \"m\" }}", law);

    /// <summary>An ohmic law; conductances in S, axis in degrees.</summary>
    public static string Ohmic(double a, double b, double hall = 0, double axis = 0) => Law("ohmic", a, b, axis, ("hall", hall, "S"));

    /// <summary>Any law with conductances a, b in S and further parameters with their units.</summary>
    public static string Law(string kind, double a, double b, double axis, params (string Name, double Value, string Unit)[] more)
    {
        var s = new StringBuilder();
        s.AppendLine("[law]").AppendLine(Text($"kind = \"{kind}\"")).AppendLine(Text($"axis = \"{axis:R} deg\""))
            .AppendLine(Text($"a = \"{a:R} S\"")).AppendLine(Text($"b = \"{b:R} S\""));
        foreach ((string name, double value, string unit) in more)
        {
            s.AppendLine(unit.Length == 0 ? Text($"{name} = {value:R}") : Text($"{name} = \"{value:R} {unit}\""));
        }

        return s.ToString();
    }

    /// <summary>An ideal arc on the outer rim of a disc: centre and half angle in degrees.</summary>
    public DeviceText Arc(string name, double at, double half, double radius) =>
        Contact(name, Text($"edge = {{ at = \"{at:R} deg\", width = {M(2 * radius * half * Math.PI / 180)} }}"));

    /// <summary>A ring of equal ideal contacts c1, c2, … on the outer rim, the first at 0 degrees, that a turn steps round.</summary>
    public DeviceText Contacts(int count, double half, double radius)
    {
        text.AppendLine("[[contacts]]").AppendLine(CultureInfo.InvariantCulture, $"ring = {count}").AppendLine(CultureInfo.InvariantCulture, $"width = {M(2 * radius * half * Math.PI / 180)}")
            .AppendLine("prefix = \"c\"").AppendLine("[turn]").AppendLine("around = \"c\"");
        return this;
    }

    /// <summary>A contact over a straight stretch of edge.</summary>
    public DeviceText Stretch(string name, double x1, double y1, double x2, double y2) =>
        Contact(name, $"edge = {{ from = {P(x1, y1)}, to = {P(x2, y2)} }}");

    /// <summary>A contact over the whole end of a bar ("end", "left") or rim of a ring ("rim", "inner").</summary>
    public DeviceText Whole(string name, string kind, string which) => Contact(name, $"edge = {{ {kind} = \"{which}\" }}");

    /// <summary>A rectangular pad.</summary>
    public DeviceText Pad(string name, double x0, double y0, double x1, double y1, double resistivity = 0) =>
        Contact(name, $"pad = [{P(x0, y0)}, {P(x1, y0)}, {P(x1, y1)}, {P(x0, y1)}]" +
            (resistivity == 0 ? "" : Text($"\nresistivity = \"{resistivity:R} ohm m^2\"")));

    public DeviceText Contact(string name, string body)
    {
        text.AppendLine("[[contact]]").AppendLine(CultureInfo.InvariantCulture, $"name = \"{name}\"").AppendLine(body);
        return this;
    }

    public DeviceText Tip(string name, double x, double y)
    {
        text.AppendLine("[[point]]").AppendLine(CultureInfo.InvariantCulture, $"name = \"{name}\"").AppendLine(CultureInfo.InvariantCulture, $"at = {P(x, y)}");
        return this;
    }

    /// <summary>A tip on the rim of a disc, at an angle in degrees.</summary>
    public DeviceText RimTip(string name, double at, double radius)
    {
        (double s, double c) = Math.SinCos(at * Math.PI / 180);
        return Tip(name, radius * c, radius * s);
    }

    /// <summary>A wiring. Pairs are written "p q", extra ones "name: p q".</summary>
    public DeviceText Wiring(string name, string source, string drain, string? along = null, string? across = null, params string[] extra)
    {
        text.AppendLine("[[wiring]]").AppendLine(CultureInfo.InvariantCulture, $"name = \"{name}\"")
            .AppendLine(CultureInfo.InvariantCulture, $"source = \"{source}\"").AppendLine(CultureInfo.InvariantCulture, $"drain = \"{drain}\"");
        if (along is not null)
        {
            text.AppendLine("along = " + Pair(along));
        }

        if (across is not null)
        {
            text.AppendLine("across = " + Pair(across));
        }

        if (extra.Length > 0)
        {
            IEnumerable<string> pairs = extra.Select(e => e.Split(": ")).Select(e => $"{e[0]} = {Pair(e[1])}");
            text.AppendLine("pairs = { " + string.Join(", ", pairs) + " }");
        }

        return this;
    }

    /// <summary>Currents in A.</summary>
    public DeviceText Drive(double from, double to, int steps, bool bothSigns = false)
    {
        drive = Text($"[drive]\ncurrent = {{ from = \"{from:R} A\", to = \"{to:R} A\", steps = {steps} }}\nboth_signs = {(bothSigns ? "true" : "false")}\n");
        return this;
    }

    /// <summary>One current in A.</summary>
    public DeviceText Drive(double current, bool bothSigns = false) => Drive(current, current, 1, bothSigns);

    public DeviceText Wanted(double error = 1e-4, double evenError = 1e-3)
    {
        mesh = Text($"[mesh]\nerror = {error:R}\neven_error = {evenError:R}\n");
        return this;
    }

    public override string ToString() => text.ToString() + law + drive + mesh;

    private static string Pair(string p) => "[" + string.Join(", ", p.Split(' ').Select(n => $"\"{n}\"")) + "]";

    private static string M(double metres) => Text($"\"{metres:R} m\"");

    private static string P(double x, double y) => $"[{M(x)}, {M(y)}]";

    private static string Text(FormattableString s) => s.ToString(CultureInfo.InvariantCulture);
}
