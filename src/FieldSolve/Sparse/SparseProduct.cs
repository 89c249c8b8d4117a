namespace FieldSolve.Sparse;

/// <summary>Products of a sparse matrix with vectors.</summary>
public static class SparseProduct
{
    /// <summary>y = A x.</summary>
    /// <param name="pattern">Places of the matrix.</param>
    /// <param name="values">One value per place of the pattern.</param>
    /// <param name="x">One value per column.</param>
    /// <param name="y">Result, one value per row; must not overlap <paramref name="x"/>.</param>
    /// <exception cref="ArgumentException">A length does not match the pattern.</exception>
    public static void Multiply(SymmetricPattern pattern, ReadOnlySpan<double> values, ReadOnlySpan<double> x, Span<double> y)
    {
        Check(pattern, values, x, y);
        int[] start = pattern.Start, column = pattern.Column;
        for (int i = 0; i < pattern.Size; i++)
        {
            double sum = 0;
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                sum += values[k] * x[column[k]];
            }
            y[i] = sum;
        }
    }

    /// <summary>y = Aᵀ x.</summary>
    /// <param name="pattern">Places of the matrix A.</param>
    /// <param name="values">One value per place of the pattern.</param>
    /// <param name="x">One value per row of A.</param>
    /// <param name="y">Result, one value per column of A; must not overlap <paramref name="x"/>.</param>
    /// <exception cref="ArgumentException">A length does not match the pattern.</exception>
    public static void MultiplyTransposed(SymmetricPattern pattern, ReadOnlySpan<double> values, ReadOnlySpan<double> x, Span<double> y)
    {
        Check(pattern, values, x, y);
        int[] start = pattern.Start, column = pattern.Column;
        y.Clear();
        for (int i = 0; i < pattern.Size; i++)
        {
            double xi = x[i];
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                y[column[k]] += values[k] * xi;
            }
        }
    }

    private static void Check(SymmetricPattern pattern, ReadOnlySpan<double> values, ReadOnlySpan<double> x, Span<double> y)
    {
        ArgumentNullException.ThrowIfNull(pattern);
        if (values.Length != pattern.Count)
        {
            throw new ArgumentException($"The pattern has {pattern.Count} places, but {values.Length} values were given.", nameof(values));
        }
        if (x.Length != pattern.Size || y.Length != pattern.Size)
        {
            throw new ArgumentException($"The matrix has {pattern.Size} rows, but the vectors have {x.Length} and {y.Length} entries.", nameof(x));
        }
        if (x.Overlaps(y))
        {
            throw new ArgumentException("The result must not overlap the factor.", nameof(y));
        }
    }
}
