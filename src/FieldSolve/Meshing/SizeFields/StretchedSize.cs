namespace FieldSolve.Meshing.SizeFields;

/// <summary>Another size field times a factor.</summary>
public sealed class StretchedSize : ISizeField
{
    private readonly ISizeField size;
    private readonly double factor;

    /// <summary>Wraps a size field.</summary>
    /// <param name="size">Edge lengths in metres.</param>
    /// <param name="factor">Positive and finite.</param>
    /// <exception cref="ArgumentOutOfRangeException">The factor is not positive and finite.</exception>
    public StretchedSize(ISizeField size, double factor)
    {
        ArgumentNullException.ThrowIfNull(size);
        if (!(factor > 0) || double.IsInfinity(factor))
        {
            throw new ArgumentOutOfRangeException(nameof(factor), factor, "The factor must be finite and greater than zero.");
        }

        (this.size, this.factor) = (size, factor);
    }

    /// <inheritdoc/>
    public double At(double x, double y) => factor * size.At(x, y);
}
