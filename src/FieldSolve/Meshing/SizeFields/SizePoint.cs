namespace FieldSolve.Meshing.SizeFields;

/// <summary>A place that wants small triangles.</summary>
/// <param name="X">Metres.</param>
/// <param name="Y">Metres.</param>
/// <param name="Size">Edge length at the place, metres.</param>
/// <param name="Growth">Increase of the edge length per distance from it; 0.1 is gentle, 0.5 is steep.</param>
public readonly record struct SizePoint(double X, double Y, double Size, double Growth);
