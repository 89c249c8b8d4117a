using System.Buffers;

namespace FieldSolve.Sparse;

/// <summary>Solves with one step of iterative refinement in working precision, and tells how well the result fits.</summary>
/// <remarks>
/// R. D. Skeel, Iterative refinement implies numerical stability for Gaussian elimination, Math. Comp. 35 (1980) 817-832.
/// </remarks>
public static class Refinement
{
    /// <summary>Solves A x = b, corrects x once with the residual, and keeps the better of the two.</summary>
    /// <param name="pattern">Places of A.</param>
    /// <param name="values">One value per place: the matrix whose factor is given (or one close to it).</param>
    /// <param name="lu">Factor of A.</param>
    /// <param name="b">Right-hand side, one value per row.</param>
    /// <param name="x">Solution; must not overlap <paramref name="b"/>.</param>
    /// <returns>‖b − A x‖₂ / ‖b‖₂ of the returned x; 0 for b = 0.</returns>
    public static double RefinedSolve(
        SymmetricPattern pattern, ReadOnlySpan<double> values, SparseLu lu, ReadOnlySpan<double> b, Span<double> x) =>
        Run(pattern, values, lu, b, x, transposed: false);

    /// <summary>Solves Aᵀ x = b, corrects x once with the residual, and keeps the better of the two.</summary>
    /// <param name="pattern">Places of A.</param>
    /// <param name="values">One value per place: the matrix whose factor is given (or one close to it).</param>
    /// <param name="lu">Factor of A.</param>
    /// <param name="b">Right-hand side, one value per column of A.</param>
    /// <param name="x">Solution; must not overlap <paramref name="b"/>.</param>
    /// <returns>‖b − Aᵀ x‖₂ / ‖b‖₂ of the returned x; 0 for b = 0.</returns>
    public static double RefinedSolveTransposed(
        SymmetricPattern pattern, ReadOnlySpan<double> values, SparseLu lu, ReadOnlySpan<double> b, Span<double> x) =>
        Run(pattern, values, lu, b, x, transposed: true);

    private static double Run(
        SymmetricPattern pattern, ReadOnlySpan<double> values, SparseLu lu, ReadOnlySpan<double> b, Span<double> x, bool transposed)
    {
        ArgumentNullException.ThrowIfNull(pattern);
        ArgumentNullException.ThrowIfNull(lu);
        if (b.Overlaps(x))
        {
            throw new ArgumentException("The solution must not overlap the right-hand side: the residual needs both.", nameof(x));
        }
        int n = pattern.Size;
        double[] rented = ArrayPool<double>.Shared.Rent(2 * n);
        try
        {
            Span<double> residual = rented.AsSpan(0, n), better = rented.AsSpan(n, n);
            Apply(lu, b, x, transposed);
            double scale = Norm(b);
            if (scale == 0)
            {
                return 0;
            }
            double before = Residual(pattern, values, b, x, residual, transposed);
            Apply(lu, residual, better, transposed);
            for (int i = 0; i < n; i++)
            {
                better[i] += x[i];
            }
            double after = Residual(pattern, values, b, better, residual, transposed);
            if (after < before)
            {
                better.CopyTo(x);
                return after / scale;
            }
            return before / scale;
        }
        finally
        {
            ArrayPool<double>.Shared.Return(rented);
        }
    }

    private static void Apply(SparseLu lu, ReadOnlySpan<double> b, Span<double> x, bool transposed)
    {
        if (transposed)
        {
            lu.SolveTransposed(b, x);
        }
        else
        {
            lu.Solve(b, x);
        }
    }

    private static double Residual(
        SymmetricPattern pattern, ReadOnlySpan<double> values, ReadOnlySpan<double> b, ReadOnlySpan<double> x, Span<double> r, bool transposed)
    {
        if (transposed)
        {
            SparseProduct.MultiplyTransposed(pattern, values, x, r);
        }
        else
        {
            SparseProduct.Multiply(pattern, values, x, r);
        }
        for (int i = 0; i < r.Length; i++)
        {
            r[i] = b[i] - r[i];
        }
        return Norm(r);
    }

    // Scaled by the largest entry, so that squares neither overflow nor vanish.
    private static double Norm(ReadOnlySpan<double> v)
    {
        double largest = 0;
        foreach (double t in v)
        {
            largest = Math.Max(largest, Math.Abs(t));
        }
        if (largest == 0 || !double.IsFinite(largest))
        {
            return largest;
        }
        double sum = 0;
        foreach (double t in v)
        {
            sum += t / largest * (t / largest);
        }
        return largest * Math.Sqrt(sum);
    }
}
