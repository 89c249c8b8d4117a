using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>The sheet between two circles about the origin.</summary>
internal sealed class RingShape : ISheetShape
{
    public string Key => "ring";

    public string Example => "{ inner = \"1 um\", outer = \"4 um\" }";

    public SheetPlan? Read(Section section, FileSource files)
    {
        double? inner = section.Quantity("inner", Dimension.Length, Range.Extent, required: true, "1 um");
        double? outer = section.Quantity("outer", Dimension.Length, Range.Extent, required: true, "4 um");
        if (inner is not { } a || outer is not { } b)
        {
            return null;
        }

        if (!(b > a * (1 + 1e-6)))
        {
            section.Faults.Add(section.Table.Find("outer")!.Value.At, $"the outer radius ({Values.Length(b)}) must be larger than the inner one ({Values.Length(a)})");
            return null;
        }

        return new SheetPlan(Key, new Outline([[DiscShape.Circle(b)], [DiscShape.Circle(a)]]))
        {
            IsRound = true,
            Rims = [("inner", 1), ("outer", 0)],
        };
    }
}
