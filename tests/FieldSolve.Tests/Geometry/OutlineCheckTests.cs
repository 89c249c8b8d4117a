using FieldSolve.Geometry;

namespace FieldSolve.Tests.GeometryTests;

public class OutlineCheckTests
{
    [Fact]
    public void Sound_outlines_have_no_problems()
    {
        foreach (double scale in new[] { 50e-9, 1 })
        {
            Assert.Empty(Shapes.Disc(scale).Validate());
            Assert.Empty(Shapes.Ring(0.2 * scale, scale).Validate());
            Assert.Empty(Shapes.Ring(0.99999 * scale, scale).Validate());
            Assert.Empty(Shapes.Bar(scale, scale / 1000).Validate());
            Assert.Empty(Shapes.Polygon(Shapes.Rectangle(0, 0, scale, scale), Shapes.Rectangle(0.1 * scale, 0.1 * scale, 0.2 * scale, 0.3 * scale)).Validate());
        }
    }

    [Fact]
    public void Crossing_is_reported_with_its_place()
    {
        LayoutProblem p = Only(Shapes.Simple([new(0, 0), new(2, 2), new(4, 0), new(4, 2), new(0, 1)]));
        Assert.Contains("crosses", p.Message);
        Assert.Equal(0, Point2.Distance(p.At, new(4 / 3.0, 4 / 3.0)), 12);
    }

    [Fact]
    public void Holes_must_lie_inside_and_apart()
    {
        Point2[] square = Shapes.Rectangle(0, 0, 4, 4);
        Assert.Contains("outside", Only(Shapes.Polygon(square, Shapes.Rectangle(5, 5, 6, 6))).Message);
        Assert.Contains("crosses", Only(Shapes.Polygon(square, Shapes.Rectangle(3, 3, 5, 5))).Message);
        Assert.Contains("inside another hole", Only(Shapes.Polygon(square, Shapes.Rectangle(1, 1, 3, 3), Shapes.Rectangle(1.5, 1.5, 2, 2))).Message);
        LayoutProblem touch = Only(Shapes.Polygon(square, [new(1e-10, 2), new(2, 1), new(2, 3)]));
        Assert.Contains("hole touches", touch.Message);
        Assert.Equal(0, Point2.Distance(touch.At, new(0, 2)), 6);
        Assert.Contains("outside", Only(new([[Curve.Arc(default, 1, 0, 2 * Math.PI)], [Curve.Arc(default, 1.2, 0, 2 * Math.PI)]])).Message);
    }

    [Fact]
    public void Degenerate_loops_are_reported()
    {
        Assert.Contains(Shapes.Simple([new(0, 0), new(1, 0), new(1, 1e-12), new(1, 1)]).Validate(), p => p.Message.Contains("coincide"));
        Assert.Contains("no area", Only(Shapes.Simple([new(0, 0), new(1, 0), new(2, 0)])).Message);
        Assert.Contains("three corners", Only(Shapes.Simple([new(0, 0), new(1, 0)])).Message);
        Assert.Contains("gap", Only(new([[Curve.Segment(new(0, 0), new(1, 0)), Curve.Segment(new(1, 0), new(1, 1)), Curve.Segment(new(1, 1), new(0, 0.5))]])).Message);
        Assert.Contains(Shapes.Simple([new(0, 0), new(1, double.NaN), new(1, 1)]).Validate(), p => p.Message.Contains("finite"));
        Assert.Contains("touches itself", Only(Shapes.Simple([new(0, 0), new(4, 0), new(4, 3), new(2, 1e-10), new(0, 3)])).Message);
        Assert.Throws<ArgumentException>(() => new Outline([]));
    }

    private static LayoutProblem Only(Outline o) => Assert.Single(o.Validate());
}
