namespace FieldSolve.Sparse;

/// <summary>
/// Places of the non-zeros of a square matrix whose pattern is symmetric (both triangles and the whole diagonal are stored).
/// Compressed rows; the columns of a row are sorted. A matrix is such a pattern with one value per place.
/// </summary>
/// <param name="Start">Length n + 1: where each row begins in <paramref name="Column"/>.</param>
/// <param name="Column">Column indices, ascending within a row.</param>
public sealed record SymmetricPattern(int[] Start, int[] Column)
{
    /// <summary>Number of rows.</summary>
    public int Size => Start.Length - 1;

    /// <summary>Number of stored places.</summary>
    public int Count => Column.Length;
}
