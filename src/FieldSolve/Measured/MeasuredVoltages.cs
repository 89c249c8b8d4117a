using FieldSolve.Device;

namespace FieldSolve.Measured;

/// <summary>One measured voltage.</summary>
/// <param name="Circuit">Index of the circuit.</param>
/// <param name="Pair">Index of the pair in the circuit's list.</param>
/// <param name="Current">A: the current itself (DC) or its root mean square (harmonics).</param>
/// <param name="Harmonic">
/// Null for a DC voltage. Else a component of the voltage under I(t) = sqrt(2) I sin(wt), RMS: of an odd harmonic the one along sin(n wt), of an even one that along
/// cos(n wt), and 0 for the DC part. The other component of a sheet without delay is zero.
/// </param>
/// <param name="Value">V.</param>
/// <param name="Sigma">Standard deviation, V, greater than zero.</param>
/// <param name="Line">Line of the table.</param>
public sealed record MeasuredVoltage(int Circuit, int Pair, double Current, int? Harmonic, double Value, double Sigma, int Line);

/// <summary>What the voltages of one source and drain were read at.</summary>
/// <param name="Wiring">Source, drain and the pairs that were read (a wiring of the device file with the pairs that stand in the table, or one the table makes).</param>
/// <param name="Pairs">The pairs in the order of their first appearance; the pair "source" reads source less drain.</param>
public sealed record MeasuredCircuit(Wiring Wiring, IReadOnlyList<Pair> Pairs);

/// <summary>A table of measured voltages.</summary>
/// <param name="Path">As given.</param>
/// <param name="Sha256">Of the file's bytes.</param>
/// <param name="Circuits">Circuits.</param>
/// <param name="Data">In the order of the table.</param>
public sealed record MeasuredVoltages(string Path, string Sha256, IReadOnlyList<MeasuredCircuit> Circuits, IReadOnlyList<MeasuredVoltage> Data);
