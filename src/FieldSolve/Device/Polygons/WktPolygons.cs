using System.Globalization;
using FieldSolve.Geometry;

namespace FieldSolve.Device;

/// <summary>Polygons of a WKT text: POLYGON or MULTIPOLYGON (OGC 06-103r4, Simple Feature Access, section 7); heights are dropped.</summary>
internal sealed class WktPolygons
{
    private readonly string text;
    private int at;

    private WktPolygons(string text) => this.text = text;

    public static IReadOnlyList<PolygonFeature> Read(string text)
    {
        WktPolygons reader = new(text);
        List<PolygonFeature> polygons = [];
        bool many = reader.Header();
        if (!many)
        {
            polygons.Add(reader.Polygon());
        }
        else
        {
            reader.List(() => polygons.Add(reader.Polygon()));
        }

        return reader.Next() is '\0' or ';' ? polygons : throw reader.Expected("the end of the text");
    }

    /// <summary>True for a MULTIPOLYGON.</summary>
    private bool Header()
    {
        Place start = At();
        string word = Word();
        bool many = word.Equals("MULTIPOLYGON", StringComparison.OrdinalIgnoreCase);
        if (!many && !word.Equals("POLYGON", StringComparison.OrdinalIgnoreCase))
        {
            throw new PolygonFileException("this is neither GeoJSON nor WKT; expected POLYGON((x y, x y, …))", start);
        }

        start = At();
        if (Word().Equals("EMPTY", StringComparison.OrdinalIgnoreCase))
        {
            throw new PolygonFileException("the polygon is empty", start);
        }

        return many;
    }

    private PolygonFeature Polygon()
    {
        List<IReadOnlyList<Point2>> rings = [];
        List(() => rings.Add(Ring()));
        return new(null, rings);
    }

    private List<Point2> Ring()
    {
        List<Point2> points = [];
        _ = Next();
        Place start = At();
        List(() => points.Add(Position()));
        return points[0] == points[^1] ? points[..^1] : throw new PolygonFileException("the ring is not closed; its last point must repeat its first", start);
    }

    private Point2 Position()
    {
        Point2 p = new(Number(), Number());
        while (Next() is not (',' or ')' or '\0'))
        {
            _ = Number();
        }

        return p;
    }

    private double Number()
    {
        char first = Next();
        int start = at;
        while (at < text.Length && (char.IsAsciiLetterOrDigit(text[at]) || text[at] is '+' or '-' or '.'))
        {
            at++;
        }

        if (double.TryParse(text.AsSpan(start, at - start), NumberStyles.Float, CultureInfo.InvariantCulture, out double value) && double.IsFinite(value))
        {
            return value;
        }

        at = start;
        throw Expected(first == '\0' || char.IsPunctuation(first) ? "a number" : "a finite number");
    }

    private void List(Action item)
    {
        if (Next() != '(')
        {
            throw Expected("'('");
        }

        do
        {
            at++;
            item();
        }
        while (Next() == ',');

        if (Next() != ')')
        {
            throw Expected("',' or ')'");
        }

        at++;
    }

    private string Word()
    {
        _ = Next();
        int start = at;
        while (at < text.Length && char.IsAsciiLetter(text[at]))
        {
            at++;
        }

        return text[start..at];
    }

    private char Next()
    {
        while (at < text.Length && char.IsWhiteSpace(text[at]))
        {
            at++;
        }

        return at < text.Length ? text[at] : '\0';
    }

    private Place At()
    {
        _ = Next();
        int line = text.AsSpan(0, at).Count('\n') + 1;
        int start = at == 0 ? 0 : text.LastIndexOf('\n', at - 1) + 1;
        return new(line, at - start + 1);
    }

    private PolygonFileException Expected(string what) => new($"expected {what}", At());
}
