namespace FieldSolve.Geometry;

/// <summary>A stretch of one loop of the rim, in the loop's direction. It may run across the loop's first point.</summary>
/// <param name="Loop">Index of the loop; 0 is the outer one.</param>
/// <param name="From">Arc length of its start, metres, in [0, loop length).</param>
/// <param name="Length">Its length, metres, above 0; the loop's own length means the whole loop.</param>
public readonly record struct RimSpan(int Loop, double From, double Length);
