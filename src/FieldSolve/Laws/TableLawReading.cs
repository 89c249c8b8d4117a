namespace FieldSolve.Laws;

/// <summary>What came of reading a law's table: a law, or the faults that forbid it.</summary>
/// <param name="Law">The law as written; null when there are faults.</param>
/// <param name="Faults">All faults, in the order of their places; empty when the table is good.</param>
public sealed record TableLawReading(TableLaw? Law, IReadOnlyList<LawFileFault> Faults);
