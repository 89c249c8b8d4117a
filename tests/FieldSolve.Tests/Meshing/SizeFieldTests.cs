using FieldSolve.Geometry;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;

namespace FieldSolve.Tests.MeshingTests;

public class SizeFieldTests
{
    [Theory]
    [InlineData(0)]
    [InlineData(3)]
    [InlineData(2000)]
    public void Graded_size_agrees_with_the_plain_minimum(int count)
    {
        Random random = new(5);
        SizePoint[] points = Enumerable.Range(0, count)
            .Select(_ => new SizePoint(random.NextDouble(), random.NextDouble(), Math.Pow(10, -10 * random.NextDouble()), 0.1 + (0.4 * random.NextDouble())))
            .ToArray();
        GradedSize field = new(0.3, points);
        for (int i = 0; i < 500; i++)
        {
            double x = (2 * random.NextDouble()) - 0.5, y = random.NextDouble();
            double expected = points.Aggregate(0.3, (h, p) => Math.Min(h, p.Size + (p.Growth * Point2.Distance(new(x, y), new(p.X, p.Y)))));
            Assert.Equal(expected, field.At(x, y), 1e-15);
        }

        Assert.All(points.Take(20), p => Assert.True(field.At(p.X, p.Y) <= p.Size));
    }

    [Fact]
    public void Nonsense_sizes_are_refused()
    {
        Assert.Throws<ArgumentOutOfRangeException>(() => new UniformSize(0));
        Assert.Throws<ArgumentOutOfRangeException>(() => new UniformSize(double.NaN));
        Assert.Throws<ArgumentOutOfRangeException>(() => new GradedSize(-1, []));
        Assert.Throws<ArgumentOutOfRangeException>(() => new GradedSize(1, [new(0, 0, 0, 0.1)]));
        Assert.Throws<ArgumentOutOfRangeException>(() => new GradedSize(1, [new(0, double.NaN, 1, 0.1)]));
        TriangleMesh mesh = Mesh();
        double[] ones = Enumerable.Repeat(1.0, mesh.VertexCount).ToArray();
        Assert.Throws<ArgumentException>(() => new VertexSize(mesh, ones.AsSpan(1), 0.3));
        Assert.Throws<ArgumentOutOfRangeException>(() => new VertexSize(mesh, ones, 0));
        ones[2] = -1;
        Assert.Throws<ArgumentOutOfRangeException>(() => new VertexSize(mesh, ones, 0.3));
        Assert.Throws<MeshException>(() => Mesher.Generate(mesh.Domain, new Hole()));
    }

    private sealed class Hole : ISizeField
    {
        public double At(double x, double y) => x > 0.5 ? double.NaN : 0.1;
    }

    private static TriangleMesh Mesh() => Mesher.Generate(TestDomains.Disc(1, [(0, 0.3)]), new UniformSize(0.2));

    [Fact]
    public void Vertex_size_interpolates_a_gentle_field_exactly()
    {
        TriangleMesh mesh = Mesh();
        double[] wanted = Enumerable.Range(0, mesh.VertexCount).Select(v => 0.5 + (0.1 * mesh.X[v]) - (0.05 * mesh.Y[v])).ToArray();
        VertexSize field = new(mesh, wanted, 0.3);
        Random random = new(6);
        for (int i = 0; i < 300; i++)
        {
            double r = 0.97 * Math.Sqrt(random.NextDouble()), a = 7 * random.NextDouble();
            (double x, double y) = (r * Math.Cos(a), r * Math.Sin(a));
            Assert.Equal(0.5 + (0.1 * x) - (0.05 * y), field.At(x, y), 1e-12);
        }
    }

    [Fact]
    public void Vertex_size_is_smoothed_and_bounded_outside()
    {
        TriangleMesh mesh = Mesh();
        double[] wanted = new double[mesh.VertexCount];
        Array.Fill(wanted, 1);
        wanted[0] = 0.01;
        VertexSize field = new(mesh, wanted, 0.25);
        for (int k = 0; k < mesh.Corners.Length; k++)
        {
            int a = mesh.Corners[k], b = mesh.Corners[(3 * (k / 3)) + ((k + 1) % 3)];
            double length = Point2.Distance(new(mesh.X[a], mesh.Y[a]), new(mesh.X[b], mesh.Y[b]));
            Assert.True(Math.Abs(field.Sizes[a] - field.Sizes[b]) <= (0.25 * length) + 1e-15);
        }

        Assert.Equal(0.01, field.At(mesh.X[0], mesh.Y[0]), 1e-12);
        foreach ((double x, double y) in new[] { (5.0, 0.0), (-3, 8), (0, -1.0001) })
        {
            Assert.InRange(field.At(x, y), 0.01, 1);
        }
    }

    [Fact]
    public void Vertex_size_drives_a_sound_mesh()
    {
        TriangleMesh mesh = Mesh();
        double[] wanted = Enumerable.Range(0, mesh.VertexCount).Select(v => v % 40 == 0 ? 1e-4 : 0.2).ToArray();
        MesherTests.Sound(mesh.Domain, new VertexSize(mesh, wanted, 0.3));
    }

    [Fact]
    public void Triangle_index_finds_the_triangle_or_the_nearest()
    {
        TriangleMesh mesh = Mesher.Generate(TestDomains.Ring(0.5, 1), new UniformSize(0.1));
        TriangleIndex index = new(mesh);
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            int a = mesh.Corners[3 * t], b = mesh.Corners[(3 * t) + 1], c = mesh.Corners[(3 * t) + 2];
            Assert.Equal(t, index.Find((mesh.X[a] + mesh.X[b] + mesh.X[c]) / 3, (mesh.Y[a] + mesh.Y[b] + mesh.Y[c]) / 3));
        }

        int outside = index.Find(3, 0);
        Assert.Contains(Enumerable.Range(0, 3), i => mesh.X[mesh.Corners[(3 * outside) + i]] > 0.97);
    }
}
