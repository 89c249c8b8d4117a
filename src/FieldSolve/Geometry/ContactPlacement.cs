namespace FieldSolve.Geometry;

/// <summary>
/// Where one contact sits: either along a stretch of rim or as a pad on the sheet; exactly one of the two is given.
/// Its index in the list it is part of is the contact's index.
/// </summary>
/// <param name="Span">The stretch of rim of an edge contact; null for a pad.</param>
/// <param name="Pad">Corners of a pad in metres, either way round, at least three, not repeated at the end; null for an edge contact.
/// A pad may reach beyond the sheet.</param>
/// <param name="IdealPad">True for a pad whose metal is at one potential, which is cut out of the sheet; false for a pad behind a
/// contact resistance, below which the sheet goes on. Unused for an edge contact.</param>
public sealed record ContactPlacement(RimSpan? Span, IReadOnlyList<Point2>? Pad, bool IdealPad);
