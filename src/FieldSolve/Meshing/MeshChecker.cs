using System.Globalization;
using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>Checks everything a <see cref="TriangleMesh"/> promises.</summary>
public static class MeshChecker
{
    private const int MostMessages = 50;

    /// <summary>
    /// All violations found, up to fifty; none for a sound mesh. Checked are: array lengths and indices, orientation (exact), neighbours,
    /// one triangle on each side of an edge, no two vertices in one place on an edge, the Delaunay property across edges that are not pieces
    /// of the outline (exact), that the pieces of each domain edge follow each other from its start to its end on the true curve, the area, that the
    /// domain's vertices come first and every vertex is used, and the pads' regions.
    /// </summary>
    /// <param name="mesh">The mesh.</param>
    /// <param name="delaunay">False leaves out the Delaunay property.</param>
    /// <exception cref="ArgumentNullException">The mesh is null.</exception>
    public static IReadOnlyList<string> Check(TriangleMesh mesh, bool delaunay = true)
    {
        ArgumentNullException.ThrowIfNull(mesh);
        Report report = new();
        if (CheckArrays(mesh, report))
        {
            CheckTriangles(mesh, report);
            bool[] constrained = CheckEdges(mesh, report);
            CheckNeighbours(mesh, constrained, delaunay, report);
            CheckVertices(mesh, report);
            CheckArea(mesh, report);
            CheckRegions(mesh, constrained, report);
        }

        return report.Lines;
    }

    private static bool CheckArrays(TriangleMesh m, Report report)
    {
        if (m.X.Length != m.Y.Length || m.Corners.Length % 3 != 0 || m.Neighbours.Length != m.Corners.Length || m.Region.Length != m.TriangleCount
            || m.X.Length < m.Domain.Vertices.Count || m.TriangleCount == 0)
        {
            report.Add($"The arrays do not fit together: {m.X.Length} x, {m.Y.Length} y, {m.Corners.Length} corners, {m.Neighbours.Length} neighbours, {m.Region.Length} regions.");
            return false;
        }

        int before = report.Lines.Count;
        for (int k = 0; k < m.Corners.Length; k++)
        {
            if (m.Corners[k] < 0 || m.Corners[k] >= m.VertexCount || m.Neighbours[k] < -1 || m.Neighbours[k] >= m.TriangleCount)
            {
                report.Add($"Triangle {k / 3} names vertex {m.Corners[k]} and neighbour {m.Neighbours[k]}, which do not exist.");
            }
        }

        foreach (MeshEdge e in m.Edges)
        {
            if (e.A < 0 || e.A >= m.VertexCount || e.B < 0 || e.B >= m.VertexCount || e.DomainEdge < 0 || e.DomainEdge >= m.Domain.Edges.Count
                || e.LeftTriangle < 0 || e.LeftTriangle >= m.TriangleCount || e.RightTriangle < -1 || e.RightTriangle >= m.TriangleCount)
            {
                report.Add($"An edge names vertices {e.A}, {e.B}, domain edge {e.DomainEdge}, triangles {e.LeftTriangle}, {e.RightTriangle}, not all of which exist.");
            }
        }

        return report.Lines.Count == before;
    }

    private static void CheckTriangles(TriangleMesh m, Report report)
    {
        for (int t = 0; t < m.TriangleCount; t++)
        {
            int a = m.Corners[3 * t], b = m.Corners[(3 * t) + 1], c = m.Corners[(3 * t) + 2];
            if (!(Predicates.Orient(m.X[a], m.Y[a], m.X[b], m.Y[b], m.X[c], m.Y[c]) > 0))
            {
                report.Add($"Triangle {t} ({a}, {b}, {c}) does not run counter-clockwise.");
            }
        }
    }

    private static void CheckNeighbours(TriangleMesh m, bool[] constrained, bool delaunay, Report report)
    {
        // Each directed edge may occur once.
        (long Key, int Side)[] sides = new (long, int)[m.Corners.Length];
        for (int k = 0; k < sides.Length; k++)
        {
            (int a, int b) = Side(m, k);
            sides[k] = (((long)a << 32) | (uint)b, k);
        }

        Array.Sort(sides);
        for (int i = 1; i < sides.Length; i++)
        {
            if (sides[i].Key == sides[i - 1].Key)
            {
                report.Add($"Triangles {sides[i - 1].Side / 3} and {sides[i].Side / 3} lie on the same side of one edge.");
            }
        }

        long[] keys = Array.ConvertAll(sides, s => s.Key);
        for (int k = 0; k < sides.Length; k++)
        {
            (int a, int b) = Side(m, k);
            int i = Array.BinarySearch(keys, ((long)b << 32) | (uint)a);
            int across = i < 0 ? -1 : sides[i].Side;
            int expected = across < 0 ? -1 : across / 3;
            if (m.Neighbours[k] != expected)
            {
                report.Add($"Triangle {k / 3} has neighbour {m.Neighbours[k]} across edge {a}-{b}, but {expected} lies there.");
            }

            if (across < 0 && !constrained[k])
            {
                report.Add($"Edge {a}-{b} of triangle {k / 3} ends the sheet but is no piece of the rim.");
            }

            if (delaunay && across > k && !constrained[k])
            {
                CheckDelaunay(m, k, across, report);
            }
        }
    }

    private static void CheckDelaunay(TriangleMesh m, int k, int across, Report report)
    {
        int t = k / 3;
        int a = m.Corners[3 * t], b = m.Corners[(3 * t) + 1], c = m.Corners[(3 * t) + 2], d = m.Corners[across];
        if (Predicates.InCircle(m.X[a], m.Y[a], m.X[b], m.Y[b], m.X[c], m.Y[c], m.X[d], m.Y[d]) > 0)
        {
            report.Add($"Triangles {t} and {across / 3} are not Delaunay: vertex {d} lies in the circle of the first.");
        }
    }

    private static (int A, int B) Side(TriangleMesh m, int k)
    {
        int t = 3 * (k / 3);
        return (m.Corners[t + ((k + 1) % 3)], m.Corners[t + ((k + 2) % 3)]);
    }

    // Says which sides of triangles are pieces of the outline.
    private static bool[] CheckEdges(TriangleMesh m, Report report)
    {
        bool[] constrained = new bool[m.Corners.Length];
        double tolerance = 1e-12 * (m.Domain.Size + m.Domain.Vertices.Max(p => p.Length));
        int[] last = new int[m.Domain.Edges.Count];
        double[] lastT = new double[m.Domain.Edges.Count];
        for (int e = 0; e < last.Length; e++)
        {
            last[e] = m.Domain.Edges[e].From;
        }

        foreach (MeshEdge e in m.Edges.OrderBy(e => e.DomainEdge).ThenBy(e => e.FromT))
        {
            DomainEdge d = m.Domain.Edges[e.DomainEdge];
            if (e.A != last[e.DomainEdge] || e.FromT != lastT[e.DomainEdge] || !(e.ToT > e.FromT))
            {
                report.Add($"The pieces of domain edge {e.DomainEdge} do not follow each other at t = {e.FromT}.");
            }

            (last[e.DomainEdge], lastT[e.DomainEdge]) = (e.B, e.ToT);
            if (Point2.Distance(d.Curve.At(e.ToT), new(m.X[e.B], m.Y[e.B])) > tolerance)
            {
                report.Add($"Vertex {e.B} does not lie on domain edge {e.DomainEdge} at t = {e.ToT}.");
            }

            Touch(e.LeftTriangle, e.A, e.B, e);
            if (d.IsRim != (e.RightTriangle < 0))
            {
                report.Add($"Edge {e.A}-{e.B} has triangle {e.RightTriangle} on its right but {(d.IsRim ? "is rim" : "lies inside the sheet")}.");
            }
            else if (!d.IsRim)
            {
                Touch(e.RightTriangle, e.B, e.A, e);
            }
        }

        for (int e = 0; e < last.Length; e++)
        {
            if (last[e] != m.Domain.Edges[e].To || lastT[e] != 1)
            {
                report.Add($"The pieces of domain edge {e} end at t = {lastT[e]}.");
            }
        }

        return constrained;

        void Touch(int t, int a, int b, MeshEdge e)
        {
            for (int k = 3 * t; k < (3 * t) + 3; k++)
            {
                if (Side(m, k) == (a, b))
                {
                    constrained[k] = true;
                    return;
                }
            }

            report.Add($"Triangle {t} does not have the edge {e.A}-{e.B} of domain edge {e.DomainEdge} on the side claimed.");
        }
    }

    private static void CheckVertices(TriangleMesh m, Report report)
    {
        for (int v = 0; v < m.Domain.Vertices.Count; v++)
        {
            if (m.Domain.Vertices[v] != new Point2(m.X[v], m.Y[v]))
            {
                report.Add($"Vertex {v} is not the domain's, bit for bit.");
            }
        }

        bool[] used = new bool[m.VertexCount];
        foreach (int v in m.Corners)
        {
            used[v] = true;
        }

        int unused = Array.IndexOf(used, false);
        if (unused >= 0)
        {
            report.Add($"Vertex {unused} belongs to no triangle.");
        }
    }

    private static void CheckArea(TriangleMesh m, Report report)
    {
        // Both sums relative to one point, so that a sheet far from the origin loses nothing.
        double x0 = m.X[0], y0 = m.Y[0], triangles = 0, outline = 0;
        for (int t = 0; t < m.TriangleCount; t++)
        {
            int a = m.Corners[3 * t], b = m.Corners[(3 * t) + 1], c = m.Corners[(3 * t) + 2];
            triangles += 0.5 * (((m.X[b] - m.X[a]) * (m.Y[c] - m.Y[a])) - ((m.Y[b] - m.Y[a]) * (m.X[c] - m.X[a])));
        }

        foreach (MeshEdge e in m.Edges)
        {
            if (m.Domain.Edges[e.DomainEdge].IsRim)
            {
                outline += 0.5 * (((m.X[e.A] - x0) * (m.Y[e.B] - y0)) - ((m.Y[e.A] - y0) * (m.X[e.B] - x0)));
            }
        }

        if (!(Math.Abs(triangles - outline) <= 1e-10 * m.Domain.Size * m.Domain.Size))
        {
            report.Add($"The triangles cover {triangles:G17} m² but the rim encloses {outline:G17} m².");
        }
    }

    private static void CheckRegions(TriangleMesh m, bool[] constrained, Report report)
    {
        if (m.Domain.Regions.Count == 0)
        {
            int other = Array.FindIndex(m.Region, r => r != -1);
            if (other >= 0)
            {
                report.Add($"Triangle {other} claims to lie under pad {m.Region[other]}, but there are no pads.");
            }

            return;
        }

        for (int k = 0; k < m.Corners.Length; k++)
        {
            int n = m.Neighbours[k];
            if (n >= 0 && !constrained[k] && m.Region[n] != m.Region[k / 3])
            {
                report.Add($"Triangles {k / 3} and {n} have no pad edge between them but lie under pads {m.Region[k / 3]} and {m.Region[n]}.");
            }
        }

        for (int t = 0; t < m.TriangleCount; t++)
        {
            int a = m.Corners[3 * t], b = m.Corners[(3 * t) + 1], c = m.Corners[(3 * t) + 2];
            Point2 centre = new((m.X[a] + m.X[b] + m.X[c]) / 3, (m.Y[a] + m.Y[b] + m.Y[c]) / 3);
            int expected = Regions.At(m.Domain, centre);
            if (expected != m.Region[t])
            {
                report.Add($"Triangle {t} lies under pad {expected}, not {m.Region[t]}.");
            }
        }
    }

    private sealed class Report
    {
        public List<string> Lines { get; } = [];

        public void Add(FormattableString text)
        {
            if (Lines.Count < MostMessages)
            {
                Lines.Add(text.ToString(CultureInfo.InvariantCulture));
            }
        }
    }
}
