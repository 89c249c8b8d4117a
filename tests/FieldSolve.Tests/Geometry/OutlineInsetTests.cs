using FieldSolve.Geometry;

namespace FieldSolve.Tests.GeometryTests;

public class OutlineInsetTests
{
    [Theory]
    [InlineData(1)]
    [InlineData(50e-9)]
    public void Circles_stay_circles(double scale)
    {
        Outline disc = Shapes.Disc(4 * scale, new(scale, 0)).Inset(0.5 * scale);
        Assert.Equal(Math.PI * 3.5 * 3.5, disc.Area / scale / scale, 12);
        Assert.All(disc.Pieces, c => Assert.Equal(new Point2(scale, 0), c.Centre));

        Outline ring = Shapes.Ring(scale, 4 * scale).Inset(0.5 * scale);
        Assert.Equal(Math.PI * ((3.5 * 3.5) - (1.5 * 1.5)), ring.Area / scale / scale, 12);
        Assert.Empty(ring.Validate());
    }

    [Theory]
    [InlineData(1)]
    [InlineData(50e-9)]
    public void Rectangle_loses_the_same_on_every_side(double scale)
    {
        Outline inset = Shapes.Bar(8 * scale, 4 * scale).Inset(0.3 * scale);
        Point2[] corners = [.. inset.Loops[0].Select(c => (1 / scale) * c.Start)];
        Assert.Equal(4, corners.Length);
        foreach (Point2 want in Shapes.Rectangle(-3.7, -1.7, 3.7, 1.7))
        {
            Assert.Contains(corners, p => Point2.Distance(p, want) < 1e-13);
        }
    }

    [Fact]
    public void Holes_grow_and_corners_stay_sharp()
    {
        Outline inset = Shapes.Polygon(Shapes.Rectangle(0, 0, 10, 8), Shapes.Rectangle(3, 3, 6, 5)).Inset(0.5);
        Assert.Equal([4, 4], inset.Loops.Select(l => l.Count));
        Assert.Equal((9 * 7) - (4 * 3), inset.Area, 12);
        Outline angle = Shapes.Simple([new(0, 0), new(4, 0), new(4, 2), new(2, 2), new(2, 4), new(0, 4)]).Inset(0.25);
        Assert.Equal(6, angle.Pieces.Length);
        Assert.Equal((3.5 * 1.5) + (1.5 * 2), angle.Area, 12);
    }

    [Fact]
    public void No_dead_edge_changes_nothing() => Assert.Equal(Shapes.Bar(2, 1).Pieces, Shapes.Bar(2, 1).Inset(0).Pieces);

    [Fact]
    public void Nothing_or_several_pieces_left_is_refused()
    {
        Assert.Contains("nothing", Refused(Shapes.Disc(1), 1));
        Assert.Contains("nothing", Refused(Shapes.Ring(1, 2), 0.6));
        Assert.Contains("nothing", Refused(Shapes.Bar(2, 1), 0.5));
        Outline dumbbell = Shapes.Simple(
            [new(0, 0), new(2, 0), new(2, 0.9), new(3, 0.9), new(3, 0), new(5, 0), new(5, 2), new(3, 2), new(3, 1.1), new(2, 1.1), new(2, 2), new(0, 2)]);
        Assert.Contains("2 separate pieces", Refused(dumbbell, 0.2));
        Outline pierced = new([[Curve.Arc(default, 4, 0, 6.283185307179586)], [Curve.Arc(new(3, 0), 0.5, 0, 6.283185307179586)]]);
        Assert.Contains("meet", Refused(pierced, 0.3));
        Outline half = new([[Curve.Arc(default, 1, 0, Math.PI), Curve.Segment(new(-1, 0), new(1, 0))]]);
        Assert.Contains("mix", Refused(half, 0.1));
        Assert.Throws<ArgumentOutOfRangeException>(() => Shapes.Disc(1).Inset(-0.1));
        Assert.Throws<ArgumentOutOfRangeException>(() => Shapes.Disc(1).Inset(double.NaN));
    }

    private static string Refused(Outline o, double distance) => Assert.Throws<LayoutException>(() => o.Inset(distance)).Message;
}
