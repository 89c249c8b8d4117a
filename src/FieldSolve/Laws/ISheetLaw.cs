namespace FieldSolve.Laws;

/// <summary>
/// Sheet current density K (A/m) as a function of the local field E (V/m), in the crystal frame (axes a and b).
/// Immutable; safe to use from several threads. Laws work on batches of points, so that a kernel pays one virtual call per batch.
/// </summary>
public interface ISheetLaw
{
    /// <summary>Name of the law in the device file, for example "quadratic".</summary>
    string Kind { get; }

    /// <summary>True when K is proportional to E; one solve then serves every current.</summary>
    bool IsLinear { get; }

    /// <summary>
    /// True when K is the gradient of a potential of E, that is when dK/dE is symmetric at every field, the guard's continuation included. A law that
    /// is not sure says no: that costs time, not digits.
    /// </summary>
    bool HasPotential { get; }

    /// <summary>The differential tensor dK/dE at zero field, siemens per square.</summary>
    Tensor2 AtZeroField { get; }

    /// <summary>
    /// How the law is continued where the symmetric part of dK/dE would lose definiteness; null when it never does.
    /// The two Evaluate methods include the guard; <see cref="EvaluatePure"/> does not.
    /// </summary>
    FieldGuard? Guard { get; }

    /// <summary>K at each field. All spans have the same length.</summary>
    /// <exception cref="FieldOutsideTableException">A table law was asked beyond its grid.</exception>
    void Evaluate(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb);

    /// <summary>K and its exact derivative dK/dE at each field: daa = dKa/dEa, dab = dKa/dEb and so on.</summary>
    /// <exception cref="FieldOutsideTableException">A table law was asked beyond its grid.</exception>
    void Evaluate(
        ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb,
        Span<double> daa, Span<double> dab, Span<double> dba, Span<double> dbb);

    /// <summary>K of the law as written, without the guard.</summary>
    /// <exception cref="FieldOutsideTableException">A table law was asked beyond its grid.</exception>
    void EvaluatePure(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb);
}
