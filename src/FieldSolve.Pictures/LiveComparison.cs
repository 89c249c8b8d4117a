using System.Buffers.Binary;
using System.Text.Json;

namespace FieldSolve.Pictures;

/// <summary>A measured map beside the computed one and their difference, as the page shows them with one cursor.</summary>
internal sealed class LiveComparison
{
    /// <summary>For saved pictures.</summary>
    public required string Title { get; init; }

    /// <summary>What is shown, for example "potential".</summary>
    public required string Quantity { get; init; }

    /// <summary>"V" or "V/m".</summary>
    public required string Unit { get; init; }

    /// <summary>The same as files have it: "V" or "V_per_m".</summary>
    public required string Column { get; init; }

    /// <summary>Name of the colours of the first two maps.</summary>
    public required string Table { get; init; }

    /// <summary>Ends of their colours.</summary>
    public required (double From, double To) Span { get; init; }

    /// <summary>Ends of the residual's colours: in the unit, in standard deviations, and without what a patch adds.</summary>
    public required (double Own, double Sigma, double Others) Most { get; init; }

    /// <summary>A patch was found.</summary>
    public required bool HasPatch { get; init; }

    /// <summary>Index of the mesh.</summary>
    public required int Mesh { get; init; }

    /// <summary>What the probe would show at each node of the run.</summary>
    public required double[] Values { get; init; }

    /// <summary>Columns over the points: x, y, measured, computed, sigma, weight, share of the patch.</summary>
    public required IReadOnlyList<double[]> Points { get; init; }

    /// <summary>Line of each point in the table.</summary>
    public required int[] Lines { get; init; }

    /// <summary>How far around a point its colour reaches, metres.</summary>
    public required double Reach { get; init; }

    /// <summary>Places to ring: x, y, radius.</summary>
    public required IReadOnlyList<(double X, double Y, double Radius)> Places { get; init; }

    /// <summary>Loops of the rim.</summary>
    public required IReadOnlyList<double[]> Rim { get; init; }

    /// <summary>Contacts and tips.</summary>
    public required IReadOnlyList<LiveContact> Contacts { get; init; }

    /// <summary>A sentence below.</summary>
    public required string Note { get; init; }

    /// <summary>Writes it as an object of the data block.</summary>
    public void Write(Utf8JsonWriter w, LiveMesh mesh)
    {
        w.WriteStartObject();
        w.WriteString("title", Title);
        w.WriteString("quantity", Quantity);
        w.WriteString("unit", Unit);
        w.WriteString("column", Column);
        w.WriteString("table", Table);
        w.WriteString("note", Note);
        w.WriteNumber("from", Span.From);
        w.WriteNumber("to", Span.To);
        w.WriteNumber("most", Most.Own);
        w.WriteNumber("mostSigma", Most.Sigma);
        w.WriteNumber("mostRest", Most.Others);
        w.WriteBoolean("hasPatch", HasPatch);
        w.WriteNumber("mesh", Mesh);
        (byte[] bytes, double low, double high) = mesh.Pack(Values);
        w.WriteNumber("low", low);
        w.WriteNumber("high", high);
        w.WriteBase64String("values", bytes);
        w.WriteNumber("count", Lines.Length);
        w.WriteBase64String("points", Doubles(Points));
        w.WriteStartArray("lines");
        foreach (int line in Lines)
        {
            w.WriteNumberValue(line);
        }

        w.WriteEndArray();
        w.WriteNumber("reach", Reach);
        w.WriteStartArray("places");
        foreach ((double x, double y, double radius) in Places)
        {
            w.WriteStartObject();
            w.WriteNumber("x", x);
            w.WriteNumber("y", y);
            w.WriteNumber("radius", radius);
            w.WriteEndObject();
        }

        w.WriteEndArray();
        LiveData.WriteOutline(w, Rim, Contacts);
        w.WriteEndObject();
    }

    private static byte[] Doubles(IReadOnlyList<double[]> columns)
    {
        byte[] bytes = new byte[8 * columns.Sum(c => c.Length)];
        int at = 0;
        foreach (double v in columns.SelectMany(c => c))
        {
            BinaryPrimitives.WriteDoubleLittleEndian(bytes.AsSpan(at), v);
            at += 8;
        }

        return bytes;
    }
}
