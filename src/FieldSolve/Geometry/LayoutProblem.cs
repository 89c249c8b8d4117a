namespace FieldSolve.Geometry;

/// <summary>Something wrong with an outline.</summary>
/// <param name="Message">What is wrong, without the place, in plain words.</param>
/// <param name="At">Where, metres.</param>
public sealed record LayoutProblem(string Message, Point2 At);
