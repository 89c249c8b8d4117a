namespace FieldSolve.Readings;

/// <summary>Straight line through the origin region: V_across_even = Slope V_along_odd² + Intercept.</summary>
/// <param name="Slope">1/V.</param>
/// <param name="SlopeError">Standard error of the slope from the scatter of the points, 1/V.</param>
/// <param name="Intercept">V.</param>
/// <param name="RSquared">Share of the variance that the line explains, 0 to 1.</param>
/// <param name="Points">Number of rows used.</param>
public sealed record EvenSlope(double Slope, double SlopeError, double Intercept, double RSquared, int Points);

/// <summary>What a drive says about one wiring.</summary>
/// <param name="Wiring">Name.</param>
/// <param name="DirectionDegrees">Angle of the vector from source to drain, 0 to 360; 0 without <see cref="HasDirection"/>.</param>
/// <param name="TwoTerminal">V_source / I at the smallest non-zero current, ohm; null when there is none.</param>
/// <param name="Along">V_along / I there, ohm.</param>
/// <param name="Across">V_across / I there, ohm.</param>
/// <param name="Slope">Line through the even across voltage against the squared odd along voltage; null when it cannot be had.</param>
/// <param name="LeftLawAt">Smallest current at which the law was left (status outside-law), A; null if never.</param>
/// <param name="Largest">Largest |current| solved, A.</param>
public sealed record WiringSummary(
    string Wiring, double DirectionDegrees, double? TwoTerminal, double? Along, double? Across, EvenSlope? Slope,
    double? LeftLawAt, double Largest)
{
    /// <summary>False where the middles of source and drain coincide, as with the two rims of a ring: the current has no one direction then.</summary>
    public bool HasDirection { get; init; } = true;
}
