namespace FieldSolve.Measured;

/// <summary>A cell of a table with its place in the file.</summary>
/// <param name="Text">Without quotes and blanks around it.</param>
/// <param name="Line">Counted from 1.</param>
/// <param name="Column">In characters, counted from 1.</param>
internal readonly record struct DataCell(string Text, int Line, int Column);
