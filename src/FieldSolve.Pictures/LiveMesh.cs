using System.Buffers.Binary;

namespace FieldSolve.Pictures;

/// <summary>
/// The quadratic triangles of a live map, packed. Corners come first, numbered as they appear, then the middles of edges, numbered as they
/// appear going through the triangles and their edges 01, 12, 20; so the page finds the middles by itself and only those off the straight edge are sent.
/// </summary>
internal sealed class LiveMesh
{
    private readonly int[] source;  // node of the run for each node of the page
    private (int[] First, int[] Second)? before;

    /// <summary>Packs the triangles of a run.</summary>
    /// <param name="x">x of each node, metres.</param>
    /// <param name="y">y of each node, metres.</param>
    /// <param name="nodes">Six per triangle: corners 0, 1, 2, then the middles of edges 01, 12, 20.</param>
    public LiveMesh(double[] x, double[] y, int[] nodes)
    {
        (X, Y, Nodes) = (x, y, nodes);
        Triangles = nodes.Length / 6;
        int[] number = new int[x.Length];
        Array.Fill(number, -1);
        List<int> order = new(x.Length);
        Number(0);
        Corners = order.Count;
        Number(3);
        source = [.. order];
        CornerNumbers = new int[3 * Triangles];
        for (int t = 0; t < Triangles; t++)
        {
            for (int k = 0; k < 3; k++)
            {
                CornerNumbers[(3 * t) + k] = number[nodes[(6 * t) + k]];
            }
        }

        Bent = FindBent();

        void Number(int first)
        {
            for (int t = 0; t < Triangles; t++)
            {
                for (int k = first; k < first + 3; k++)
                {
                    int n = nodes[(6 * t) + k];
                    if (number[n] < 0)
                    {
                        number[n] = order.Count;
                        order.Add(n);
                    }
                }
            }
        }
    }

    private LiveMesh(LiveMesh like, double[] x, double[] y)
    {
        (X, Y, Nodes, Triangles, Corners, CornerNumbers, source, before) = (x, y, like.Nodes, like.Triangles, like.Corners, like.CornerNumbers, like.source, like.before);
        Bent = FindBent();
    }

    /// <summary>The same triangles with their nodes elsewhere.</summary>
    /// <param name="x">As for a new mesh.</param>
    /// <param name="y">Likewise.</param>
    public LiveMesh Moved(double[] x, double[] y) => new(this, x, y);

    /// <summary>x of each node of the run.</summary>
    public double[] X { get; }

    /// <summary>y of each node of the run.</summary>
    public double[] Y { get; }

    /// <summary>Six nodes of the run per triangle.</summary>
    public int[] Nodes { get; }

    /// <summary>Number of triangles.</summary>
    public int Triangles { get; }

    /// <summary>Number of corners; the nodes of the page after them are middles.</summary>
    public int Corners { get; }

    /// <summary>Number of nodes.</summary>
    public int Count => source.Length;

    /// <summary>Three corners of the page per triangle.</summary>
    public int[] CornerNumbers { get; }

    /// <summary>Middles of the page that do not lie halfway between their corners.</summary>
    public int[] Bent { get; }

    /// <summary>Places of the corners, or of the bent middles: x, y, x, y, … as little-endian doubles.</summary>
    public byte[] Places(bool bent)
    {
        int count = bent ? Bent.Length : Corners;
        byte[] bytes = new byte[16 * count];
        for (int i = 0; i < count; i++)
        {
            int n = source[bent ? Bent[i] : i];
            BinaryPrimitives.WriteDoubleLittleEndian(bytes.AsSpan(16 * i), X[n]);
            BinaryPrimitives.WriteDoubleLittleEndian(bytes.AsSpan((16 * i) + 8), Y[n]);
        }

        return bytes;
    }

    /// <summary>Values of the run's nodes in the order of the page's.</summary>
    public double[] InOrder(double[] values) => [.. source.Select(n => values[n])];

    /// <summary>Corners as the page counts them up: 0 for the next new one, else how far back it lies.</summary>
    public byte[] PackedCorners()
    {
        long[] back = new long[CornerNumbers.Length];
        int next = 0;
        for (int i = 0; i < back.Length; i++)
        {
            back[i] = next - CornerNumbers[i];
            next += back[i] == 0 ? 1 : 0;
        }

        return BitPacker.Pack(back);
    }

    /// <summary>Whole numbers at the page's nodes less the mean, rounded down, of two that come before: the ends of its edge for a middle, the known corners of its first triangle for a corner.</summary>
    public long[] AgainstNeighbours(long[] values)
    {
        (int[] first, int[] second) = before ??= Before();
        long[] rest = new long[values.Length];
        for (int i = 0; i < values.Length; i++)
        {
            rest[i] = values[i] - (first[i] < 0 ? 0 : (values[first[i]] + values[second[i]]) >> 1);
        }

        return rest;
    }

    // Middles are numbered as they appear.
    private int[] FindBent()
    {
        List<int> bent = [];
        bool[] seen = new bool[X.Length];
        int number = Corners;
        for (int t = 0; t < Triangles; t++)
        {
            for (int k = 0; k < 3; k++)
            {
                int a = Nodes[(6 * t) + k], b = Nodes[(6 * t) + ((k + 1) % 3)], m = Nodes[(6 * t) + 3 + k];
                if (seen[m])
                {
                    continue;
                }

                seen[m] = true;
                if (X[m] != 0.5 * (X[a] + X[b]) || Y[m] != 0.5 * (Y[a] + Y[b]))
                {
                    bent.Add(number);
                }

                number++;
            }
        }

        return [.. bent];
    }

    private (int[] First, int[] Second) Before()
    {
        int[] first = new int[Count], second = new int[Count];
        Array.Fill(first, -1);
        Array.Fill(second, -1);
        int next = 0, middle = Corners;
        HashSet<(int, int)> seen = [];
        for (int t = 0; t < Triangles; t++)
        {
            Span<int> corner = CornerNumbers.AsSpan(3 * t, 3);
            for (int k = 0; k < 3; k++)
            {
                if (corner[k] == next)
                {
                    foreach (int other in corner)
                    {
                        if (other < next)
                        {
                            (first[next], second[next]) = (other, first[next] < 0 ? other : first[next]);
                        }
                    }

                    next++;
                }
            }

            for (int k = 0; k < 3; k++)
            {
                int a = corner[k], b = corner[(k + 1) % 3];
                if (seen.Add((Math.Min(a, b), Math.Max(a, b))))
                {
                    (first[middle], second[middle]) = (a, b);
                    middle++;
                }
            }
        }

        return (first, second);
    }

    /// <summary>Values at the nodes as whole numbers of 32 bits that span their range: finer than a float of the same size.</summary>
    /// <param name="values">One per node of the run.</param>
    /// <returns>Little-endian bytes, and the range.</returns>
    public (byte[] Bytes, double Low, double High) Pack(double[] values)
    {
        double low = values.Length == 0 ? 0 : values.Min(), high = values.Length == 0 ? 0 : values.Max();
        double factor = high > low ? uint.MaxValue / (high - low) : 0;
        byte[] bytes = new byte[4 * source.Length];
        for (int i = 0; i < source.Length; i++)
        {
            BinaryPrimitives.WriteUInt32LittleEndian(bytes.AsSpan(4 * i), (uint)Math.Clamp(Math.Round((values[source[i]] - low) * factor), 0, uint.MaxValue));
        }

        return (bytes, low, high);
    }

    /// <summary>Whole numbers as little-endian bytes, four each.</summary>
    public static byte[] Pack(int[] numbers)
    {
        byte[] bytes = new byte[4 * numbers.Length];
        for (int i = 0; i < numbers.Length; i++)
        {
            BinaryPrimitives.WriteInt32LittleEndian(bytes.AsSpan(4 * i), numbers[i]);
        }

        return bytes;
    }

    /// <summary>Largest gradient of the straight triangles through the corners, a measure of the largest field of a potential.</summary>
    public double LargestSlope(double[] values)
    {
        double most = 0;
        for (int t = 0; t < Triangles; t++)
        {
            (int a, int b, int c) = (Nodes[6 * t], Nodes[(6 * t) + 1], Nodes[(6 * t) + 2]);
            double ux = X[b] - X[a], uy = Y[b] - Y[a], vx = X[c] - X[a], vy = Y[c] - Y[a], twice = (ux * vy) - (uy * vx);
            double p = values[b] - values[a], q = values[c] - values[a];
            double gx = ((p * vy) - (q * uy)) / twice, gy = ((q * ux) - (p * vx)) / twice;
            most = Math.Max(most, (gx * gx) + (gy * gy));
        }

        return Math.Sqrt(most);
    }
}
