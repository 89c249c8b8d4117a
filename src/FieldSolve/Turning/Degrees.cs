namespace FieldSolve.Turning;

/// <summary>Angles on the circle.</summary>
public static class Degrees
{
    /// <summary>The same angle between 0 and 360, free of the rounding of a difference.</summary>
    public static double Wrapped(double degrees)
    {
        double wrapped = Math.Round(degrees - (360 * Math.Floor(degrees / 360)), 9);
        return wrapped is >= 360 or 0 ? 0 : wrapped;
    }

    /// <summary>Distance of two angles on the circle, 0 to 180.</summary>
    public static double Apart(double a, double b)
    {
        double difference = Wrapped(a - b);
        return Math.Min(difference, 360 - difference);
    }

    internal static double ToRadians(double degrees) => degrees * Math.PI / 180;
}
