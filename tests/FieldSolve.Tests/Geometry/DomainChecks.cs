using FieldSolve.Geometry;

namespace FieldSolve.Tests.GeometryTests;

/// <summary>What must hold for every domain.</summary>
internal static class DomainChecks
{
    /// <summary>Area enclosed by the rim.</summary>
    public static double RimArea(Domain d) => d.Edges.Where(e => e.IsRim).Sum(e => e.Curve.TwiceSweptArea(d.Vertices[0])) / 2;

    public static double RimLength(Domain d, int contact) => d.Edges.Where(e => e.IsRim && e.Contact == contact).Sum(e => e.Curve.Length);

    public static double InnerLength(Domain d) => d.Edges.Where(e => !e.IsRim).Sum(e => e.Curve.Length);

    public static void Sound(Domain d, Outline live, IReadOnlyList<ContactPlacement> contacts)
    {
        double tolerance = 1e-9 * d.Size;
        var balance = new int[d.Vertices.Count];
        var met = new bool[d.Vertices.Count];
        foreach (DomainEdge e in d.Edges)
        {
            Assert.Equal(d.Vertices[e.From], e.Curve.Start);
            Assert.Equal(d.Vertices[e.To], e.Curve.End);
            Assert.NotEqual(e.From, e.To);
            Assert.True(e.Curve.Length > tolerance / 2, $"an edge of length {e.Curve.Length:G3} in a sheet of {d.Size:G3}");
            Assert.True(Math.Abs(e.Curve.Sweep) < 1.6);
            met[e.From] = met[e.To] = true;
            if (e.IsRim)
            {
                balance[e.From]++;
                balance[e.To]--;
            }
            else
            {
                Assert.Equal(-1, e.Contact);
                Assert.False(e.Curve.IsArc);
            }
        }

        Assert.All(balance, b => Assert.Equal(0, b));
        Assert.All(d.Tips, t => met[t] = true);
        Assert.DoesNotContain(false, met);
        Apart(d.Vertices, tolerance / 2);
        MeetOnlyAtVertices(d);
        SheetOnTheLeft(d, live, contacts);

        // A tip off all edges stands on bare sheet.
        HashSet<int> joined = [.. d.Edges.SelectMany(e => new[] { e.From, e.To })];
        PadArea[] metal = [.. contacts.Where(c => c.IdealPad).Select(c => new PadArea(c.Pad!))];
        foreach (Point2 p in d.Tips.Where(t => !joined.Contains(t)).Select(t => d.Vertices[t]))
        {
            Assert.True(live.SignedDistance(p) > tolerance);
            Point2[] around = [new(1, 0), new(0, 1), new(-1, 0), new(0, -1)];
            Assert.DoesNotContain(around, step => metal.Any(m => m.Covers(p + (tolerance * step))));
        }
    }

    private static void Apart(IReadOnlyList<Point2> points, double least)
    {
        Point2[] sorted = [.. points.OrderBy(p => p.X)];
        for (int i = 0; i < sorted.Length; i++)
        {
            for (int j = i + 1; j < sorted.Length && sorted[j].X - sorted[i].X <= least; j++)
            {
                Assert.True(Point2.Distance(sorted[i], sorted[j]) > least);
            }
        }
    }

    private static void MeetOnlyAtVertices(Domain d)
    {
        double tolerance = 1e-9 * d.Size;
        for (int i = 0; i < d.Edges.Count; i++)
        {
            for (int j = 0; j < d.Edges.Count; j++)
            {
                DomainEdge a = d.Edges[i], b = d.Edges[j];
                if (i == j || a.Curve.IsArc || !a.Curve.Bounds().Meets(b.Curve.Bounds()))
                {
                    continue; // two arcs come from one circle or from concentric ones
                }

                foreach (Point2 p in CurveMeasures.Crossings(a.Curve, b.Curve, tolerance))
                {
                    double end = new[] { a.Curve.Start, a.Curve.End, b.Curve.Start, b.Curve.End }.Min(q => Point2.Distance(p, q));
                    Assert.True(end <= 1e-6 * d.Size, $"edges {i} and {j} cross");
                }
            }
        }
    }

    private static void SheetOnTheLeft(Domain d, Outline live, IReadOnlyList<ContactPlacement> contacts)
    {
        PadArea[] metal = [.. contacts.Where(c => c.IdealPad).Select(c => new PadArea(c.Pad!))];
        foreach (DomainEdge e in d.Edges)
        {
            double step = Math.Min(1e-4 * e.Curve.Length, 1e-4 * d.Size);
            if (step < 1e-8 * d.Size)
            {
                continue;
            }

            Point2 normal = e.Curve.Tangent(0.5).Left, middle = e.Curve.At(0.5);
            Assert.True(IsSheet(middle + (step * normal)), "no sheet to the left");
            Assert.Equal(!e.IsRim, IsSheet(middle - (step * normal)));
        }

        bool IsSheet(Point2 p) => live.SignedDistance(p) > 0 && !metal.Any(m => m.Covers(p));
    }

    /// <summary>A pad by crossing numbers, independent of the code under test.</summary>
    private sealed record PadArea(IReadOnlyList<Point2> Corners)
    {
        public bool Covers(Point2 p)
        {
            bool inside = false;
            for (int i = 0; i < Corners.Count; i++)
            {
                Point2 a = Corners[i], b = Corners[(i + 1) % Corners.Count];
                if (a.Y > p.Y != b.Y > p.Y && p.X < a.X + ((p.Y - a.Y) / (b.Y - a.Y) * (b.X - a.X)))
                {
                    inside = !inside;
                }
            }

            return inside;
        }
    }
}
