using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A disc about the origin.</summary>
internal sealed class DiscShape : ISheetShape
{
    public string Key => "disc";

    public string Example => "{ diameter = \"8 um\" }";

    public SheetPlan? Read(Section section, FileSource files) =>
        section.Quantity("diameter", Dimension.Length, Range.Extent, required: true, "8 um") is { } diameter
            ? new SheetPlan(Key, new Outline([[Circle(diameter / 2)]])) { IsRound = true }
            : null;

    internal static Curve Circle(double radius) => Curve.Arc(default, radius, 0, 2 * Math.PI);
}
