using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;

namespace FieldSolve.Tests.MeshingTests;

public class MesherTests
{
    // Every promise kept, and no angle under the limit but for sharp corners.
    internal static TriangleMesh Sound(Domain domain, ISizeField size, double minimumAngle = 25)
    {
        TriangleMesh mesh = Mesher.Generate(domain, size);
        Assert.Empty(MeshChecker.Check(mesh));
        MeshQuality q = MeshQuality.Of(mesh);
        Assert.True(q.MinimumAngleAwayFromSharpCorners >= minimumAngle, $"smallest angle {q.MinimumAngleAwayFromSharpCorners}");
        return mesh;
    }

    private static Domain TwelveContacts() => TestDomains.Disc(1, Enumerable.Range(0, 12).Select(k => (k * Math.PI / 6, 0.1)));

    internal static GradedSize Graded(Domain domain, double background, double smallest, double growth) =>
        new(background, domain.Vertices.Select(p => new SizePoint(p.X, p.Y, smallest, growth)));

    private static readonly Point2[] HallBar =
    [
        new(0, 0), new(2, 0), new(2, -0.5), new(2.2, -0.5), new(2.2, 0), new(5, 0), new(5, 1), new(2.2, 1), new(2.2, 1.5), new(2, 1.5), new(2, 1), new(0, 1),
    ];

    [Theory]
    [InlineData(1e-6)]
    [InlineData(1e-9)]
    public void Disc_with_twelve_contacts_graded_to_their_ends(double smallest)
    {
        Domain disc = TwelveContacts();
        MeshQuality q = MeshQuality.Of(Sound(disc, Graded(disc, 0.1, smallest, 0.3)));
        Assert.InRange(q.SmallestEdge, 0.3 * smallest, 2 * smallest);
        Assert.InRange(q.LargestEdge, 0.05, 0.15);
    }

    [Fact]
    public void Triangle_count_stays_close_to_what_the_size_field_asks()
    {
        // Equilateral triangles of edge h have area sqrt(3)/4 h^2.
        Domain disc = TwelveContacts();
        foreach (ISizeField size in new ISizeField[] { new UniformSize(0.03), Graded(disc, 0.1, 1e-5, 0.15) })
        {
            TriangleMesh mesh = Sound(disc, size);
            double ideal = 0;
            double sixth = 1.0 / 6;
            for (int t = 0; t < mesh.TriangleCount; t++)
            {
                int a = mesh.Corners[3 * t], b = mesh.Corners[(3 * t) + 1], c = mesh.Corners[(3 * t) + 2];
                double h = size.At(2 * sixth * (mesh.X[a] + mesh.X[b] + mesh.X[c]), 2 * sixth * (mesh.Y[a] + mesh.Y[b] + mesh.Y[c]));
                double twice = ((mesh.X[b] - mesh.X[a]) * (mesh.Y[c] - mesh.Y[a])) - ((mesh.Y[b] - mesh.Y[a]) * (mesh.X[c] - mesh.X[a]));
                ideal += twice / 2 / (Math.Sqrt(3) / 4 * h * h);
            }

            Assert.InRange(mesh.TriangleCount / ideal, 0.8, 1.35);
        }
    }

    [Theory]
    [InlineData(0.5)]
    [InlineData(0.05)]
    public void Square_with_a_hole(double h)
    {
        Domain square = TestDomains.Polygon(
            [new(0, 0), new(1, 0), new(1, 1), new(0, 1)],
            [(1, 0.2, 0.4), (3, 0, 1)],
            [[new(0.4, 0.4), new(0.4, 0.6), new(0.6, 0.6), new(0.6, 0.4)]]);
        TriangleMesh mesh = Sound(square, new UniformSize(h));
        Assert.Equal(0.96, MeshQuality.Of(mesh).Area, 1e-12);
    }

    [Theory]
    [InlineData(0.3)]
    [InlineData(0.99)]
    public void Ring_keeps_its_hole_open(double inner)
    {
        TriangleMesh mesh = Sound(TestDomains.Ring(inner, 1, [(0, 0.5), (3, 0.5)], [(1, 0.2)]), new UniformSize(0.06));
        double area = Math.PI * (1 - (inner * inner));
        Assert.Equal(area, MeshQuality.Of(mesh).Area, 0.01 * area);
    }

    [Fact]
    public void Hall_bar_with_reentrant_corners()
    {
        Domain bar = TestDomains.Polygon(HallBar, [(11, 0, 1), (5, 0, 1), (2, 0, 1), (8, 0, 1)]);
        Sound(bar, Graded(bar, 0.2, 1e-4, 0.3));
        Sound(bar, new UniformSize(2));
    }

    [Fact]
    public void Flake_with_a_thin_tear()
    {
        Domain flake = TestDomains.Polygon(
            [new(0, 0), new(2, 0), new(1.9, 1.2), new(1.00001, 1.3), new(1, 0.3), new(0.99999, 1.3), new(0.1, 1)], [(0, 0.2, 0.4)]);
        Sound(flake, new UniformSize(0.1));
    }

    [Fact]
    public void Resistive_pads_are_inner_edges_with_regions()
    {
        TestDomains.Builder b = new();
        b.Polygon([new(0, 0), new(1, 0), new(1, 1), new(0, 1)], [(0, 0.1, 0.2)]);
        b.Pad([new(0.3, 0.3), new(0.6, 0.35), new(0.55, 0.6)], 1);
        b.Pad([new(0.7, 0.7), new(0.9, 0.7), new(0.9, 0.7001), new(0.7, 0.7001)], 2);
        TriangleMesh mesh = Sound(b.Build(null), new UniformSize(0.05));
        double first = 0;
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            int i = mesh.Corners[3 * t], j = mesh.Corners[(3 * t) + 1], k = mesh.Corners[(3 * t) + 2];
            double area = 0.5 * (((mesh.X[j] - mesh.X[i]) * (mesh.Y[k] - mesh.Y[i])) - ((mesh.Y[j] - mesh.Y[i]) * (mesh.X[k] - mesh.X[i])));
            first += mesh.Region[t] == 1 ? area : 0;
        }

        Assert.Equal(0.5 * ((0.3 * 0.3) - (0.05 * 0.25)), first, 1e-12);
        Assert.Contains(2, mesh.Region);
        Assert.Contains(-1, mesh.Region);
    }

    [Fact]
    public void Pad_edge_that_meets_the_rim_at_a_grazing_angle()
    {
        Point2 a = new(0.2, 0), b = new(0.9, 0.02), c = new(0.9, 0.3);
        TestDomains.Builder build = new();
        build.Polygon([new(0, 0), a, new(1, 0), new(1, 1), new(0, 1)], []);
        build.Pad([a, b, c], 0);
        Sound(build.Build(null), new UniformSize(0.1));
    }

    [Fact]
    public void Two_components()
    {
        TestDomains.Builder b = new();
        b.Polygon([new(0, 0), new(1, 0), new(1, 1), new(0, 1)], []);
        b.Circle(new(2.0001, 0.5), 1, [(Math.PI, 0.1)], false, 0);
        TriangleMesh mesh = Sound(b.Build(null), new UniformSize(0.2));
        Assert.Equal(1 + Math.PI, MeshQuality.Of(mesh).Area, 0.05);
    }

    [Theory]
    [InlineData(1)]
    [InlineData(0.02)]
    public void Corner_of_five_degrees(double h)
    {
        Domain wedge = TestDomains.Polygon([new(0, 0), new(2, 0), new(2, 2 * Math.Tan(5 * Math.PI / 180))]);
        TriangleMesh mesh = Sound(wedge, new UniformSize(h));
        MeshQuality q = MeshQuality.Of(mesh);
        Assert.InRange(q.MinimumAngle, 4, 5.0001);
        Assert.True(q.Triangles < 20 + (4 * 2 * 0.175 / (0.43 * h * h)));
    }

    [Fact]
    public void Lens_of_two_arcs_meeting_at_a_sharp_angle()
    {
        TestDomains.Builder b = new();
        const double Half = 0.1;
        double radius = 1 / Math.Sin(Half), down = radius * Math.Cos(Half);
        Point2 right = new(1, 0), left = new(-1, 0);
        b.Arc(Curve.Arc(new(0, -down), radius, (Math.PI / 2) - Half, 2 * Half, right, left));
        b.Arc(Curve.Arc(new(0, down), radius, (-Math.PI / 2) - Half, 2 * Half, left, right));
        Sound(b.Build(null), new UniformSize(0.05));
    }

    [Fact]
    public void Tips_close_to_the_rim_and_in_the_bulk()
    {
        Domain disc = TestDomains.Disc(1, [(0, 0.2), (3, 0.2)], default, [new(0, 1 - 1e-4), new(0.1, 0)]);
        TriangleMesh mesh = Sound(disc, new GradedSize(0.1, [new(0.1, 0, 1e-7, 0.3)]));
        Assert.Contains(disc.Tips[0], mesh.Corners);
    }

    [Fact]
    public void Narrow_contacts_close_together()
    {
        Domain disc = TestDomains.Disc(1, [(0, 1e-3), (2e-3, 1e-3), (2, 1e-6)]);
        TriangleMesh mesh = Sound(disc, new UniformSize(0.1));
        Assert.True(mesh.TriangleCount < 2000);
    }

    [Fact]
    public void Size_does_not_matter()
    {
        int[]? corners = null;
        foreach (double scale in new[] { 1, Math.ScaleB(1, -23), Math.ScaleB(1, -3) })
        {
            Domain bar = TestDomains.Polygon([.. HallBar.Select(p => scale * p)], [(11, 0, 1), (2, 0.2, 0.4)]);
            TriangleMesh mesh = Sound(bar, Graded(bar, 0.2 * scale, 1e-4 * scale, 0.3));
            Assert.Equal(corners ??= mesh.Corners, mesh.Corners);
        }

        foreach (double scale in new[] { 1e-7, 1e-4, 1e-1 })
        {
            Domain bar = TestDomains.Polygon([.. HallBar.Select(p => scale * p)], [(11, 0, 1), (2, 0.2, 0.4)]);
            TriangleMesh mesh = Sound(bar, Graded(bar, 0.2 * scale, 1e-4 * scale, 0.3));
            Assert.InRange(mesh.Corners.Length, 0.98 * corners!.Length, 1.02 * corners.Length);
        }
    }

    [Fact]
    public void Sheet_far_from_the_origin()
    {
        Domain disc = TestDomains.Disc(1e-3, [(0, 0.2), (3, 0.01)], new(10, -25));
        Sound(disc, Graded(disc, 1e-4, 1e-9, 0.3));
    }

    [Fact]
    public void Same_input_gives_the_same_bits()
    {
        Domain disc = TwelveContacts();
        TriangleMesh first = Mesher.Generate(disc, Graded(disc, 0.1, 1e-3, 0.3)), second = Mesher.Generate(TwelveContacts(), Graded(disc, 0.1, 1e-3, 0.3));
        Assert.Equal(first.X, second.X);
        Assert.Equal(first.Y, second.Y);
        Assert.Equal(first.Corners, second.Corners);
        Assert.Equal(first.Edges, second.Edges);
    }

    [Fact]
    public void Coarse_field_still_follows_arcs_within_an_eighth_of_a_turn()
    {
        TriangleMesh mesh = Sound(TestDomains.Disc(1, []), new UniformSize(100));
        Assert.All(mesh.Edges, e => Assert.True((e.ToT - e.FromT) * Math.PI <= (Math.PI / 4) + 1e-9));
    }

    [Fact]
    public void Faulty_outlines_are_refused_with_a_place()
    {
        Point2[] bow = [new(0, 0), new(1, 1), new(1, 0), new(0, 1)];
        Refused(TestDomains.Polygon(bow), "crosses");
        Refused(TestDomains.Polygon([new(0, 0), new(0, 1), new(1, 1), new(1, 0)]), "outer side");
        Point2[] square = [new(0, 0), new(1, 0), new(1, 1), new(0, 1)];
        Refused(TestDomains.Polygon(square, tips: [new(2, 2)]), "(2, 2)");
        Refused(TestDomains.Polygon(square, tips: [new(0.5, 0)]), "lies on the edge");
        TestDomains.Builder open = new();
        open.Segment(square[0], square[1]);
        open.Segment(square[1], square[2]);
        Refused(open.Build(null), "does not close");
        TestDomains.Builder cusp = new();
        cusp.Circle(default, 1, [], false, 0);
        cusp.Circle(new(0.5, 0), 0.5, [], true, 0);
        Refused(cusp.Build(null), "no angle");
        Domain good = TestDomains.Polygon(square);
        Refused(good with { Vertices = [.. good.Vertices, new(0, 0)] }, "coincide");
        Refused(good with { Vertices = [.. good.Vertices.Select(p => p + new Point2(1e-12, 0))] }, "bit for bit");
    }

    private static void Refused(Domain domain, string part)
    {
        MeshException e = Assert.Throws<MeshException>(() => Mesher.Generate(domain, new UniformSize(0.3)));
        Assert.Contains(part, e.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Too_many_triangles_bad_options_and_cancelling_are_reported()
    {
        Domain disc = TwelveContacts();
        Assert.Throws<MeshException>(() => Mesher.Generate(disc, new UniformSize(0.01), new MeshOptions { MaxTriangles = 5000 }));
        Assert.Throws<MeshException>(() => Mesher.Generate(disc, new UniformSize(1e-9), new MeshOptions { MaxTriangles = 5000 }));
        Assert.Throws<ArgumentOutOfRangeException>(() => Mesher.Generate(disc, new UniformSize(1), new MeshOptions { MinimumAngleDegrees = 40 }));
        Assert.Throws<ArgumentOutOfRangeException>(() => Mesher.Generate(disc, new UniformSize(1), new MeshOptions { MaxTriangles = 0 }));
        using CancellationTokenSource stop = new();
        stop.Cancel();
        Assert.Throws<OperationCanceledException>(() => Mesher.Generate(disc, new UniformSize(0.05), null, stop.Token));
    }
}
