namespace FieldSolve.Bands;

/// <summary>A measured table of conductance, or resistance, against direction.</summary>
/// <param name="Directions">From lab x, rad.</param>
/// <param name="Values">Per square: S, or ohm.</param>
/// <param name="Errors">Standard errors in the same unit, &gt; 0; null where the table gives none.</param>
/// <param name="IsResistance">
/// False: sheet conductance n·σ·n, K along n over E along n for a field along n. True: sheet resistance n·ρ·n, E along n over K
/// along n for a current along n.
/// </param>
public sealed record MeasuredProfile(IReadOnlyList<double> Directions, IReadOnlyList<double> Values, IReadOnlyList<double>? Errors, bool IsResistance);
