using System.Globalization;
using System.Text;
using System.Text.Json;
using FieldSolve.Geometry;

namespace FieldSolve.Device;

/// <summary>Polygons of a GeoJSON text (RFC 7946): of a geometry, a feature or a collection of features; other geometries are passed over.</summary>
internal static class GeoJsonPolygons
{
    public static IReadOnlyList<PolygonFeature> Read(string text)
    {
        try
        {
            using JsonDocument document = JsonDocument.Parse(text);
            List<PolygonFeature> polygons = [];
            Collect(document.RootElement, null, polygons);
            return polygons;
        }
        catch (JsonException e)
        {
            int end = e.Message.IndexOf(" LineNumber:", StringComparison.Ordinal);
            throw new PolygonFileException("not valid JSON: " + (end < 0 ? e.Message : e.Message[..end]), PlaceOf(text, e.LineNumber ?? 0, e.BytePositionInLine ?? 0));
        }
        catch (InvalidOperationException)
        {
            // The JSON reader refuses to decode half a surrogate pair.
            throw new PolygonFileException("a text in it is not valid Unicode");
        }
    }

    private static void Collect(JsonElement e, string? name, List<PolygonFeature> polygons)
    {
        if (e.ValueKind != JsonValueKind.Object || !e.TryGetProperty("type", out JsonElement type) || type.ValueKind != JsonValueKind.String)
        {
            throw new PolygonFileException("this is no GeoJSON: an object has no \"type\"");
        }

        switch (type.GetString())
        {
            case "FeatureCollection":
                foreach (JsonElement f in Items(e, "features"))
                {
                    Collect(f, null, polygons);
                }

                break;
            case "GeometryCollection":
                foreach (JsonElement g in Items(e, "geometries"))
                {
                    Collect(g, name, polygons);
                }

                break;
            case "Feature":
                if (e.TryGetProperty("geometry", out JsonElement geometry) && geometry.ValueKind != JsonValueKind.Null)
                {
                    Collect(geometry, NameOf(e), polygons);
                }

                break;
            case "Polygon":
                polygons.Add(Polygon(Items(e, "coordinates"), name));
                break;
            case "MultiPolygon":
                foreach (JsonElement rings in Items(e, "coordinates"))
                {
                    polygons.Add(Polygon(Elements(rings), name));
                }

                break;
        }
    }

    private static PolygonFeature Polygon(JsonElement.ArrayEnumerator rings, string? name)
    {
        List<IReadOnlyList<Point2>> read = [];
        foreach (JsonElement ring in rings)
        {
            List<Point2> points = [.. Elements(ring).Select(Position)];
            if (points.Count > 0 && points[0] != points[^1])
            {
                string whose = name is null ? "" : $" of '{Values.Short(name)}'";
                throw new PolygonFileException(string.Create(
                    CultureInfo.InvariantCulture, $"ring {read.Count + 1}{whose} is not closed; its last point must repeat its first"));
            }

            read.Add(points.Count == 0 ? points : points[..^1]);
        }

        return read.Count > 0 ? new(name, read) : throw new PolygonFileException("a polygon has no ring");
    }

    private static Point2 Position(JsonElement e)
    {
        if (e.ValueKind != JsonValueKind.Array || e.GetArrayLength() < 2)
        {
            throw new PolygonFileException("a corner must be a list of two numbers, for example [1.5, -2]");
        }

        return new(Number(e[0]), Number(e[1]));
    }

    private static double Number(JsonElement e) =>
        e.ValueKind == JsonValueKind.Number && e.TryGetDouble(out double value) && double.IsFinite(value)
            ? value
            : throw new PolygonFileException($"a coordinate is {Values.Short(e.GetRawText())}; it must be a finite number");

    private static string? NameOf(JsonElement feature) =>
        feature.TryGetProperty("properties", out JsonElement p) && p.ValueKind == JsonValueKind.Object
        && p.TryGetProperty("name", out JsonElement name) && name.ValueKind == JsonValueKind.String
            ? name.GetString()
            : null;

    private static JsonElement.ArrayEnumerator Items(JsonElement e, string key) =>
        e.TryGetProperty(key, out JsonElement list) ? Elements(list) : throw new PolygonFileException($"this is no GeoJSON: \"{key}\" is missing");

    private static JsonElement.ArrayEnumerator Elements(JsonElement e) =>
        e.ValueKind == JsonValueKind.Array ? e.EnumerateArray() : throw new PolygonFileException("this is no GeoJSON polygon: a list is missing");

    private static Place PlaceOf(string text, long line, long bytes)
    {
        int start = 0;
        for (long k = 0; k < line; k++)
        {
            start = text.IndexOf('\n', start) + 1;
        }

        int end = text.IndexOf('\n', start);
        byte[] utf8 = Encoding.UTF8.GetBytes(text[start..(end < 0 ? text.Length : end)]);
        int before = Encoding.UTF8.GetString(utf8, 0, (int)Math.Min(bytes, utf8.Length)).EnumerateRunes().Count();
        return new((int)line + 1, before + 1);
    }
}
