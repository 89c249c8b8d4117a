namespace FieldSolve.Laws;

/// <summary>A table law was asked for a field beyond its grid.</summary>
public sealed class FieldOutsideTableException : Exception
{
    /// <summary>Makes the exception.</summary>
    /// <param name="index">Index of the point in the batch that was evaluated.</param>
    /// <param name="fieldA">E along crystal a, V/m.</param>
    /// <param name="fieldB">E along crystal b, V/m.</param>
    public FieldOutsideTableException(int index, double fieldA, double fieldB)
        : base(string.Create(
            System.Globalization.CultureInfo.InvariantCulture,
            $"The field ({fieldA:G6}, {fieldB:G6}) V/m along crystal a and b lies outside the law's table; extend the table or lower the drive."))
    {
        Index = index;
        FieldA = fieldA;
        FieldB = fieldB;
    }

    /// <summary>Index of the point in the batch that was evaluated.</summary>
    public int Index { get; }

    /// <summary>E along crystal a, V/m.</summary>
    public double FieldA { get; }

    /// <summary>E along crystal b, V/m.</summary>
    public double FieldB { get; }
}
