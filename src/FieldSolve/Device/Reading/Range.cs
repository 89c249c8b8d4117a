namespace FieldSolve.Device;

/// <summary>Which finite numbers a key takes.</summary>
/// <param name="Least">Smallest number.</param>
/// <param name="Most">Largest number.</param>
/// <param name="Text">In words, to follow "must be".</param>
internal readonly record struct Range(double Least, double Most, string Text)
{
    /// <summary>Lengths beyond this are slips of the unit; squares of far larger ones would overflow.</summary>
    private const double LongestLength = 1000;

    private const double ShortestLength = 1e-15;

    private const double MostTurns = 1000;

    public static Range Any { get; } = new(double.MinValue, double.MaxValue, "finite");

    /// <summary>An angle, radians: a thousand turns are a slip, and beyond far more the direction is lost in rounding.</summary>
    public static Range Angle { get; } = new(-MostTurns * 2 * Math.PI, MostTurns * 2 * Math.PI, "at most 360000 deg either way");

    public static Range Positive { get; } = new(double.Epsilon, double.MaxValue, "greater than zero");

    public static Range NonNegative { get; } = new(0, double.MaxValue, "zero or greater");

    /// <summary>A co-ordinate or a shift, metres.</summary>
    public static Range Coordinate { get; } = new(-LongestLength, LongestLength, "at most 1 km either way");

    /// <summary>A width or a diameter, metres.</summary>
    public static Range Extent { get; } = new(ShortestLength, LongestLength, "greater than zero (1 fm to 1 km)");

    /// <summary>A width that may be zero, metres.</summary>
    public static Range Margin { get; } = new(0, LongestLength, "zero or greater (to 1 km)");

    public bool Allows(double value) => value >= Least && value <= Most;
}
