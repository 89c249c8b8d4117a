namespace FieldSolve.Runs;

/// <summary>How far a run has come.</summary>
/// <param name="Stage">What is being done, for example "mesh level 2: 12,000 triangles".</param>
/// <param name="Done">Rows finished.</param>
/// <param name="Total">Rows in all; 0 while not known.</param>
public readonly record struct RunProgress(string Stage, int Done, int Total);
