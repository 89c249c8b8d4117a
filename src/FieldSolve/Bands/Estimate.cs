namespace FieldSolve.Bands;

/// <summary>A computed number with the estimated error of its quadrature.</summary>
/// <param name="Value">SI.</param>
/// <param name="Error">SI, ≥ 0; nothing of the model's own error is in it.</param>
public readonly record struct Estimate(double Value, double Error)
{
    /// <summary>No larger than its error: zero for all that is known.</summary>
    public bool IsZero => Math.Abs(Value) <= Error;
}
