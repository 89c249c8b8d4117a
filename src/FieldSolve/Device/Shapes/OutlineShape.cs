using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A sheet whose rim is the first polygon of a GeoJSON or WKT file; its holes are holes of the sheet.</summary>
internal sealed class OutlineShape : ISheetShape
{
    public string Key => "outline";

    public string Example => "{ file = \"flake.geojson\", unit = \"um\" }";

    public SheetPlan? Read(Section section, FileSource files)
    {
        TomlText? file = section.Text("file", "flake.geojson", required: true);
        Unit? unit = PolygonFile.ReadUnit(section.Text("unit", "um", required: true), section.Faults);
        IReadOnlyList<PolygonFeature>? polygons = file is null ? null : PolygonFile.Read(file, files, section.Faults);
        if (polygons is null || unit is not { } u
            || PolygonFile.InMetres(polygons[0], u, file!.At, "the outline", section.Faults) is not { } rings)
        {
            return null;
        }

        Outline drawn = new([.. rings.Select(OutlinePolygons.Segments)]);
        IReadOnlyList<LayoutProblem> problems = drawn.Validate();
        foreach (LayoutProblem p in problems)
        {
            section.Faults.Add(file.At, $"the outline in '{Values.Short(file.Value)}': {p.Message}, at {Values.Point(p.At)}");
        }

        return problems.Count > 0 ? null : new SheetPlan(Key, drawn) { FileUnit = u };
    }
}
