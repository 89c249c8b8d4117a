using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;

namespace FieldSolve.Tests.MeshingTests;

public class MeshCheckerTests
{
    private static TriangleMesh Good()
    {
        TestDomains.Builder b = new();
        b.Circle(default, 1, [(0, 0.5)], false, 0);
        b.Pad([new(-0.2, -0.2), new(0.2, -0.2), new(0.2, 0.2), new(-0.2, 0.2)], 1);
        return Mesher.Generate(b.Build([new(0.5, 0.5)]), new UniformSize(0.2));
    }

    private static TriangleMesh With(
        TriangleMesh m, Domain? domain = null, double[]? x = null, int[]? corners = null, int[]? neighbours = null, int[]? region = null, MeshEdge[]? edges = null) => new()
        {
            Domain = domain ?? m.Domain,
            X = x ?? m.X,
            Y = m.Y,
            Corners = corners ?? m.Corners,
            Neighbours = neighbours ?? m.Neighbours,
            Region = region ?? m.Region,
            Edges = edges ?? m.Edges,
        };

    private static T[] Changed<T>(T[] array, int i, T value)
    {
        T[] copy = [.. array];
        copy[i] = value;
        return copy;
    }

    private static void Finds(TriangleMesh broken, string part) =>
        Assert.Contains(MeshChecker.Check(broken), line => line.Contains(part, StringComparison.Ordinal));

    [Fact]
    public void Good_mesh_has_no_faults() => Assert.Empty(MeshChecker.Check(Good()));

    [Fact]
    public void Turned_triangle_is_found()
    {
        TriangleMesh m = Good();
        int[] corners = [.. m.Corners];
        (corners[0], corners[1]) = (corners[1], corners[0]);
        Finds(With(m, corners: corners), "counter-clockwise");
    }

    [Fact]
    public void Wrong_neighbour_is_found()
    {
        TriangleMesh m = Good();
        int k = Array.FindIndex(m.Neighbours, n => n > 1);
        Finds(With(m, neighbours: Changed(m.Neighbours, k, -1)), "lies there");
    }

    [Fact]
    public void Doubled_triangle_is_found()
    {
        TriangleMesh m = Good();
        Finds(With(m, corners: [.. m.Corners, .. m.Corners[..3]], neighbours: [.. m.Neighbours, .. m.Neighbours[..3]], region: [.. m.Region, m.Region[0]]), "same side");
    }

    [Fact]
    public void Missing_triangle_is_found()
    {
        TriangleMesh m = Good();
        Finds(With(m, corners: m.Corners[..^3], neighbours: m.Neighbours[..^3], region: m.Region[..^1]), "do not exist");
    }

    [Fact]
    public void Flipped_edge_is_found()
    {
        // A quadrangle cut along its wrong diagonal.
        Domain d = TestDomains.Polygon([new(0, 0), new(2, 0), new(2.5, 1), new(0, 1)]);
        TriangleMesh m = Mesher.Generate(d, new UniformSize(100), new MeshOptions { MinimumAngleDegrees = 0 });
        Assert.Equal(2, m.TriangleCount);
        int[] before = m.Corners;
        bool cut02 = Has(before, 0, 0) && Has(before, 0, 2) && Has(before, 1, 0) && Has(before, 1, 2);
        int[] corners = cut02 ? [0, 1, 3, 1, 2, 3] : [0, 1, 2, 0, 2, 3];
        int[] neighbours = cut02 ? [1, -1, -1, -1, 0, -1] : [-1, 1, -1, -1, -1, 0];
        MeshEdge[] edges = [.. m.Edges.Select(e => e with { LeftTriangle = Enumerable.Range(0, 2).First(t => Has(corners, t, e.A) && Has(corners, t, e.B)) })];
        IReadOnlyList<string> faults = MeshChecker.Check(With(m, corners: corners, neighbours: neighbours, edges: edges));
        Assert.Contains("Delaunay", Assert.Single(faults), StringComparison.Ordinal);
    }

    private static bool Has(int[] corners, int t, int v) => corners.AsSpan(3 * t, 3).Contains(v);

    [Fact]
    public void Moved_vertices_are_found()
    {
        TriangleMesh m = Good();
        Finds(With(m, x: Changed(m.X, 0, m.X[0] * (1 + 1e-15))), "bit for bit");
        MeshEdge onArc = m.Edges.First(e => e.ToT < 1);
        Finds(With(m, x: Changed(m.X, onArc.B, m.X[onArc.B] + 1e-6)), "does not lie on domain edge");
    }

    [Fact]
    public void Wrong_pieces_are_found()
    {
        TriangleMesh m = Good();
        Finds(With(m, edges: m.Edges[1..]), "do not follow each other");
        Finds(With(m, edges: m.Edges[1..]), "no piece of the rim");
        Finds(With(m, edges: Changed(m.Edges, 0, m.Edges[0] with { LeftTriangle = (m.Edges[0].LeftTriangle + 40) % m.TriangleCount })), "on the side claimed");
        Finds(With(m, edges: Changed(m.Edges, 0, m.Edges[0] with { RightTriangle = 0 })), "is rim");
        Finds(With(m, edges: m.Edges[..^1]), "end at t");
    }

    [Fact]
    public void Wrong_regions_are_found()
    {
        TriangleMesh m = Good();
        int t = Array.IndexOf(m.Region, 1);
        Finds(With(m, region: Changed(m.Region, t, -1)), "lies under pad 1");
        Finds(With(m, region: Changed(m.Region, t, -1)), "no pad edge between them");
        Finds(With(m, domain: m.Domain with { Regions = [] }), "no pads");
    }

    [Fact]
    public void Lost_area_is_found()
    {
        // The second triangle twice and the first not at all.
        TriangleMesh m = Good();
        int[] corners = [.. m.Corners];
        (corners[0], corners[1], corners[2]) = (corners[3], corners[4], corners[5]);
        Finds(With(m, corners: corners), "rim encloses");
    }

    [Fact]
    public void Unused_vertex_and_bad_lengths_are_found()
    {
        TriangleMesh m = Good();
        Finds(With(m, x: m.X[..^1]), "do not fit");
        Finds(With(m, corners: Changed(m.Corners, 0, 100000)), "do not exist");
        int tip = m.Domain.Tips[0];
        Finds(With(m, corners: [.. m.Corners.Select(v => v == tip ? 0 : v)]), "no triangle");
    }
}
