using FieldSolve.Sparse;

namespace FieldSolve.Fields;

/// <summary>Finds which unknowns couple (those that share a triangle or a metal), and where the triangles' entries stand in the matrix.</summary>
internal static class UnknownPattern
{
    /// <summary>The pattern of the Jacobian, and 36 places per triangle: those of its 6 x 6 block, row by row.</summary>
    /// <remarks>
    /// Entries in the row or column of the zero of the potential have the place behind the last value.
    /// </remarks>
    public static (SymmetricPattern Pattern, int[] Places) Build(FieldSpace space)
    {
        int n = space.Size, inTriangles = space.Nodes.Length;
        MetalCoupling[] metals = MetalCoupling.Of(space);

        // Slots: six per triangle, then the nodes of each metal block with its contact. Group g of a metal block starts at first[g].
        int[] first = new int[metals.Length + 1];
        first[0] = inTriangles;
        for (int g = 0; g < metals.Length; g++)
        {
            first[g + 1] = first[g] + metals[g].Nodes.Length + 1;
        }

        int[] member = GC.AllocateUninitializedArray<int>(first[^1]), metalOf = new int[first[^1] - inTriangles];
        for (int s = 0; s < inTriangles; s++)
        {
            member[s] = space.Unknown[space.Nodes[s]];
        }

        for (int g = 0; g < metals.Length; g++)
        {
            int s = first[g];
            foreach (int node in metals[g].Nodes)
            {
                member[s++] = space.Unknown[node];
            }

            member[s] = space.ContactUnknown[metals[g].Contact];
            metalOf.AsSpan(first[g] - inTriangles, first[g + 1] - first[g]).Fill(g);
        }

        (int[] start, int[] slot) = Slots(n, member);
        (int[] rowStart, int[] unsorted) = Rows(n, inTriangles, member, start, slot, first, metalOf);
        int[] column = Sorted(rowStart, unsorted);
        return (new(rowStart, column), Places(n, inTriangles, member, start, slot, rowStart, column));
    }

    // The slots of each unknown.
    private static (int[] Start, int[] Slot) Slots(int n, int[] member)
    {
        int[] start = new int[n + 2];
        foreach (int m in member)
        {
            start[m + 1]++;
        }

        for (int i = 0; i <= n; i++)
        {
            start[i + 1] += start[i];
        }

        int[] at = start[..(n + 1)], slot = GC.AllocateUninitializedArray<int>(member.Length);
        for (int s = 0; s < member.Length; s++)
        {
            slot[at[member[s]]++] = s;
        }

        return (start, slot);
    }

    // The columns of each row in the order in which they are met.
    private static (int[] Start, int[] Column) Rows(
        int n, int inTriangles, int[] member, int[] start, int[] slot, int[] first, int[] metalOf)
    {
        int[] rowStart = new int[n + 1], seen = new int[n + 1], column = GC.AllocateUninitializedArray<int>(Math.Max(16, 12 * n));
        int count = 0;
        for (int i = 0; i < n; i++)
        {
            seen[i] = i + 1;
            seen[n] = i + 1;
            if (count == column.Length)
            {
                Array.Resize(ref column, 2 * count);
            }

            column[count++] = i;
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                int s = slot[k], from = s - (s % 6), to = from + 6;
                if (s >= inTriangles)
                {
                    int g = metalOf[s - inTriangles];
                    (from, to) = (first[g], first[g + 1]);
                }

                if (column.Length - count < to - from)
                {
                    Array.Resize(ref column, 2 * (count + to - from));
                }

                for (int m = from; m < to; m++)
                {
                    int j = member[m];
                    if (seen[j] != i + 1)
                    {
                        seen[j] = i + 1;
                        column[count++] = j;
                    }
                }
            }

            rowStart[i + 1] = count;
        }

        return (rowStart, column);
    }

    // The pattern is symmetric: going through the rows in ascending order, each row is met by its columns in ascending order.
    private static int[] Sorted(int[] rowStart, int[] unsorted)
    {
        int n = rowStart.Length - 1;
        int[] at = rowStart[..n], column = GC.AllocateUninitializedArray<int>(rowStart[n]);
        for (int i = 0; i < n; i++)
        {
            foreach (int j in unsorted.AsSpan(rowStart[i]..rowStart[i + 1]))
            {
                column[at[j]++] = i;
            }
        }

        return column;
    }

    private static int[] Places(int n, int inTriangles, int[] member, int[] start, int[] slot, int[] rowStart, int[] column)
    {
        int[] places = GC.AllocateUninitializedArray<int>(6 * inTriangles), where = new int[n + 1];
        where[n] = column.Length;
        for (int i = 0; i < n; i++)
        {
            for (int k = rowStart[i]; k < rowStart[i + 1]; k++)
            {
                where[column[k]] = k;
            }

            for (int k = start[i]; k < start[i + 1] && slot[k] < inTriangles; k++)
            {
                int s = slot[k], from = s - (s % 6);
                for (int b = 0; b < 6; b++)
                {
                    places[(6 * s) + b] = where[member[from + b]];
                }
            }
        }

        for (int k = start[n]; k < start[n + 1] && slot[k] < inTriangles; k++)
        {
            places.AsSpan(6 * slot[k], 6).Fill(column.Length);
        }

        return places;
    }
}
