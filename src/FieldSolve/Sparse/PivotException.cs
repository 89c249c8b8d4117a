using System.Globalization;

namespace FieldSolve.Sparse;

/// <summary>
/// A pivot of the factorisation is not finite, not positive, or negligible beside the diagonal it came from: the symmetric part
/// of the matrix is not positive definite, or the matrix is singular to working precision.
/// </summary>
/// <param name="unknown">Row of the matrix, in the caller's numbering.</param>
/// <param name="pivot">The pivot found; may be NaN or infinite.</param>
public sealed class PivotException(int unknown, double pivot) : Exception(string.Create(CultureInfo.InvariantCulture,
    $"The matrix has no positive definite symmetric part, or is singular: pivot {pivot:G6} at unknown {unknown}."))
{
    /// <summary>Row of the matrix, in the caller's numbering.</summary>
    public int Unknown { get; } = unknown;

    /// <summary>The pivot found; may be NaN or infinite.</summary>
    public double Pivot { get; } = pivot;
}
