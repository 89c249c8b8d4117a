using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;
using FieldSolve.Sparse;

namespace FieldSolve.Benchmarks.Native;

/// <summary>
/// Conductivity operator of the unit disc on a uniform mesh of straight triangles, linear or quadratic: tensor of ratio 4 turned by 30 degrees
/// plus an antisymmetric part that varies over the disc (or none); two arcs of 20 degrees of the rim are kept at fixed potentials.
/// </summary>
internal sealed record DiscMatrix(SymmetricPattern Pattern, double[] Values, double[] X, double[] Y, double[] B)
{
    public int Size => Pattern.Size;

    /// <summary>The domain: a disc of one metre.</summary>
    public static Domain Disc()
    {
        Point2 east = new(1, 0), west = new(-1, 0);
        return new Domain(
            [east, west],
            [
                new DomainEdge(0, 1, Curve.Arc(default, 1, 0, Math.PI, east, west), true, -1),
                new DomainEdge(1, 0, Curve.Arc(default, 1, Math.PI, Math.PI, west, east), true, -1),
            ],
            [],
            []);
    }

    /// <summary>Uniform mesh of about the wanted number of triangles.</summary>
    public static TriangleMesh Mesh(int triangles)
    {
        double edge = Math.Sqrt(4 * Math.PI / (Math.Sqrt(3) * triangles));
        return Mesher.Generate(Disc(), new UniformSize(edge));
    }

    /// <summary>Assembles the matrix.</summary>
    /// <param name="mesh">Mesh of the disc.</param>
    /// <param name="quadratic">Six nodes per triangle, not three.</param>
    /// <param name="odd">With the antisymmetric part.</param>
    public static DiscMatrix Build(TriangleMesh mesh, bool quadratic, bool odd)
    {
        int per = quadratic ? 6 : 3, nodes = mesh.VertexCount;
        int[] node = new int[per * mesh.TriangleCount];
        var x = new List<double>(mesh.X);
        var y = new List<double>(mesh.Y);
        var rim = new HashSet<int>();
        foreach (MeshEdge e in mesh.Edges)
        {
            rim.Add(e.A);
            rim.Add(e.B);
        }

        int[] edge = [];
        if (quadratic)
        {
            (edge, int edges) = EdgeNumbers.Of(mesh);
            nodes += edges;
            x.AddRange(new double[edges]);
            y.AddRange(new double[edges]);
        }

        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            for (int k = 0; k < 3; k++)
            {
                int a = node[(per * t) + k] = mesh.Corners[(3 * t) + k], b = mesh.Corners[(3 * t) + ((k + 1) % 3)];
                if (!quadratic)
                {
                    continue;
                }

                int m = mesh.VertexCount + edge[(3 * t) + k];
                (x[m], y[m]) = (0.5 * (x[a] + x[b]), 0.5 * (y[a] + y[b]));
                node[(per * t) + 3 + k] = m;
            }
        }

        foreach (MeshEdge e in mesh.Edges)
        {
            if (quadratic)
            {
                rim.Add(mesh.VertexCount + edge[(3 * e.LeftTriangle) + EdgeNumbers.LocalEdge(mesh, e.LeftTriangle, e.A, e.B)]);
            }
        }

        int[] unknown = new int[nodes];
        double[] held = new double[nodes];
        int n = 0;
        for (int v = 0; v < nodes; v++)
        {
            bool fixedHere = rim.Contains(v) && Math.Abs(y[v]) <= Math.Sin(Math.PI / 18);
            held[v] = fixedHere && x[v] > 0 ? 1 : 0;
            unknown[v] = fixedHere ? -1 : n++;
        }

        SymmetricPattern pattern = Join(mesh.TriangleCount, per, node, unknown, n);
        double[] values = new double[pattern.Count], right = new double[n], px = new double[n], py = new double[n];
        for (int v = 0; v < nodes; v++)
        {
            if (unknown[v] >= 0)
            {
                (px[unknown[v]], py[unknown[v]]) = (x[v], y[v]);
            }
        }

        var matrix = new DiscMatrix(pattern, values, px, py, right);
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            matrix.Add(node.AsSpan(per * t, per), unknown, held, x, y, odd);
        }

        return matrix;
    }

    /// <summary>‖b − A x‖∞ / (‖A‖∞ ‖x‖∞ + ‖b‖∞).</summary>
    public double BackwardError(double[] x)
    {
        double worst = 0, row = 0;
        for (int i = 0; i < Size; i++)
        {
            double r = B[i], sum = 0;
            for (int k = Pattern.Start[i]; k < Pattern.Start[i + 1]; k++)
            {
                r -= Values[k] * x[Pattern.Column[k]];
                sum += Math.Abs(Values[k]);
            }

            worst = Math.Max(worst, Math.Abs(r));
            row = Math.Max(row, sum);
        }

        return worst / ((row * x.Max(Math.Abs)) + B.Max(Math.Abs));
    }

    private static SymmetricPattern Join(int triangles, int per, int[] node, int[] unknown, int n)
    {
        int[] first = new int[n + 1];
        foreach (int v in node)
        {
            if (unknown[v] >= 0)
            {
                first[unknown[v] + 1]++;
            }
        }

        for (int i = 0; i < n; i++)
        {
            first[i + 1] += first[i];
        }

        int[] at = first[..n], of = new int[first[n]], start = new int[n + 1], seen = new int[n];
        for (int k = 0; k < node.Length; k++)
        {
            if (unknown[node[k]] >= 0)
            {
                of[at[unknown[node[k]]]++] = k / per;
            }
        }

        Array.Fill(seen, -1);
        var column = new List<int>(12 * n);
        for (int i = 0; i < n; i++)
        {
            for (int k = first[i]; k < first[i + 1]; k++)
            {
                for (int m = per * of[k]; m < per * (of[k] + 1); m++)
                {
                    int j = unknown[node[m]];
                    if (j >= 0 && seen[j] != i)
                    {
                        seen[j] = i;
                        column.Add(j);
                    }
                }
            }

            System.Runtime.InteropServices.CollectionsMarshal.AsSpan(column)[start[i]..].Sort();
            start[i + 1] = column.Count;
        }

        return new SymmetricPattern(start, [.. column]);
    }

    // Three points in the middles of the edges: exact for quadratic triangles but for the variation of the antisymmetric part.
    private void Add(ReadOnlySpan<int> node, int[] unknown, double[] held, List<double> x, List<double> y, bool odd)
    {
        int per = node.Length;
        Span<double> gx = stackalloc double[3], gy = stackalloc double[3], dx = stackalloc double[6], dy = stackalloc double[6];
        double twice = ((x[node[1]] - x[node[0]]) * (y[node[2]] - y[node[0]])) - ((x[node[2]] - x[node[0]]) * (y[node[1]] - y[node[0]]));
        for (int a = 0; a < 3; a++)
        {
            int b = node[(a + 1) % 3], c = node[(a + 2) % 3];
            gx[a] = (y[b] - y[c]) / twice;
            gy[a] = (x[c] - x[b]) / twice;
        }

        for (int q = 0; q < 3; q++)
        {
            double px = 0, py = 0;
            for (int a = 0; a < 3; a++)
            {
                int b = (a + 1) % 3;
                double la = a == q ? 0 : 0.5, lb = b == q ? 0 : 0.5;
                px += la * x[node[a]];
                py += la * y[node[a]];
                double slope = per == 6 ? (4 * la) - 1 : 1;
                (dx[a], dy[a]) = (slope * gx[a], slope * gy[a]);
                dx[3 + a] = 4 * ((la * gx[b]) + (lb * gx[a]));
                dy[3 + a] = 4 * ((la * gy[b]) + (lb * gy[a]));
            }

            double hall = odd ? 0.6 * (1 + (0.3 * Math.Sin(3 * px) * Math.Cos(2 * py))) : 0;
            for (int i = 0; i < per; i++)
            {
                int row = unknown[node[i]];
                for (int j = 0; row >= 0 && j < per; j++)
                {
                    double part = twice / 6 * ((dx[i] * ((3.25 * dx[j]) + ((1.299 + hall) * dy[j]))) + (dy[i] * (((1.299 - hall) * dx[j]) + (1.75 * dy[j]))));
                    int column = unknown[node[j]];
                    if (column < 0)
                    {
                        B[row] -= part * held[node[j]];
                        continue;
                    }

                    Values[Array.BinarySearch(Pattern.Column, Pattern.Start[row], Pattern.Start[row + 1] - Pattern.Start[row], column)] += part;
                }
            }
        }
    }
}
