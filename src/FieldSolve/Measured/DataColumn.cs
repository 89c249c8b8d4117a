using FieldSolve.Quantities;

namespace FieldSolve.Measured;

/// <summary>A column that a table of measured data may have.</summary>
/// <param name="Name">Without its unit, for example "value".</param>
/// <param name="Dimension">What its numbers measure; null for text, <see cref="Quantities.Dimension.None"/> for plain numbers.</param>
/// <param name="Example">A header, for example "value_V".</param>
internal sealed record DataColumn(string Name, Dimension? Dimension, string Example);
