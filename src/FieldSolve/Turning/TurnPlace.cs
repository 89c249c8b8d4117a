using FieldSolve.Device;

namespace FieldSolve.Turning;

/// <summary>One direction to be solved: a wiring, and how far the crystal axis is turned from the file's.</summary>
/// <param name="Wiring">The wiring.</param>
/// <param name="DirectionDegrees">Of its current in the lab frame.</param>
/// <param name="TurnDegrees">Of the axis.</param>
internal sealed record TurnPlace(Wiring Wiring, double DirectionDegrees, double TurnDegrees)
{
    public double Turn => Degrees.ToRadians(TurnDegrees);

    public double AxisDegrees(SheetDevice device) => Degrees.Wrapped((device.Axis * 180 / Math.PI) + TurnDegrees);
}
