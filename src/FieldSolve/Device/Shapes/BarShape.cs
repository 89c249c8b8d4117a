using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A rectangle about the origin, its length along x.</summary>
internal sealed class BarShape : ISheetShape
{
    public string Key => "bar";

    public string Example => "{ length = \"30 um\", width = \"6 um\" }";

    public SheetPlan? Read(Section section, FileSource files)
    {
        double? length = section.Quantity("length", Dimension.Length, Range.Extent, required: true, "30 um");
        double? width = section.Quantity("width", Dimension.Length, Range.Extent, required: true, "6 um");
        if (length is not { } l || width is not { } w)
        {
            return null;
        }

        double x = l / 2, y = w / 2;
        return new SheetPlan(Key, new Outline([OutlinePolygons.Segments([new(-x, -y), new(x, -y), new(x, y), new(-x, y)])]))
        {
            Ends = [("left", new(-x, 0)), ("right", new(x, 0))],
        };
    }
}
