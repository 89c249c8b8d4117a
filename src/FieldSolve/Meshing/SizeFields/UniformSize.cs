namespace FieldSolve.Meshing.SizeFields;

/// <summary>The same edge length everywhere.</summary>
public sealed class UniformSize : ISizeField
{
    private readonly double size;

    /// <summary>Edge length in metres.</summary>
    /// <exception cref="ArgumentOutOfRangeException">The length is not finite and positive.</exception>
    public UniformSize(double size)
    {
        if (!(size > 0) || double.IsInfinity(size))
        {
            throw new ArgumentOutOfRangeException(nameof(size), size, "The edge length must be finite and greater than zero.");
        }

        this.size = size;
    }

    /// <inheritdoc/>
    public double At(double x, double y) => size;
}
