namespace FieldSolve.Geometry;

/// <summary>Something wrong with where a contact or a tip sits.</summary>
/// <param name="Contact">Index of the contact; -1 where a tip alone is at fault.</param>
/// <param name="Tip">Index of the tip; -1 if it is about contacts.</param>
/// <param name="OtherContact">Index of the second contact, larger than <paramref name="Contact"/>; for a tip in a pad, the pad; else -1.</param>
/// <param name="Fault">What is wrong.</param>
/// <param name="At">Where, metres.</param>
public sealed record PlacementProblem(int Contact, int Tip, int OtherContact, PlacementFault Fault, Point2 At);
