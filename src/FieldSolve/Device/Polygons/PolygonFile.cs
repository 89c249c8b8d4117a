using System.Globalization;
using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>Reads polygons from GeoJSON (RFC 7946, taken as flat coordinates) or WKT (OGC Simple Features), told apart by the first character.</summary>
internal static class PolygonFile
{
    private const int MostCorners = 200_000;
    private const double FarthestCoordinate = 1000; // metres; beyond it the unit is a slip
    private const double SameCorner = 1e-9; // of the polygon's size

    /// <summary>All polygons of the file; null with a fault if it cannot be read or has none.</summary>
    public static IReadOnlyList<PolygonFeature>? Read(TomlText file, FileSource files, FaultList faults)
    {
        string? text = files.Read(file);
        if (text is null)
        {
            return null;
        }

        try
        {
            IReadOnlyList<PolygonFeature> polygons = text.AsSpan().TrimStart() is ['{', ..] ? GeoJsonPolygons.Read(text) : WktPolygons.Read(text);
            if (polygons.Count > 0)
            {
                return polygons;
            }

            faults.Add(file.At, $"the file '{Values.Short(file.Value)}' holds no polygon");
        }
        catch (PolygonFileException e) when (e.At is { } at)
        {
            faults.AddElsewhere(file.At, files.Shown(file.Value), at.Line, at.Column, e.Message);
        }
        catch (PolygonFileException e)
        {
            faults.Add(file.At, $"the file '{Values.Short(file.Value)}': {e.Message}");
        }

        return null;
    }

    /// <summary>The unit of a file's coordinates; null, with a fault unless absent, if it is no unit of length.</summary>
    public static Unit? ReadUnit(TomlText? text, FaultList faults)
    {
        if (text is null)
        {
            return null;
        }

        if (Unit.TryParse(text.Value, out Unit unit, out string? error) && unit.Dimension == Dimension.Length)
        {
            return unit;
        }

        faults.Add(text.At, $"'unit': \"{Values.Short(text.Value)}\" {(error is null ? "is no unit of length" : ": " + error)}; write for example \"um\"");
        return null;
    }

    /// <summary>Corners in metres, without coincident neighbours; null, with a fault, if there are under three or they lie absurdly far away.</summary>
    public static IReadOnlyList<IReadOnlyList<Point2>>? InMetres(PolygonFeature polygon, Unit unit, Place at, string what, FaultList faults)
    {
        if (polygon.Rings.Sum(r => r.Count) > MostCorners)
        {
            faults.Add(at, string.Create(CultureInfo.InvariantCulture, $"{what} has more than {MostCorners} corners; simplify it"));
            return null;
        }

        List<IReadOnlyList<Point2>> rings = [];
        foreach (IReadOnlyList<Point2> ring in polygon.Rings)
        {
            Point2[] points = [.. ring.Select(p => new Point2(unit.Of(p.X), unit.Of(p.Y)))];
            if (!points.All(p => Math.Abs(p.X) <= FarthestCoordinate && Math.Abs(p.Y) <= FarthestCoordinate))
            {
                faults.Add(at, $"{what} reaches beyond 1 km; is the unit right?");
                return null;
            }

            double size = points.Length == 0 ? 0 : Math.Max(points.Max(p => p.X) - points.Min(p => p.X), points.Max(p => p.Y) - points.Min(p => p.Y));
            List<Point2> corners = OutlinePolygons.Distinct(points, SameCorner * size);
            if (corners.Count < 3)
            {
                faults.Add(at, $"{(rings.Count == 0 ? what : "a hole in " + what)} has under three corners");
                return null;
            }

            rings.Add(corners);
        }

        return rings;
    }
}
