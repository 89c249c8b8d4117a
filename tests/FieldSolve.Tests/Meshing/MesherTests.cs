using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;

namespace FieldSolve.Tests.MeshingTests;

public class MesherTests
{
    internal static TriangleMesh Sound(Domain domain, ISizeField size, double minimumAngle = 25)
    {
        TriangleMesh mesh = Mesher.Generate(domain, size);
        Assert.Empty(MeshChecker.Check(mesh));
        MeshQuality q = MeshQuality.Of(mesh);
        Assert.True(q.MinimumAngleAwayFromSharpCorners >= minimumAngle, $"smallest angle {q.MinimumAngleAwayFromSharpCorners}");
        return mesh;
    }

    [Fact]
    public void Disc_with_twelve_contacts_graded_to_a_millionth()
    {
        Domain disc = TestDomains.Disc(1, Enumerable.Range(0, 12).Select(k => (k * Math.PI / 6, 0.1)));
        GradedSize size = new(0.1, disc.Vertices.Select(p => new SizePoint(p.X, p.Y, 1e-6, 0.3)));
        TriangleMesh mesh = Sound(disc, size);
        Assert.True(MeshQuality.Of(mesh).SmallestEdge < 2e-6);
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

    [Fact]
    public void Ring_keeps_its_hole_open()
    {
        TriangleMesh mesh = Sound(TestDomains.Ring(0.3, 1, [(0, 0.5), (3, 0.5)]), new UniformSize(0.06));
        Assert.Equal(Math.PI * (1 - 0.09), MeshQuality.Of(mesh).Area, 0.01);
    }
}
