using FieldSolve.Geometry;
using FsCheck.Xunit;

namespace FieldSolve.Tests.GeometryTests;

public class CurveTests
{
    private static readonly Curve _quarter = Curve.Arc(new(1, 2), 3, 0.3, Math.PI / 2);

    [Fact]
    public void Arc_runs_at_constant_speed_about_its_centre()
    {
        Assert.Equal(3 * Math.PI / 2, _quarter.Length, 14);
        for (double t = 0; t <= 1; t += 0.125)
        {
            Point2 r = _quarter.At(t) - _quarter.Centre;
            Assert.Equal(3, r.Length, 14);
            Assert.Equal(0.3 + (t * Math.PI / 2), Math.Atan2(r.Y, r.X), 14);
            Assert.Equal(0, Point2.Dot(r, _quarter.Tangent(t)), 14);
            Assert.True(Point2.Cross(r, _quarter.Tangent(t)) > 0);
        }
    }

    [Fact]
    public void Backwards_has_the_same_points_and_opposite_tangents()
    {
        foreach (Curve c in new[] { _quarter, Curve.Segment(new(1, 1), new(4, 5)) })
        {
            Curve back = c.Reversed();
            Assert.Equal(c.Start, back.End);
            Assert.Equal(c.End, back.Start);
            Assert.Equal(0, Point2.Distance(c.At(0.3), back.At(0.7)), 14);
            Assert.Equal(0, (c.Tangent(0.3) + back.Tangent(0.7)).Length, 14);
            Assert.Equal(c.Start, back.Reversed().Start);
        }
    }

    [Fact]
    public void Parts_share_their_ends_bit_for_bit()
    {
        Curve a = _quarter.Part(0, 1 / 3.0), b = _quarter.Part(1 / 3.0, 1);
        Assert.Equal(_quarter.Start, a.Start);
        Assert.Equal(a.End, b.Start);
        Assert.Equal(_quarter.End, b.End);
        Assert.Equal(_quarter.Length, a.Length + b.Length, 14);
    }

    [Property(Replay = "(11,13)")]
    public void Nearest_point_of_an_arc_is_no_farther_than_any_other(int a, int b, int start, int turn)
    {
        double sweep = turn % 7 == 0 ? 2 * Math.PI : turn % 6;
        Curve c = sweep == 0 ? Curve.Segment(new(a, b), new(b + 0.5, a)) : Curve.Arc(new(0.5, 0.25), 2, start, sweep);
        Point2 p = new(b / 7.0, a / 5.0);
        double best = Enumerable.Range(0, 401).Min(k => Point2.Distance(p, c.At(k / 400.0)));
        double t = c.Nearest(p);
        Assert.InRange(t, 0, 1);
        Assert.True(Point2.Distance(p, c.At(t)) <= best + 1e-12);
    }

    [Fact]
    public void Bounds_hold_the_far_side_of_an_arc()
    {
        Box box = Curve.Arc(default, 2, -0.5, Math.PI + 1).Bounds();
        Assert.Equal(2, box.X1, 14);
        Assert.Equal(2, box.Y1, 14);
        Assert.Equal(-2, box.X0, 14);
        Assert.Equal(-2 * Math.Sin(0.5), box.Y0, 14);
    }

    [Fact]
    public void Grazing_line_meets_an_arc_once_and_a_chord_twice()
    {
        Curve circle = Curve.Arc(default, 1, 0, Math.PI);
        Assert.Equal(2, CurveMeasures.Crossings(Curve.Segment(new(-2, 0.5), new(2, 0.5)), circle, 1e-9).Count);
        Point2 touch = Assert.Single(CurveMeasures.Crossings(Curve.Segment(new(-2, 1), new(2, 1)), circle, 1e-9));
        Assert.Equal(0, Point2.Distance(touch, new(0, 1)), 14);
        Assert.Empty(CurveMeasures.Crossings(Curve.Segment(new(-2, -0.5), new(2, -0.5)), circle, 1e-9));
        Assert.Empty(CurveMeasures.Crossings(Curve.Segment(new(-0.2, 0.5), new(0.2, 0.5)), circle, 1e-9));
    }
}
