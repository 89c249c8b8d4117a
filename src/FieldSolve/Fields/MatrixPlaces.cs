namespace FieldSolve.Fields;

/// <summary>Looks up where the entries of small dense blocks stand in the matrix's values.</summary>
internal sealed class MatrixPlaces(FieldSpace space)
{
    /// <summary>
    /// For unknowns g[0..m-1], the m*m places row by row; entries in the row or column of the zero of the potential go to a scrap place
    /// behind the last value.
    /// </summary>
    public int[] Of(ReadOnlySpan<int> group)
    {
        int[] place = new int[group.Length * group.Length];
        int[] start = space.Pattern.Start, column = space.Pattern.Column;
        for (int i = 0; i < group.Length; i++)
        {
            for (int j = 0; j < group.Length; j++)
            {
                place[(i * group.Length) + j] = group[i] >= space.Size || group[j] >= space.Size
                    ? column.Length
                    : Array.BinarySearch(column, start[group[i]], start[group[i] + 1] - start[group[i]], group[j]);
            }
        }

        return place;
    }
}
