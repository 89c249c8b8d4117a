namespace FieldSolve.Device;

/// <summary>All sheet shapes in the order they are documented. A new shape is one file and one line here.</summary>
internal static class ShapeCatalogue
{
    public static IReadOnlyList<ISheetShape> Shapes { get; } =
    [
        new DiscShape(),
        new BarShape(),
        new HallBarShape(),
        new RingShape(),
        new OutlineShape(),
    ];
}
