namespace FieldSolve.Geometry;

/// <summary>A place on the rim of an <see cref="Outline"/>.</summary>
/// <param name="Loop">Index of the loop; 0 is the outer one.</param>
/// <param name="S">Arc length from the loop's first point in the loop's direction, metres, in [0, loop length).</param>
/// <param name="Distance">Distance in metres from the point that was asked about; 0 where none was.</param>
public readonly record struct RimPlace(int Loop, double S, double Distance);
