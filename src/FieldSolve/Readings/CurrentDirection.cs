using FieldSolve.Device;
using FieldSolve.Geometry;

namespace FieldSolve.Readings;

/// <summary>The direction of a wiring: from the middle of the source to the middle of the drain.</summary>
public static class CurrentDirection
{
    /// <summary>Angle in the lab frame, degrees, 0 to 360; 0 where the two middles coincide.</summary>
    public static double Degrees(SheetDevice device, Wiring wiring)
    {
        Point2 direction = Vector(device, wiring);

        // Places are known to rounding only: 360.0000000000001 degrees is 0.
        double degrees = Math.Round(Math.Atan2(direction.Y, direction.X) * 180 / Math.PI, 9);
        return degrees < 0 ? degrees + 360 : degrees == 0 ? 0 : degrees;
    }

    /// <summary>The vector from source to drain, metres.</summary>
    public static Point2 Vector(SheetDevice device, Wiring wiring)
    {
        ArgumentNullException.ThrowIfNull(device);
        ArgumentNullException.ThrowIfNull(wiring);
        Point2 direction = Centre(device.Contacts[wiring.Drain]) - Centre(device.Contacts[wiring.Source]);

        // Middles that coincide do so to rounding, which has no direction.
        return direction.Length > 1e-9 * device.Domain.Size ? direction : default;
    }

    // A rim that is all metal has no side: its middle is that of the whole loop.
    private static Point2 Centre(Contact contact)
    {
        bool closed = contact.Kind == ContactKind.Edge && contact.Shape[0].Start == contact.Shape[^1].End;
        return closed ? (1.0 / contact.Shape.Count) * contact.Shape.Aggregate(default(Point2), (sum, c) => sum + c.At(0.5)) : contact.Middle;
    }
}
