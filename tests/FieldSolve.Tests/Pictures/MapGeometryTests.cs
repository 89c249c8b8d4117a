using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Pictures;

namespace FieldSolve.Tests.PicturesTests;

public class MapGeometryTests
{
    private const double R = 4e-6;

    private static FieldMap Map(double inner = 0, int rings = 8) => SyntheticDrive.Make(inner: inner, rings: rings, mapSteps: [10]).Maps[0];

    [Theory]
    [InlineData(0, 8, 1)]
    [InlineData(1.5e-6, 4, 0)]
    [InlineData(0, 20, 1)]
    public void Small_triangles_share_their_nodes_and_cover_the_sheet(double inner, int rings, int euler)
    {
        FineMesh mesh = FineMesh.Of(Map(inner, rings));
        HashSet<(int, int)> edges = [];
        double area = 0;
        for (int t = 0; t < mesh.Count; t++)
        {
            int[] n = mesh.Triangles[(3 * t)..((3 * t) + 3)];
            double twice = ((mesh.X[n[1]] - mesh.X[n[0]]) * (mesh.Y[n[2]] - mesh.Y[n[0]])) - ((mesh.Y[n[1]] - mesh.Y[n[0]]) * (mesh.X[n[2]] - mesh.X[n[0]]));
            Assert.True(twice > 0);
            area += twice / 2;
            for (int c = 0; c < 3; c++)
            {
                edges.Add((Math.Min(n[c], n[(c + 1) % 3]), Math.Max(n[c], n[(c + 1) % 3])));
            }
        }

        // Euler: nodes - edges + triangles is 1 for a disc and 0 for a ring.
        Assert.Equal(euler, mesh.X.Length - edges.Count + mesh.Count);
        double exact = Math.PI * ((R * R) - (inner * inner));
        Assert.Equal(exact, area, 2e-3 * exact);
    }

    [Fact]
    public void Quadratic_values_follow_the_element_and_straight_ones_stay_within_its_nodes()
    {
        FieldMap map = Map(rings: 1);
        FineMesh mesh = FineMesh.Of(map);

        // x and y are themselves quadratic over the curved element, so any linear function of them is reproduced.
        double[] linear = mesh.Quadratic([.. map.X.Zip(map.Y, (x, y) => (3 * x) - y)]);
        double[] spike = new double[map.X.Length];
        spike[0] = 1;
        for (int i = 0; i < linear.Length; i++)
        {
            Assert.Equal((3 * mesh.X[i]) - mesh.Y[i], linear[i], 1e-18);
        }

        Assert.All(mesh.Straight(spike), v => Assert.InRange(v, 0, 1));
        Assert.Contains(mesh.Quadratic(spike), v => v < 0);
    }

    [Theory]
    [InlineData(0)]
    [InlineData(1.5e-6)]
    public void Points_are_found_inside_and_only_inside(double inner)
    {
        FineMesh mesh = FineMesh.Of(Map(inner));
        TriangleFinder finder = new(mesh);
        for (int k = 0; k < 2000; k++)
        {
            // A spiral that crosses hole, sheet and outside.
            double r = 1.2 * R * k / 2000, angle = 0.7 * k;
            double x = r * Math.Cos(angle), y = r * Math.Sin(angle);
            double? found = finder.Value(mesh.X, x, y);
            if (r < 0.995 * R && r > 1.01 * inner)
            {
                Assert.Equal(x, found!.Value, 1e-15);
            }
            else if (r > 1.001 * R || r < 0.99 * inner)
            {
                Assert.Null(found);
            }
        }
    }

    [Fact]
    public void A_level_inside_the_sheet_is_one_closed_line()
    {
        FineMesh mesh = FineMesh.Of(Map());
        double[] square = [.. mesh.X.Zip(mesh.Y, (x, y) => (x * x) + (y * y))];
        Point2[] line = Assert.Single(LevelLines.Of(mesh, square, 0.3 * R * R));
        Assert.Equal(line[0], line[^1]);
        Assert.All(line, p => Assert.Equal(Math.Sqrt(0.3) * R, p.Length, 0.01 * R));
    }

    [Fact]
    public void A_level_that_meets_the_rim_is_open_and_a_hole_cuts_it()
    {
        FineMesh disc = FineMesh.Of(Map());
        Point2[] line = Assert.Single(LevelLines.Of(disc, disc.X, 0.11 * R));
        Assert.All(line, p => Assert.Equal(0.11 * R, p.X, 1e-15));
        Assert.Equal(2 * R * Math.Sqrt(1 - (0.11 * 0.11)), Point2.Distance(line[0], line[^1]), 0.01 * R);

        FineMesh ring = FineMesh.Of(Map(inner: 0.4 * R));
        Assert.Equal(2, LevelLines.Of(ring, ring.X, 0.11 * R).Count);
        Assert.Empty(LevelLines.Of(ring, ring.X, 2 * R));
    }

    [Fact]
    public void Streamlines_follow_the_field_keep_their_distance_and_respect_holes()
    {
        FineMesh mesh = FineMesh.Of(Map(inner: 0.4 * R));
        double spacing = R / 10;
        double[] vx = [.. mesh.X.Select(_ => 2.0)], vy = [.. mesh.X.Select(_ => 0.0)];
        IReadOnlyList<Point2[]> lines = Streamlines.Of(mesh, new(mesh), vx, vy, spacing);
        Assert.True(lines.Count > 15);
        foreach (Point2[] line in lines)
        {
            Assert.True(line[^1].X > line[0].X);
            Assert.All(line, p => Assert.Equal(line[0].Y, p.Y, 1e-12));
            Assert.All(line, p => Assert.InRange(p.Length, 0.398 * R, 1.001 * R));
        }

        for (int a = 0; a < lines.Count; a++)
        {
            for (int b = 0; b < a; b++)
            {
                double nearest = lines[a].Min(p => lines[b].Min(q => Point2.Distance(p, q)));
                Assert.True(nearest > 0.44 * spacing, $"{nearest / spacing}");
            }
        }
    }
}
