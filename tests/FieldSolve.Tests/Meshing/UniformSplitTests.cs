using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;

namespace FieldSolve.Tests.MeshingTests;

public class UniformSplitTests
{
    private static TriangleMesh Coarse()
    {
        TestDomains.Builder b = new();
        b.Circle(default, 1, [(0, 0.5)], false, 0);
        b.Circle(default, 0.3, [], true, 1);
        b.Pad([new(0.5, 0.5), new(0.6, 0.5), new(0.6, 0.6)], 1);
        return Mesher.Generate(b.Build([new(0.5, 0)]), new UniformSize(0.15));
    }

    [Fact]
    public void Children_corners_and_middles_are_where_promised()
    {
        TriangleMesh m = Coarse(), s = UniformSplit.Split(m, out int[] middles);
        Assert.Equal(middles, UniformSplit.EdgeMiddles(m));
        Assert.Equal(m.X, s.X[..m.VertexCount]);
        for (int t = 0; t < m.TriangleCount; t++)
        {
            int a = m.Corners[3 * t], b = m.Corners[(3 * t) + 1], c = m.Corners[(3 * t) + 2];
            int ab = middles[3 * t], bc = middles[(3 * t) + 1], ca = middles[(3 * t) + 2];
            Assert.Equal([a, ab, ca, ab, b, bc, ca, bc, c, ab, bc, ca], s.Corners[(12 * t)..((12 * t) + 12)]);
            Assert.All(s.Region[(4 * t)..((4 * t) + 4)], r => Assert.Equal(m.Region[t], r));
        }

        // In order of first occurrence.
        int next = m.VertexCount;
        foreach (int v in middles)
        {
            Assert.True(v <= next);
            next = Math.Max(next, v + 1);
        }

        Assert.Equal(s.VertexCount, next);
    }

    [Fact]
    public void Split_mesh_is_sound_but_for_the_Delaunay_property_at_arcs()
    {
        TriangleMesh s = UniformSplit.Split(UniformSplit.Split(Coarse()));
        Assert.DoesNotContain(MeshChecker.Check(s), line => !line.Contains("Delaunay", StringComparison.Ordinal));
    }

    [Fact]
    public void Straight_sheet_keeps_area_and_angles_and_stays_Delaunay()
    {
        TriangleMesh m = Mesher.Generate(TestDomains.Polygon([new(0, 0), new(1, 0), new(1.2, 1), new(0, 1)], [(0, 0.25, 0.5)]), new UniformSize(0.3));
        TriangleMesh s = UniformSplit.Split(m);
        Assert.Equal(MeshQuality.Of(m).Area, MeshQuality.Of(s).Area, 1e-14);
        Assert.Equal(MeshQuality.Of(m).MinimumAngle, MeshQuality.Of(s).MinimumAngle, 1e-9);
        Assert.DoesNotContain(MeshChecker.Check(s), line => !line.Contains("Delaunay", StringComparison.Ordinal));
    }

    [Fact]
    public void Middles_of_arc_pieces_lie_on_the_circle()
    {
        TriangleMesh s = UniformSplit.Split(Coarse());
        foreach (MeshEdge e in s.Edges.Where(e => s.Domain.Edges[e.DomainEdge].Curve.IsArc))
        {
            double radius = s.Domain.Edges[e.DomainEdge].Curve.Radius;
            Assert.Equal(radius, new Point2(s.X[e.A], s.Y[e.A]).Length, 1e-15);
        }
    }
}
