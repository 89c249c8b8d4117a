using System.Runtime.InteropServices;
using System.Text;
using System.Text.Json;

namespace FieldSolve.Pictures;

/// <summary>One picture of a live map: the potential at a drive value, a phase or a direction.</summary>
/// <param name="Label">What the slider says, such as "20 µA".</param>
/// <param name="Value">In SI, for files.</param>
/// <param name="Potential">One per node of the run, V.</param>
/// <param name="Metal">Potential of each contact's metal, V.</param>
internal sealed record LiveFrame(string Label, double Value, double[] Potential, double[] Metal)
{
    /// <summary>Roles of the contacts and tips while this frame is shown; null for those of the map.</summary>
    public IReadOnlyList<string>? Roles { get; init; }

    /// <summary>How far crystal a is turned from the axis of the map's law, radians.</summary>
    public double Turn { get; init; }
}

/// <summary>A contact or tip as drawn over a map.</summary>
/// <param name="Name">From the device file.</param>
/// <param name="Role">"source", "drain", "along+", "along-", "across+", "across-" or empty.</param>
/// <param name="Kind">"edge", "pad" or "tip".</param>
/// <param name="Points">Outline or stretch of rim, metres: x, y, x, y, …</param>
/// <param name="Middle">Where the name belongs.</param>
internal sealed record LiveContact(string Name, string Role, string Kind, double[] Points, (double X, double Y) Middle);

/// <summary>A map with a slider.</summary>
/// <param name="Id">Name inside the page, of letters, digits and hyphens.</param>
/// <param name="Title">For example "Wiring 0 deg".</param>
/// <param name="By">What the slider changes: "current", "phase", "direction", or "axis" for the crystal's.</param>
/// <param name="Unit">Unit of the frames' values.</param>
/// <param name="Mesh">Index of the mesh.</param>
/// <param name="Law">Index of the law.</param>
/// <param name="Direction">Direction of the current, degrees.</param>
/// <param name="Note">A sentence under the map; may be empty.</param>
/// <param name="Rim">Loops of the rim, metres.</param>
/// <param name="Contacts">Contacts in the device's order, then tips.</param>
/// <param name="Frames">In the order of the slider.</param>
internal sealed record LiveMap(
    string Id, string Title, string By, string Unit, int Mesh, int Law, double Direction, string Note, IReadOnlyList<double[]> Rim,
    IReadOnlyList<LiveContact> Contacts, IReadOnlyList<LiveFrame> Frames);

/// <summary>Points of a curve.</summary>
/// <param name="Name">For the key.</param>
/// <param name="Look">Number of its colour and marker; series of equal number look alike in all charts.</param>
/// <param name="X">SI.</param>
/// <param name="Y">SI.</param>
/// <param name="Error">Half length of the error bars, SI; empty for none.</param>
/// <param name="Doubtful">Points to ring.</param>
/// <param name="Map">Map that belongs to the points; null for none.</param>
/// <param name="Frame">Frame of that map for each point, -1 for none; empty for none.</param>
/// <param name="Line">Straight line to draw: slope and intercept in SI; null for none.</param>
/// <param name="LineText">What the key says of it.</param>
internal sealed record LiveSeries(
    string Name, int Look, double[] X, double[] Y, double[] Error, bool[] Doubtful, string? Map, int[] Frame, (double Slope, double Intercept)? Line = null,
    string LineText = "")
{
    /// <summary>A curve beside the points (SI), drawn instead of straight lines from point to point; null for none.</summary>
    public (double[] X, double[] Y)? Curve { get; init; }
}

/// <summary>One choice of quantity in a chart.</summary>
/// <param name="Label">For the choice and the title.</param>
/// <param name="X">Label of the axis without unit.</param>
/// <param name="XUnit">Unit without prefix.</param>
/// <param name="Y">Likewise.</param>
/// <param name="YUnit">Likewise.</param>
/// <param name="Series">The curves.</param>
internal sealed record LiveView(string Label, string X, string XUnit, string Y, string YUnit, IReadOnlyList<LiveSeries> Series)
{
    /// <summary>
    /// "curve"; "bars": one bar per series and category, X of the series counts the categories; "histogram": bars between the edges X, one more than Y;
    /// "matrix": Y of the only series holds, row by row, a number from -1 to 1 for each two categories.
    /// </summary>
    public string Kind { get; init; } = "curve";

    /// <summary>What the error bars of curves are, for files.</summary>
    public string ErrorName { get; init; } = "numerical error";

    /// <summary>Names below the bars.</summary>
    public IReadOnlyList<string> Categories { get; init; } = [];

    /// <summary>Upright lines with names, such as percentiles; SI.</summary>
    public IReadOnlyList<(double X, string Name)> Marks { get; init; } = [];

    /// <summary>True to begin with logarithmic axes.</summary>
    public bool Logarithmic { get; init; }
}

/// <summary>A live chart.</summary>
/// <param name="Id">Name inside the page.</param>
/// <param name="Title">Heading.</param>
/// <param name="Note">A sentence below.</param>
/// <param name="Views">Choices; the first is shown.</param>
internal sealed record LiveChart(string Id, string Title, string Note, IReadOnlyList<LiveView> Views);

/// <summary>
/// Everything a live page shows, as the data block that its script reads. Numbers of meshes and frames are base64 of little-endian bytes, shared
/// where maps share them; all other numbers are shortest decimals, so they equal those of the CSV files.
/// </summary>
internal sealed class LiveData
{
    /// <summary>Meshes.</summary>
    public List<LiveMesh> Meshes { get; } = [];

    /// <summary>Laws.</summary>
    public List<LiveLaw> Laws { get; } = [];

    /// <summary>Maps; those that follow one another in the list share one view with a choice.</summary>
    public List<LiveMap> Maps { get; } = [];

    /// <summary>Charts.</summary>
    public List<LiveChart> Charts { get; } = [];

    /// <summary>The device coloured by its contacts' shares; null for none.</summary>
    public LiveShare? Share { get; init; }

    /// <summary>A measured map beside the computed one; null for none.</summary>
    public LiveComparison? Comparison { get; init; }

    /// <summary>Title of the device, for file names and pictures.</summary>
    public string Title { get; init; } = "";

    /// <summary>Writes the data as JSON that may stand inside a script element: no '&lt;' occurs in it.</summary>
    public void Write(Stream stream)
    {
        using Utf8JsonWriter w = new(stream);
        w.WriteStartObject();
        w.WriteString("title", Title);
        Array(w, "meshes", Meshes, Write);
        Array(w, "laws", Laws, Write);
        Array(w, "maps", Maps, Write);
        Array(w, "charts", Charts, Write);
        Share?.Write(w);
        if (Comparison is not null)
        {
            w.WritePropertyName("comparison");
            Comparison.Write(w, Meshes[Comparison.Mesh]);
        }

        w.WriteEndObject();
    }

    /// <summary>The same as text.</summary>
    public string Json()
    {
        using MemoryStream memory = new();
        Write(memory);
        return Encoding.UTF8.GetString(memory.GetBuffer(), 0, (int)memory.Length);
    }

    private static void Write(Utf8JsonWriter w, LiveMesh mesh)
    {
        WriteTriangles(w, mesh);
        WritePlaces(w, mesh);
    }

    internal static void WriteTriangles(Utf8JsonWriter w, LiveMesh mesh)
    {
        w.WriteNumber("triangles", mesh.Triangles);
        w.WriteNumber("count", mesh.Count);
        w.WriteNumber("cornerCount", mesh.Corners);
        w.WriteBase64String("corners", mesh.PackedCorners());
    }

    internal static void WritePlaces(Utf8JsonWriter w, LiveMesh mesh)
    {
        w.WriteBase64String("places", mesh.Places(bent: false));
        w.WriteBase64String("bent", LiveMesh.Pack(mesh.Bent));
        w.WriteBase64String("bentPlaces", mesh.Places(bent: true));
    }

    private static void Write(Utf8JsonWriter w, LiveContact c)
    {
        w.WriteString("name", c.Name);
        w.WriteString("role", c.Role);
        w.WriteString("kind", c.Kind);
        Numbers(w, "points", c.Points);
        Numbers(w, "middle", [c.Middle.X, c.Middle.Y]);
    }

    private static void Write(Utf8JsonWriter w, LiveLaw law)
    {
        w.WriteNumber("axis", law.Axis);
        Numbers(w, "zero", [law.AtZeroField.Aa, law.AtZeroField.Ab, law.AtZeroField.Ba, law.AtZeroField.Bb]);
        w.WriteNumber("first", law.First);
        w.WriteNumber("step", law.Step);
        w.WriteNumber("count", law.Degree < 0 ? 0 : law.Count);
        w.WriteNumber("degree", law.Degree);
        w.WriteNumber("error", law.Error);
        w.WriteBase64String("table", MemoryMarshal.AsBytes<double>(law.Table));
    }

    private void Write(Utf8JsonWriter w, LiveMap map)
    {
        w.WriteString("id", map.Id);
        w.WriteString("title", map.Title);
        w.WriteString("by", map.By);
        w.WriteString("unit", map.Unit);
        w.WriteNumber("mesh", map.Mesh);
        w.WriteNumber("law", map.Law);
        w.WriteNumber("direction", map.Direction);
        w.WriteString("note", map.Note);
        WriteOutline(w, map.Rim, map.Contacts);

        // A cycle passes most currents twice.
        int[] same = [.. map.Frames.Select((f, at) => Enumerable.Range(0, at)
            .FirstOrDefault(k => ReferenceEquals(map.Frames[k].Potential, f.Potential) && map.Frames[k].Turn == f.Turn, -1))];
        int[] own = [.. Enumerable.Range(0, same.Length).Where(k => same[k] < 0)];
        PackedFrame[] packed = FramePacker.Pack(Meshes[map.Mesh], [.. own.Select(k => map.Frames[k].Potential)]);
        int at = 0;
        Array(w, "frames", map.Frames, (w, f) =>
        {
            w.WriteString("label", f.Label);
            w.WriteNumber("value", f.Value);
            Numbers(w, "metal", f.Metal);
            if (f.Turn != 0)
            {
                w.WriteNumber("turn", f.Turn);
            }

            if (f.Roles is not null)
            {
                Words(w, "roles", f.Roles);
            }

            int number = at++;
            if (same[number] >= 0)
            {
                w.WriteNumber("same", same[number]);
                return;
            }

            PackedFrame frame = packed[System.Array.IndexOf(own, number)];
            w.WriteNumber("low", frame.Low);
            w.WriteNumber("high", frame.High);
            if (frame.Bytes is { } bytes)
            {
                w.WriteStartArray("from");
                foreach (int k in frame.From)
                {
                    w.WriteNumberValue(own[k]);
                }

                w.WriteEndArray();
                Numbers(w, "by", frame.By);
                w.WriteNumber("plus", frame.Plus);
                w.WriteBoolean("smooth", frame.Smooth);
                w.WriteBase64String("rest", bytes);
                w.Flush();
            }
        });
    }

    internal static void WriteOutline(Utf8JsonWriter w, IReadOnlyList<double[]> rim, IReadOnlyList<LiveContact> contacts)
    {
        w.WriteStartArray("rim");
        foreach (double[] loop in rim)
        {
            Values(w, loop);
        }

        w.WriteEndArray();
        Array(w, "contacts", contacts, Write);
    }

    private static void Write(Utf8JsonWriter w, LiveChart chart)
    {
        w.WriteString("id", chart.Id);
        w.WriteString("title", chart.Title);
        w.WriteString("note", chart.Note);
        Array(w, "views", chart.Views, (w, v) =>
        {
            w.WriteString("label", v.Label);
            w.WriteString("x", v.X);
            w.WriteString("xUnit", v.XUnit);
            w.WriteString("y", v.Y);
            w.WriteString("yUnit", v.YUnit);
            w.WriteString("kind", v.Kind);
            w.WriteString("errorName", v.ErrorName);
            w.WriteBoolean("logarithmic", v.Logarithmic);
            Words(w, "categories", v.Categories);
            Array(w, "marks", v.Marks, (w, m) =>
            {
                w.WriteNumber("x", m.X);
                w.WriteString("name", m.Name);
            });
            Array(w, "series", v.Series, (w, s) =>
            {
                w.WriteString("name", s.Name);
                w.WriteNumber("look", s.Look);
                Numbers(w, "x", s.X);
                Numbers(w, "y", s.Y);
                Numbers(w, "error", s.Error);
                w.WriteStartArray("doubtful");
                for (int k = 0; k < s.Doubtful.Length; k++)
                {
                    w.WriteNumberValue(s.Doubtful[k] ? 1 : 0);
                }

                w.WriteEndArray();
                if (s.Map is not null)
                {
                    w.WriteString("map", s.Map);
                    w.WriteStartArray("frame");
                    foreach (int f in s.Frame)
                    {
                        w.WriteNumberValue(f);
                    }

                    w.WriteEndArray();
                }

                if (s.Line is { } line)
                {
                    Numbers(w, "line", [line.Slope, line.Intercept]);
                }

                if (s.LineText.Length > 0)
                {
                    w.WriteString("lineText", s.LineText);
                }

                if (s.Curve is { } curve)
                {
                    w.WriteStartArray("curve");
                    Values(w, curve.X);
                    Values(w, curve.Y);
                    w.WriteEndArray();
                }
            });
        });
    }

    internal static void Array<T>(Utf8JsonWriter w, string name, IEnumerable<T> items, Action<Utf8JsonWriter, T> write)
    {
        w.WriteStartArray(name);
        foreach (T item in items)
        {
            w.WriteStartObject();
            write(w, item);
            w.WriteEndObject();
        }

        w.WriteEndArray();
    }

    internal static void Words(Utf8JsonWriter w, string name, IEnumerable<string?> words)
    {
        w.WriteStartArray(name);
        foreach (string? word in words)
        {
            w.WriteStringValue(word);
        }

        w.WriteEndArray();
    }

    internal static void Numbers(Utf8JsonWriter w, string name, double[] values)
    {
        w.WritePropertyName(name);
        Values(w, values);
    }

    // JSON knows no NaN and no infinity: null stands for them.
    internal static void Values(Utf8JsonWriter w, double[] values)
    {
        w.WriteStartArray();
        foreach (double v in values)
        {
            if (double.IsFinite(v))
            {
                w.WriteNumberValue(v);
            }
            else
            {
                w.WriteNullValue();
            }
        }

        w.WriteEndArray();
    }
}
