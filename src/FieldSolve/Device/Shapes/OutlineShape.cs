using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A sheet whose rim is the first polygon of a GeoJSON or WKT file, or stands as lists of corners; its holes are holes of the sheet.</summary>
internal sealed class OutlineShape : ISheetShape
{
    private const string Corners = "[[\"0 um\", \"0 um\"], [\"9 um\", \"0 um\"], [\"5 um\", \"7 um\"]]";

    public string Key => "outline";

    public string Example => "{ file = \"flake.geojson\", unit = \"um\" }";

    public SheetPlan? Read(Section section, FileSource files)
    {
        TomlEntry? corners = section.Take("corners"), holes = section.Take("holes");
        if (corners is not null)
        {
            return Own(section, corners, holes);
        }

        if (holes is not null)
        {
            section.Faults.Add(holes.At, "'holes' goes with 'corners'; the holes of a file's polygon are read from the file");
        }

        TomlText? file = section.Text("file", "flake.geojson", required: true);
        Unit? unit = PolygonFile.ReadUnit(section.Text("unit", "um", required: true), section.Faults);
        IReadOnlyList<PolygonFeature>? polygons = file is null ? null : PolygonFile.Read(file, files, section.Faults);
        return polygons is null || unit is not { } u || PolygonFile.InMetres(polygons[0], u, file!.At, "the outline", section.Faults) is not { } rings
            ? null
            : Plan(rings, u, file.At, $"the outline in '{Values.Short(file.Value)}'", section.Faults);
    }

    // The unit is then only that of files of pads.
    private SheetPlan? Own(Section section, TomlEntry corners, TomlEntry? holes)
    {
        TomlText? unitText = section.Text("unit", "um", required: false);
        Unit? unit = PolygonFile.ReadUnit(unitText, section.Faults);
        if (section.Take("file") is { } file)
        {
            section.Faults.Add(file.At, "an outline stands in a file or as 'corners', and both are given; remove one");
            return null;
        }

        List<IReadOnlyList<Point2>?> rings = [Ring(corners.Value, "'corners'", section.Faults)];
        if (holes?.Value is TomlArray { OfTables: false } list)
        {
            rings.AddRange(list.Items.Select(h => Ring(h, "'holes'", section.Faults)));
        }
        else if (holes is not null)
        {
            section.Faults.Add(holes.Value.At, $"'holes' is {holes.Value.Kind}; write a list of holes, each a list of corners, for example [{Corners}]");
            return null;
        }

        return rings.Any(r => r is null) || (unitText is not null && unit is null) ? null : Plan([.. rings.Select(r => r!)], unit, corners.Value.At, "the outline", section.Faults);
    }

    private static List<Point2>? Ring(TomlValue value, string what, FaultList faults)
    {
        if (value is TomlArray { OfTables: false } list)
        {
            return CornerList.Read(list, what, $"{what}: at least three corners are needed, for example {Corners}", faults);
        }

        faults.Add(value.At, $"{what} is {value.Kind}; write a list of corners, for example {Corners}");
        return null;
    }

    private SheetPlan? Plan(IReadOnlyList<IReadOnlyList<Point2>> rings, Unit? unit, Place at, string called, FaultList faults)
    {
        Outline drawn = new([.. rings.Select(OutlinePolygons.Segments)]);
        IReadOnlyList<LayoutProblem> problems = drawn.Validate();
        foreach (LayoutProblem p in problems)
        {
            faults.Add(at, $"{called}: {p.Message}, at {Values.Point(p.At)}");
        }

        return problems.Count > 0 ? null : new SheetPlan(Key, drawn) { FileUnit = unit };
    }
}
