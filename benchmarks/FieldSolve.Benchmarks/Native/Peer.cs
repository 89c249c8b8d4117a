namespace FieldSolve.Benchmarks.Native;

/// <summary>Processor seconds and sizes of one library on one matrix.</summary>
/// <param name="Analyse">Seconds, ordering included.</param>
/// <param name="Factor">Seconds of the numeric phase.</param>
/// <param name="Solve">Seconds of one solve without refinement.</param>
/// <param name="NonZeros">Non-zeros of L and U, or of L and its transpose.</param>
/// <param name="Bytes">Memory of the factor.</param>
/// <param name="PeakBytes">Most memory of analysis and numeric phase together; 0 where the library does not tell.</param>
internal sealed record Peer(double Analyse, double Factor, double Solve, double NonZeros, double Bytes, double PeakBytes);
