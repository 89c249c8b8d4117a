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

    [Fact]
    public void Numbers_that_lead_nowhere_are_found()
    {
        TriangleMesh m = Good();
        int n = m.VertexCount, t = m.TriangleCount;
        foreach (int wrong in new[] { -1, n })
        {
            Finds(With(m, corners: Changed(m.Corners, 4, wrong)), $"Triangle 1 names vertex {wrong}");
        }

        foreach (int wrong in new[] { -2, t })
        {
            Finds(With(m, neighbours: Changed(m.Neighbours, 3, wrong)), $"neighbour {wrong}, which do not exist");
        }

        MeshEdge e = m.Edges[0];
        MeshEdge[] broken =
        [
            e with { A = -1 }, e with { A = n }, e with { B = -1 }, e with { B = n }, e with { DomainEdge = -1 }, e with { DomainEdge = m.Domain.Edges.Count },
            e with { LeftTriangle = -1 }, e with { LeftTriangle = t }, e with { RightTriangle = -2 }, e with { RightTriangle = t },
        ];
        Assert.All(broken, edge => Finds(With(m, edges: [edge, .. m.Edges.Skip(1)]), "not all of which exist"));

        // Arrays of other lengths are said before anything is looked up in them.
        TriangleMesh[] torn =
        [
            With(m, x: m.X[1..]), With(m, corners: m.Corners[1..]), With(m, neighbours: m.Neighbours[3..]), With(m, region: m.Region[1..]), With(m, corners: [], neighbours: [], region: []),
        ];
        Assert.All(torn, mesh => Assert.StartsWith("The arrays do not fit together: ", Assert.Single(MeshChecker.Check(mesh)), StringComparison.Ordinal));
    }

    [Fact]
    public void Domains_that_no_mesh_can_follow_are_refused_with_the_place()
    {
        Domain good = Good().Domain;
        string Refused(Domain domain) => Assert.Throws<MeshException>(() => Mesher.Generate(domain, new UniformSize(0.2))).Message;
        Domain Edge(int k, DomainEdge edge) => good with { Edges = [.. good.Edges.Select((e, i) => i == k ? edge : e)] };
        Domain Vertex(int k, Point2 p) => good with { Vertices = [.. good.Vertices.Select((v, i) => i == k ? p : v)] };
        DomainEdge first = good.Edges[0];
        Assert.Equal("The sheet has no rim. Give its outline.", Refused(good with { Edges = [] }));
        Assert.StartsWith("Vertex 1 of the outline is at (NaN, 0) m.", Refused(Vertex(1, new(double.NaN, 0))), StringComparison.Ordinal);
        Assert.StartsWith("Vertex 1 of the outline is at (0, ", Refused(Vertex(1, new(0, double.PositiveInfinity))), StringComparison.Ordinal);
        Assert.StartsWith("Vertices 0 and 1 of the outline coincide", Refused(Vertex(1, good.Vertices[0])), StringComparison.Ordinal);
        int count = good.Vertices.Count;
        foreach ((int from, int to) in new[] { (-1, first.To), (first.From, -1), (count, first.To), (first.From, count), (first.From, first.From) })
        {
            Assert.StartsWith($"Edge 0 of the outline runs from vertex {from} to vertex {to}.", Refused(Edge(0, first with { From = from, To = to })), StringComparison.Ordinal);
        }

        Point2 off = new(3, 3);
        Assert.Contains("does not start and end at its vertices bit for bit", Refused(Edge(0, first with { Curve = Curve.Segment(off, first.Curve.End) })), StringComparison.Ordinal);
        Assert.Contains("does not start and end at its vertices bit for bit", Refused(Edge(0, first with { Curve = Curve.Segment(first.Curve.Start, off) })), StringComparison.Ordinal);
    }
}
