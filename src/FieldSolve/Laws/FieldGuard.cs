namespace FieldSolve.Laws;

/// <summary>
/// The continuation of a law beyond the field where the symmetric part of dK/dE would stop being positive definite.
/// With N(E) = K(E) - sE the part beyond the ohmic one, the guarded law is sE + N(g(|E|) E/|E|); g(F) = F up to
/// <paramref name="From"/> and then bends smoothly towards <paramref name="Limit"/>, so that K stays monotone at every field.
/// </summary>
/// <param name="From">Field in V/m up to which the law is used as written.</param>
/// <param name="Limit">Field in V/m that g never passes.</param>
public sealed record FieldGuard(double From, double Limit);
