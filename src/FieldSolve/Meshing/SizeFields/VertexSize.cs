using System.Globalization;
using FieldSolve.Geometry;

namespace FieldSolve.Meshing.SizeFields;

/// <summary>
/// Edge length wanted at the vertices of an earlier mesh, linear in between. Before use the lengths are lowered until none grows
/// along an edge of that mesh by more than the growth times the edge's length.
/// </summary>
/// <remarks>
/// A point is found by walking through the old mesh from a triangle near it that a grid gives; outside the old mesh the nearest
/// triangle counts. The answer depends on the point alone, not on earlier calls, and reading changes nothing, so several threads may share one.
/// </remarks>
public sealed class VertexSize : ISizeField
{
    private readonly TriangleMesh mesh;
    private readonly double[] size;
    private readonly TriangleIndex index;

    /// <summary>Prepares the look-up.</summary>
    /// <param name="mesh">The earlier mesh.</param>
    /// <param name="wanted">Edge length in metres at each of its vertices, finite and positive.</param>
    /// <param name="growth">Largest increase of the edge length per distance, positive; 0.2 to 0.5 is usual.</param>
    /// <exception cref="ArgumentException">There is not one length per vertex.</exception>
    /// <exception cref="ArgumentOutOfRangeException">A length or the growth is not finite and positive.</exception>
    public VertexSize(TriangleMesh mesh, ReadOnlySpan<double> wanted, double growth)
    {
        ArgumentNullException.ThrowIfNull(mesh);
        if (wanted.Length != mesh.VertexCount)
        {
            throw new ArgumentException($"{wanted.Length} lengths were given for {mesh.VertexCount} vertices.", nameof(wanted));
        }

        if (!(growth > 0) || double.IsInfinity(growth))
        {
            throw new ArgumentOutOfRangeException(nameof(growth), growth, "The growth must be finite and greater than zero.");
        }

        for (int v = 0; v < wanted.Length; v++)
        {
            if (!(wanted[v] > 0) || double.IsInfinity(wanted[v]))
            {
                throw new ArgumentOutOfRangeException(nameof(wanted), string.Create(CultureInfo.InvariantCulture,
                    $"The edge length wanted at vertex {v} is {wanted[v]} m; it must be finite and greater than zero."));
            }
        }

        this.mesh = mesh;
        size = Smoothed(mesh, wanted, growth);
        index = new TriangleIndex(mesh);
    }

    /// <summary>The lengths after smoothing, one per vertex of the old mesh, metres.</summary>
    public ReadOnlySpan<double> Sizes => size;

    /// <summary>The look-up of triangles, for other sizes on the same mesh.</summary>
    internal TriangleIndex Index => index;

    /// <inheritdoc/>
    public double At(double x, double y)
    {
        int t = index.Find(x, y);
        int a = mesh.Corners[3 * t], b = mesh.Corners[(3 * t) + 1], c = mesh.Corners[(3 * t) + 2];
        double abx = mesh.X[b] - mesh.X[a], aby = mesh.Y[b] - mesh.Y[a];
        double acx = mesh.X[c] - mesh.X[a], acy = mesh.Y[c] - mesh.Y[a];
        double px = x - mesh.X[a], py = y - mesh.Y[a];
        double area = (abx * acy) - (aby * acx);

        // Outside the triangle the weights are cut off at its edge, so the result stays between the corners' lengths.
        double wb = Math.Clamp(((px * acy) - (py * acx)) / area, 0, 1);
        double wc = Math.Clamp(((abx * py) - (aby * px)) / area, 0, 1);
        double sum = Math.Max(1, wb + wc);
        (wb, wc) = (wb / sum, wc / sum);
        double wa = Math.Max(0, 1 - wb - wc);
        return (wa * size[a]) + (wb * size[b]) + (wc * size[c]);
    }

    // Shortest-path sweep from the smallest length upwards: E. W. Dijkstra, Numer. Math. 1 (1959) 269.
    private static double[] Smoothed(TriangleMesh mesh, ReadOnlySpan<double> wanted, double growth)
    {
        int[] start = new int[mesh.VertexCount + 1];
        foreach (int v in mesh.Corners)
        {
            start[v + 1]++;
        }

        for (int v = 0; v < mesh.VertexCount; v++)
        {
            start[v + 1] += start[v];
        }

        int[] fill = start[..^1], sides = new int[mesh.Corners.Length];
        for (int k = 0; k < mesh.Corners.Length; k++)
        {
            sides[fill[mesh.Corners[k]]++] = k;
        }

        double[] size = wanted.ToArray();
        PriorityQueue<int, (double, int)> queue = new();
        for (int v = 0; v < size.Length; v++)
        {
            queue.Enqueue(v, (size[v], v));
        }

        while (queue.TryDequeue(out int v, out (double Size, int) key))
        {
            if (key.Size > size[v])
            {
                continue;
            }

            for (int i = start[v]; i < start[v + 1]; i++)
            {
                int t = sides[i] / 3;
                for (int j = 0; j < 3; j++)
                {
                    int w = mesh.Corners[(3 * t) + j];
                    double dx = mesh.X[w] - mesh.X[v], dy = mesh.Y[w] - mesh.Y[v];
                    double most = size[v] + (growth * Math.Sqrt((dx * dx) + (dy * dy)));
                    if (most < size[w])
                    {
                        size[w] = most;
                        queue.Enqueue(w, (most, w));
                    }
                }
            }
        }

        return size;
    }
}
