using FieldSolve.Geometry;
using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>A name to be written beside what it names.</summary>
/// <param name="Text">The name.</param>
/// <param name="Colour">Colour of the text.</param>
/// <param name="Anchors">Points the name may stand beside, metres, each with the direction to leave in (zero for any), the best first.</param>
/// <param name="Body">Closed outline inside which the name may stand when it fits, metres; empty for none.</param>
/// <param name="Keepout">True when the name belongs outside the sheet.</param>
internal sealed record NameTag(
    string Text, Color Colour, IReadOnlyList<(Point2 At, Point2 Outward)> Anchors, IReadOnlyList<Point2> Body, bool Keepout);
