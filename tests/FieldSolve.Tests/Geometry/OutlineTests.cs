using FieldSolve.Geometry;
using FsCheck;
using FsCheck.Xunit;
using NetTopologySuite.Geometries;
using NetTopologySuite.IO;

namespace FieldSolve.Tests.GeometryTests;

public class OutlineTests
{
    private static readonly Outline _ring = Shapes.Ring(1, 4);

    private static readonly Outline _holed = Shapes.Polygon(
        Shapes.Rectangle(0, 0, 10, 6),
        Shapes.Rectangle(2, 2, 4, 4),
        [new(6, 2), new(8, 2), new(7, 4)]);

    [Fact]
    public void Areas_and_lengths_are_exact_with_arcs()
    {
        Assert.Equal(Math.PI * 15, _ring.Area, 12);
        Assert.Equal(8 * Math.PI, _ring.LoopLength(0), 12);
        Assert.Equal(2 * Math.PI, _ring.LoopLength(1), 12);
        Assert.Equal(8 * Math.Sqrt(2), _ring.Size, 12);
        Assert.Equal(60 - 4 - 2, _holed.Area, 12);
        Assert.Equal(Math.PI, Shapes.Disc(1e-6, new(1, 1)).Area / 1e-12, 8); // far from the origin
    }

    [Fact]
    public void Loops_turn_their_right_way_whatever_was_given()
    {
        Outline turned = new([.. _holed.Loops.Select(l => l.Reverse().Select(c => c.Reversed()).ToArray())]);
        for (int i = 0; i < 3; i++)
        {
            Assert.Equal(_holed.Loops[i], turned.Loops[i]);
            Assert.Equal(i == 0, Outline.SignedArea(turned.Loops[i]) > 0);
        }
    }

    [Fact]
    public void Circle_closes_bit_for_bit_in_quarters()
    {
        IReadOnlyList<Curve> loop = Shapes.Disc(0.3).Loops[0];
        Assert.Equal(4, loop.Count);
        for (int k = 0; k < 4; k++)
        {
            Assert.Equal(loop[k].End, loop[(k + 1) % 4].Start);
        }
    }

    [Fact]
    public void Places_run_round_from_the_first_point()
    {
        Assert.Equal(new Point2(4, 0), _ring.At(0, 0));
        Assert.Equal(0, Point2.Distance(new(0, 4), _ring.At(0, 2 * Math.PI)), 12);
        Assert.Equal(0, Point2.Distance(new(0, 4), _ring.At(0, -6 * Math.PI)), 12);
        Assert.Equal(0, Point2.Distance(new(0, -1), _ring.At(1, Math.PI / 2)), 12); // holes run clockwise
        RimPlace p = _ring.Nearest(new(0, 3));
        Assert.Equal((0, 1.0), (p.Loop, Math.Round(p.Distance, 12)));
        Assert.Equal(2 * Math.PI, p.S, 12);
        Assert.Equal(1, _ring.Nearest(new(0, 2)).Loop);
        Assert.Equal(2, _ring.NearestOn(0, new(0, 2)).Distance, 12);
        Assert.Equal(0, _holed.Nearest(new(-1, -1)).S);
    }

    [Property(Replay = "(3,5)")]
    public void Every_place_is_nearest_to_itself(int loop, double at)
    {
        if (!double.IsFinite(at) || Math.Abs(at) > 1e6)
        {
            return;
        }

        foreach (Outline o in new[] { _ring, _holed })
        {
            int i = (int)((uint)loop % o.Loops.Count);
            Point2 p = o.At(i, at);
            RimPlace place = o.Nearest(p);
            Assert.Equal(i, place.Loop);
            Assert.InRange(place.S, 0, o.LoopLength(i));
            Assert.True(place.Distance < 1e-8);
            Assert.True(Point2.Distance(p, o.At(i, place.S)) < 1e-8);
        }
    }

    [Property(Replay = "(7,5)")]
    public void Stretches_cover_their_length_without_gaps(byte loop, ushort from, ushort length)
    {
        foreach (Outline o in new[] { _ring, _holed })
        {
            int i = loop % o.Loops.Count;
            double whole = o.LoopLength(i);
            RimSpan span = new(i, whole * from / 65536, whole * (length + 1) / 65536);
            IReadOnlyList<Curve> pieces = o.Stretch(span);
            Assert.Equal(span.Length, pieces.Sum(c => c.Length), 1e-8 * o.Size);
            Assert.True(Point2.Distance(o.At(i, span.From), pieces[0].Start) <= 2e-9 * o.Size);
            Assert.True(Point2.Distance(o.At(i, span.From + span.Length), pieces[^1].End) <= 2e-9 * o.Size);
            Assert.All(pieces.Zip(pieces.Skip(1)), pair => Assert.Equal(pair.First.End, pair.Second.Start));
        }
    }

    [Fact]
    public void Between_takes_the_shorter_way_round()
    {
        RimPlace a = _holed.Nearest(new(0, 1)), b = _holed.Nearest(new(2, 0));
        foreach (RimSpan span in new[] { _holed.Between(a, b), _holed.Between(b, a) })
        {
            Assert.Equal(3, span.Length, 12);
            Assert.Equal(a.S, span.From, 12);
        }

        Assert.Throws<ArgumentException>(() => _holed.Between(a, _holed.Nearest(new(3, 2))));
        Assert.Throws<ArgumentException>(() => _holed.Between(a, a));
    }

    [Fact]
    public void Contains_knows_holes_rims_and_arcs()
    {
        Assert.True(_ring.Contains(new(2, 2)));
        Assert.True(_ring.Contains(new(3.999999, 0)));
        Assert.True(_ring.Contains(new(4, 0)));
        Assert.True(_ring.Contains(new(0, 1)));
        Assert.False(_ring.Contains(new(4.000001, 0)));
        Assert.False(_ring.Contains(new(0.5, 0)));
        Assert.False(_ring.Contains(new(0, 0)));
        Assert.False(_holed.Contains(new(3, 3)));
        Assert.False(_holed.Contains(new(-1, -1)));
        Assert.True(_holed.Contains(new(1, 1)));
    }

    [Property(Replay = "(9,3)", MaxTest = 300)]
    public void Contains_agrees_with_the_polygon(DoNotSize<int> seed)
    {
        var random = new Random(seed.Item);
        Outline star = RandomLayouts.Star(random, 3 + random.Next(30));
        Polygon polygon = OutlinePolygons.Polygon(star);
        for (int k = 0; k < 20; k++)
        {
            Point2 p = new((2.4 * random.NextDouble()) - 1.2, (2.4 * random.NextDouble()) - 1.2);
            bool inside = polygon.Contains(polygon.Factory.CreatePoint(new Coordinate(p.X, p.Y)));
            Assert.Equal(inside, star.Contains(p));
        }
    }

    [Fact]
    public void Polygon_loses_repeated_corners()
    {
        var polygon = (Polygon)new WKTReader().Read("POLYGON((0 0, 4 0, 4 0, 4 1e-10, 4 3, 0 3, 0 1e-10, 0 0),(1 1, 1 2, 2 2, 2 1, 1 1))");
        Outline o = Outline.FromPolygon(polygon, 1e-6);
        Assert.Equal([4, 4], o.Loops.Select(l => l.Count));
        Assert.Equal(11e-12, o.Area, 1e-20);
        Assert.Empty(o.Validate());
        var flat = (Polygon)new WKTReader().Read("POLYGON((0 0, 4 0, 4 1e-10, 0 0))");
        Assert.Throws<LayoutException>(() => Outline.FromPolygon(flat, 1e-6));
        Assert.Throws<LayoutException>(() => Outline.FromPolygon(Polygon.Empty, 1));
    }
}
