using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>Reads the polygon of a pad, from the device file or from a file of polygons.</summary>
internal sealed class PadReader(SheetReading sheet, FileSource files, FaultList faults)
{
    private const string Example = "[[\"1 um\", \"1 um\"], [\"3 um\", \"1 um\"], [\"2 um\", \"3 um\"]] or { file = \"pads.geojson\", name = \"w\" }";

    /// <summary>The corners in metres, not repeated at the end; null, with faults, if they are no good.</summary>
    public IReadOnlyList<Point2>? Read(TomlEntry pad)
    {
        switch (pad.Value)
        {
            case TomlArray { OfTables: false } list:
                return CornerList.Read(list, "'pad'", $"a pad needs at least three corners, for example {Example}", faults);
            case TomlTable table:
                Section section = new(table, "'pad'", faults);
                IReadOnlyList<Point2>? corners = FromFile(section);
                section.Finish();
                return corners;
            default:
                faults.Add(pad.Value.At, $"'pad' is {pad.Value.Kind}; write a list of corners or a file: {Example}");
                return null;
        }
    }

    private IReadOnlyList<Point2>? FromFile(Section section)
    {
        TomlText? file = section.Text("file", "pads.geojson", required: true);
        TomlText? name = section.Text("name", "w", required: true);
        TomlText? unitText = section.Text("unit", "um", required: false);
        Unit? unit = section.Take("unit") is null ? sheet.Plan?.FileUnit : PolygonFile.ReadUnit(unitText, faults);
        if (section.Take("unit") is null && sheet.Plan is { FileUnit: null })
        {
            section.MissingUnlessMisspelt("'pad' needs 'unit', the unit of the file's coordinates, for example unit = \"um\"", "unit");
        }

        if (file is null || PolygonFile.Read(file, files, faults) is not { } polygons || name is null)
        {
            return null;
        }

        PolygonFeature? pad = polygons.FirstOrDefault(p => p.Name == name.Value);
        if (pad is null)
        {
            string[] names = [.. polygons.Select(p => p.Name).OfType<string>()];
            faults.Add(name.At, $"the file '{Values.Short(file.Value)}' has no polygon named '{Values.Short(name.Value)}'{Suggest.Hint(name.Value, names)}");
            return null;
        }

        if (pad.Rings.Count > 1)
        {
            faults.Add(name.At, $"the pad '{Values.Short(name.Value)}' has holes; a pad is one polygon without holes");
            return null;
        }

        return unit is { } u ? PolygonFile.InMetres(pad, u, name.At, $"the pad '{Values.Short(name.Value)}'", faults)?[0] : null;
    }
}
