using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>Fits triangles from elsewhere to a domain: which vertices are the domain's, and which sides lie on which of its edges.</summary>
public static class SavedMesh
{
    // Share of the sheet's size by which a vertex may be off its place; files with single precision are good to 1e-7.
    private const double Tolerance = 1e-6;

    /// <summary>Makes a mesh of a domain from bare triangles.</summary>
    /// <param name="domain">What the triangles must cover.</param>
    /// <param name="x">x of each vertex, metres.</param>
    /// <param name="y">y of each vertex, metres.</param>
    /// <param name="corners">Three vertex indices per triangle, either way round.</param>
    /// <returns>A mesh that passes <see cref="MeshChecker"/> but for the Delaunay property, which is not asked for. Vertices on the rim sit on the true curve.</returns>
    /// <exception cref="MeshException">The triangles are not those of this domain; the message says where.</exception>
    public static TriangleMesh Fit(Domain domain, IReadOnlyList<double> x, IReadOnlyList<double> y, IReadOnlyList<int> corners)
    {
        ArgumentNullException.ThrowIfNull(domain);
        ArgumentNullException.ThrowIfNull(x);
        ArgumentNullException.ThrowIfNull(y);
        ArgumentNullException.ThrowIfNull(corners);
        if (corners.Count == 0 || corners.Count % 3 != 0 || corners.Any(c => c < 0 || c >= x.Count))
        {
            throw new MeshException("the triangles name vertices that do not exist");
        }

        double near = Tolerance * domain.Size;
        int[] place = Places(domain, x, y, corners, near, out int count);
        double[] px = new double[count], py = new double[count];
        for (int v = 0; v < place.Length; v++)
        {
            if (place[v] >= 0)
            {
                (px[place[v]], py[place[v]]) = (x[v], y[v]);
            }
        }

        for (int v = 0; v < domain.Vertices.Count; v++)
        {
            (px[v], py[v]) = (domain.Vertices[v].X, domain.Vertices[v].Y);
        }

        int[] c = [.. corners.Select(v => place[v])];
        for (int t = 0; t < c.Length; t += 3)
        {
            if (Predicates.Orient(px[c[t]], py[c[t]], px[c[t + 1]], py[c[t + 1]], px[c[t + 2]], py[c[t + 2]]) < 0)
            {
                (c[t + 1], c[t + 2]) = (c[t + 2], c[t + 1]);
            }
        }

        var sides = new Dictionary<(int, int), int>(c.Length);
        for (int k = 0; k < c.Length; k++)
        {
            if (!sides.TryAdd(Side(c, k), k))
            {
                throw new MeshException(FormattableString.Invariant($"two triangles lie on the same side of an edge near ({px[c[k]]:G6}, {py[c[k]]:G6}) m"));
            }
        }

        int[] neighbours = [.. Enumerable.Range(0, c.Length).Select(k => Side(c, k) is var (a, b) && sides.TryGetValue((b, a), out int across) ? across / 3 : -1)];
        MeshEdge[] edges = new EdgeWalk(domain, px, py, c, neighbours, sides, near).Pieces();
        var mesh = new TriangleMesh
        {
            Domain = domain,
            X = px,
            Y = py,
            Corners = c,
            Neighbours = neighbours,
            Region = Regions.Find(domain, px, py, c, neighbours, edges),
            Edges = edges,
        };
        return MeshChecker.Check(mesh, delaunay: false) is [string first, ..] ? throw new MeshException(first.TrimEnd('.')) : mesh;
    }

    internal static (int A, int B) Side(int[] corners, int k)
    {
        int t = 3 * (k / 3);
        return (corners[t + ((k + 1) % 3)], corners[t + ((k + 2) % 3)]);
    }

    // New index of each vertex that a triangle uses: the domain's first, in its order.
    private static int[] Places(Domain domain, IReadOnlyList<double> x, IReadOnlyList<double> y, IReadOnlyList<int> corners, double near, out int count)
    {
        // Vertices in cells of twice the tolerance, looked up with their neighbours.
        double cell = 2 * near;
        var cells = new Dictionary<(long, long), List<int>>();
        (long, long) Cell(double px, double py) => ((long)Math.Floor(px / cell), (long)Math.Floor(py / cell));
        foreach (int v in corners.Distinct())
        {
            if (!double.IsFinite(x[v]) || !double.IsFinite(y[v]) || Math.Abs(x[v]) + Math.Abs(y[v]) > 1e6 * domain.Size)
            {
                throw new MeshException(FormattableString.Invariant($"vertex {v} lies at ({x[v]:G6}, {y[v]:G6}) m, far from the sheet"));
            }

            (long, long) at = Cell(x[v], y[v]);
            if (!cells.TryGetValue(at, out List<int>? list))
            {
                cells[at] = list = [];
            }

            list.Add(v);
        }

        int[] place = new int[x.Count];
        Array.Fill(place, -1);
        count = 0;
        foreach (Point2 p in domain.Vertices)
        {
            (long i, long j) = Cell(p.X, p.Y);
            int best = -1;
            double distance = near;
            for (long a = i - 1; a <= i + 1; a++)
            {
                for (long b = j - 1; b <= j + 1; b++)
                {
                    foreach (int v in cells.GetValueOrDefault((a, b)) ?? [])
                    {
                        double d = Math.Sqrt(((x[v] - p.X) * (x[v] - p.X)) + ((y[v] - p.Y) * (y[v] - p.Y)));
                        (best, distance) = d <= distance && place[v] < 0 ? (v, d) : (best, distance);
                    }
                }
            }

            if (best < 0)
            {
                throw new MeshException(FormattableString.Invariant($"no vertex lies at ({p.X:G6}, {p.Y:G6}) m, where the device has a corner, contact end or tip"));
            }

            place[best] = count++;
        }

        foreach (int v in corners)
        {
            if (place[v] < 0)
            {
                place[v] = count++;
            }
        }

        return place;
    }
}
