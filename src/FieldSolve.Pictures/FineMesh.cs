using FieldSolve.Fields;

namespace FieldSolve.Pictures;

/// <summary>
/// Quadratic triangles cut into small straight ones for drawing: every edge into the same number of pieces. Potentials
/// follow the quadratic element; fields, which are averages at the nodes, are taken straight between neighbouring nodes so that they do
/// not overshoot beside a peak.
/// </summary>
internal sealed class FineMesh
{
    private readonly int[] nodes;
    private readonly int[] owner;
    private readonly float[] second;
    private readonly float[] third;

    private FineMesh(FieldMap map, int pieces, int[] triangles, List<int> owner, List<float> second, List<float> third)
    {
        nodes = map.Nodes;
        Pieces = pieces;
        Triangles = triangles;
        this.owner = [.. owner];
        this.second = [.. second];
        this.third = [.. third];
        X = Quadratic(map.X);
        Y = Quadratic(map.Y);
    }

    /// <summary>Pieces per edge of a quadratic triangle.</summary>
    public int Pieces { get; }

    /// <summary>x of each fine node, metres.</summary>
    public double[] X { get; }

    /// <summary>y of each fine node, metres.</summary>
    public double[] Y { get; }

    /// <summary>Three fine nodes per small triangle.</summary>
    public int[] Triangles { get; }

    /// <summary>Number of small triangles.</summary>
    public int Count => Triangles.Length / 3;

    /// <summary>Cuts the triangles of a map: the fewer there are, the finer.</summary>
    public static FineMesh Of(FieldMap map)
    {
        int count = map.TriangleCount;
        int n = count < 1200 ? 8 : count < 10_000 ? 4 : count < 40_000 ? 2 : 1;
        List<int> owner = [];
        List<float> second = [], third = [];
        int Add(int triangle, int j, int k)
        {
            owner.Add(triangle);
            second.Add((float)j / n);
            third.Add((float)k / n);
            return owner.Count - 1;
        }

        Dictionary<int, int> corners = [];
        Dictionary<(int, int), int> edges = [];
        int[] triangles = new int[3 * n * n * count];
        int[,] grid = new int[n + 1, n + 1];
        (int J, int K)[] places = [(0, 0), (n, 0), (0, n)];
        int at = 0;
        for (int t = 0; t < count; t++)
        {
            for (int c = 0; c < 3; c++)
            {
                int a = map.Nodes[(6 * t) + c], b = map.Nodes[(6 * t) + ((c + 1) % 3)];
                (int ja, int ka) = places[c];
                (int jb, int kb) = places[(c + 1) % 3];
                if (!corners.TryGetValue(a, out int corner))
                {
                    corner = corners[a] = Add(t, ja, ka);
                }

                grid[ja, ka] = corner;
                bool known = edges.TryGetValue((Math.Min(a, b), Math.Max(a, b)), out int first);
                for (int s = 1; s < n; s++)
                {
                    // Steps are counted from the end with the smaller number, so both neighbours find the same nodes.
                    int step = a < b ? s : n - s;
                    int j = ((ja * (n - step)) + (jb * step)) / n, k = ((ka * (n - step)) + (kb * step)) / n;
                    int node = known ? first + s - 1 : Add(t, j, k);
                    grid[j, k] = node;
                    if (!known && s == 1)
                    {
                        edges[(Math.Min(a, b), Math.Max(a, b))] = node;
                    }
                }
            }

            for (int j = 1; j < n; j++)
            {
                for (int k = 1; j + k < n; k++)
                {
                    grid[j, k] = Add(t, j, k);
                }
            }

            for (int j = 0; j < n; j++)
            {
                for (int k = 0; j + k < n; k++)
                {
                    (triangles[at], triangles[at + 1], triangles[at + 2]) = (grid[j, k], grid[j + 1, k], grid[j, k + 1]);
                    at += 3;
                    if (j + k < n - 1)
                    {
                        (triangles[at], triangles[at + 1], triangles[at + 2]) = (grid[j + 1, k], grid[j + 1, k + 1], grid[j, k + 1]);
                        at += 3;
                    }
                }
            }
        }

        return new(map, n, triangles, owner, second, third);
    }

    /// <summary>Values of the quadratic element at the fine nodes from those at its six nodes.</summary>
    public double[] Quadratic(double[] values)
    {
        double[] fine = new double[owner.Length];
        for (int i = 0; i < fine.Length; i++)
        {
            double b = second[i], c = third[i], a = 1 - b - c;
            ReadOnlySpan<int> n = nodes.AsSpan(6 * owner[i], 6);
            fine[i] = (a * ((2 * a) - 1) * values[n[0]]) + (b * ((2 * b) - 1) * values[n[1]]) + (c * ((2 * c) - 1) * values[n[2]])
                + (4 * a * b * values[n[3]]) + (4 * b * c * values[n[4]]) + (4 * c * a * values[n[5]]);
        }

        return fine;
    }

    /// <summary>Values at the fine nodes, straight within each quarter of the element.</summary>
    public double[] Straight(double[] values)
    {
        double[] fine = new double[owner.Length];
        for (int i = 0; i < fine.Length; i++)
        {
            double b = second[i], c = third[i], a = 1 - b - c;
            ReadOnlySpan<int> n = nodes.AsSpan(6 * owner[i], 6);
            double v3 = values[n[3]], v4 = values[n[4]], v5 = values[n[5]];
            fine[i] = a >= 0.5 ? (((2 * a) - 1) * values[n[0]]) + (2 * b * v3) + (2 * c * v5)
                : b >= 0.5 ? (((2 * b) - 1) * values[n[1]]) + (2 * c * v4) + (2 * a * v3)
                : c >= 0.5 ? (((2 * c) - 1) * values[n[2]]) + (2 * a * v5) + (2 * b * v4)
                : ((1 - (2 * c)) * v3) + ((1 - (2 * a)) * v4) + ((1 - (2 * b)) * v5);
        }

        return fine;
    }
}
