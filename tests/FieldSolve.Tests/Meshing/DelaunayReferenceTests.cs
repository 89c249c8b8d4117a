using FieldSolve.Geometry;
using FieldSolve.Meshing;
using NetTopologySuite.Geometries;
using NetTopologySuite.Triangulate;

namespace FieldSolve.Tests.MeshingTests;

public class DelaunayReferenceTests
{
    [Fact]
    public void Agrees_with_an_independent_library_on_random_points()
    {
        // Points in general position have one Delaunay triangulation; the rectangle's corners belong to the set.
        Random random = new(11);
        List<Point2> points = [new(0, 0), new(1, 0), new(1, 1), new(0, 1)];
        for (int i = 0; i < 400; i++)
        {
            points.Add(new(0.01 + (0.98 * random.NextDouble()), 0.01 + (0.98 * random.NextDouble())));
        }

        Triangulation mesh = new();
        mesh.BeginAt(0, points, 0, 0, 1, 1);
        int at = 0;
        for (int v = 4; v < points.Count; v++)
        {
            at = mesh.Locate(points[v].X, points[v].Y, at);
            mesh.FindCavity(at, points[v].X, points[v].Y);
            mesh.FillCavity(v);
        }

        HashSet<string> ours = [];
        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            ours.Add(Key(mesh.Corner[3 * t], mesh.Corner[(3 * t) + 1], mesh.Corner[(3 * t) + 2]));
        }

        DelaunayTriangulationBuilder builder = new();
        builder.SetSites(points.Select(p => new Coordinate(p.X, p.Y)).ToArray());
        HashSet<string> theirs = [];
        foreach (NetTopologySuite.Geometries.Geometry triangle in ((GeometryCollection)builder.GetTriangles(new GeometryFactory())).Geometries)
        {
            int[] v = [.. triangle.Coordinates.Take(3).Select(c => points.IndexOf(new(c.X, c.Y)))];
            theirs.Add(Key(v[0], v[1], v[2]));
        }

        Assert.Equal(2 * (points.Count - 4) + 2, ours.Count);
        Assert.True(ours.SetEquals(theirs));
    }

    private static string Key(params int[] v)
    {
        Array.Sort(v);
        return string.Join(' ', v);
    }
}
