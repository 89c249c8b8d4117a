using FieldSolve.Geometry;

namespace FieldSolve.Tests.GeometryTests;

public class PlacementProblemTests
{
    private static readonly Outline _bar = Shapes.Bar(8, 4); // from (-4, -2), counter-clockwise: bottom 0..8, right 8..12, top 12..20, left 20..24

    [Fact]
    public void Spans_must_fit_and_keep_apart()
    {
        Assert.Equal(new(0, -1, -1, PlacementFault.SpanWiderThanRim, new(0, 0)), One(Shapes.Edge(0, 0, 25)) with { At = default });
        Assert.Equal(PlacementFault.SpanInvalid, One(Shapes.Edge(0, 0, 0)).Fault);
        Assert.Equal(PlacementFault.SpanInvalid, One(Shapes.Edge(0, 0, double.NaN)).Fault);
        Assert.Equal(PlacementFault.SpanInvalid, One(Shapes.Edge(0, double.NaN, 1)).Fault);
        Assert.Equal(PlacementFault.SpanInvalid, One(Shapes.Edge(1, 0, 1)).Fault);
        PlacementProblem overlap = One(Shapes.Edge(0, 3, 2), Shapes.Edge(0, 2, 1.5));
        Assert.Equal(new(0, -1, 1, PlacementFault.SpansOverlap, new(-1, -2)), overlap);
        Assert.Equal(new(0, -1, 1, PlacementFault.SpansTouch, new(-1, -2)), One(Shapes.Edge(0, 3, 2), Shapes.Edge(0, 2, 1)));
        Assert.Equal(PlacementFault.SpansTouch, One(Shapes.Edge(0, 3, 2), Shapes.Edge(0, 5 + 1e-10, 1)).Fault);
        Assert.Equal(PlacementFault.SpansOverlap, One(Shapes.Edge(0, 23, 2), Shapes.Edge(0, 0.5, 1)).Fault); // across the first point
        Assert.Equal(PlacementFault.SpansOverlap, One(Shapes.Edge(0, 5, 24), Shapes.Edge(0, 1, 1)).Fault); // the whole rim and another
        Assert.Equal(PlacementFault.SpansTouch, One(Shapes.Edge(0, 0, 12), Shapes.Edge(0, 12, 12)).Fault);
        Assert.Empty(Check(Shapes.Edge(0, 23, 1.5), Shapes.Edge(0, 0.6, 1)));
    }

    [Fact]
    public void Every_overlap_of_a_wide_contact_is_reported()
    {
        IReadOnlyList<PlacementProblem> problems = Check(Shapes.Edge(0, 1, 1), Shapes.Edge(0, 0.5, 6), Shapes.Edge(0, 5, 1), Shapes.Edge(0, 10, 1));
        Assert.Equal([(0, 1), (1, 2)], problems.Select(p => (p.Contact, p.OtherContact)));
    }

    [Fact]
    public void Pads_must_be_sound_and_on_the_sheet()
    {
        foreach (bool ideal in new[] { true, false })
        {
            Assert.Equal(PlacementFault.PadOutside, One(Pad(ideal, 5, 0, 6, 1)).Fault);
            Assert.Equal(PlacementFault.PadOutside, One(Pad(ideal, 4, 0, 6, 1)).Fault); // only touches the edge
            Assert.Equal(PlacementFault.PadOutside, One(Pad(ideal, 4 - 1e-10, 0, 6, 1)).Fault);
            Assert.Equal(PlacementFault.PadInvalid, One(new ContactPlacement(null, [new(0, 0), new(1, 1), new(1, 0), new(0, 1)], ideal)).Fault);
            Assert.Equal(PlacementFault.PadInvalid, One(new ContactPlacement(null, [new(0, 0), new(1, 1)], ideal)).Fault);
            Assert.Equal(PlacementFault.PadInvalid, One(new ContactPlacement(null, [], ideal)).Fault);
            Assert.Equal(PlacementFault.PadInvalid, One(new ContactPlacement(null, [new(0, 0), new(1, 1), new(2, 2)], ideal)).Fault);
            Assert.Equal(PlacementFault.PadInvalid, One(new ContactPlacement(null, [new(0, 0), new(1, double.NaN), new(2, 2)], ideal)).Fault);
        }

        Outline holed = Shapes.Polygon(Shapes.Rectangle(0, 0, 4, 4), Shapes.Rectangle(1, 1, 3, 3));
        Assert.Equal(PlacementFault.PadOutside, Assert.Single(DomainBuilder.Check(holed, [Pad(true, 1.5, 1.5, 2.5, 2.5)], [])).Fault);
        Assert.Equal(PlacementFault.PadOutside, Assert.Single(DomainBuilder.Check(holed, [Pad(true, 1, 1, 3, 3)], [])).Fault); // fills the hole
        Assert.Equal(PlacementFault.NothingLeft, One(Pad(true, -5, -3, 5, 3)).Fault);
        Assert.Equal(PlacementFault.NothingLeft, One(Pad(true, -4, -2, 4, 2)).Fault);
        Assert.Empty(Check(Pad(false, -5, -3, 5, 3)));
    }

    [Fact]
    public void Pads_keep_off_each_other_on_the_sheet_and_off_it()
    {
        Assert.Equal((0, 1, PlacementFault.PadOverlapsPad), Pair(Pad(true, -1, -1, 1, 1), Pad(false, 0, 0, 2, 2)));
        Assert.Equal((0, 1, PlacementFault.PadOverlapsPad), Pair(Pad(true, -1, -1, 1, 1), Pad(false, -0.5, -0.5, 0.5, 0.5)));
        Assert.Equal((0, 1, PlacementFault.PadOverlapsPad), Pair(Pad(true, 0, 0, 1, 1), Pad(true, 0, 0, 1, 1)));
        Assert.Equal((0, 1, PlacementFault.PadOverlapsPad), Pair(Pad(true, 3, 0, 6, 1), Pad(true, 5, -1, 5.5, 2), checkAlone: false));
        Assert.Equal((0, 1, PlacementFault.PadsTouch), Pair(Pad(true, 0, 0, 1, 1), Pad(true, 1, 0, 2, 1)));
        Assert.Equal((0, 1, PlacementFault.PadsTouch), Pair(Pad(true, 0, 0, 1, 1), Pad(true, 1 - 1e-10, 0, 2, 1)));
        Assert.Equal((0, 1, PlacementFault.PadsTouch), Pair(Pad(true, 0, 0, 1, 1), Pad(true, 1, 1, 2, 2)));
        Assert.Empty(Check(Pad(true, 0, 0, 1, 1), Pad(true, 1.001, 0, 2, 1)));
    }

    [Fact]
    public void Pads_keep_off_edge_contacts()
    {
        foreach (bool ideal in new[] { true, false })
        {
            ContactPlacement edge = Shapes.Edge(0, 2, 2); // (-2, -2) to (0, -2)
            Assert.Equal((0, 1, PlacementFault.PadOverlapsContact), Pair(Pad(ideal, -1, -3, 1, 0), edge));
            Assert.Equal((0, 1, PlacementFault.PadOverlapsContact), Pair(Pad(ideal, -1.5, -2, -1, 0), edge)); // along the rim
            Assert.Equal((0, 1, PlacementFault.PadOverlapsContact), Pair(edge, Pad(ideal, -3, -3, 1, 0)));
            Assert.Equal((0, 1, PlacementFault.PadTouchesContact), Pair(Pad(ideal, 0, -3, 1, 0), edge)); // at its end
            ContactPlacement corner = new(null, [new(-1, -2), new(0, 0), new(-2, 0)], ideal);
            Assert.Equal((0, 1, PlacementFault.PadTouchesContact), Pair(corner, edge));
            Assert.Empty(Check(Pad(ideal, 0.001, -3, 1, 0), edge));
        }
    }

    [Fact]
    public void A_pad_may_touch_the_rim_with_a_corner_or_a_side_but_leaves_no_cusp()
    {
        foreach (bool ideal in new[] { true, false })
        {
            Assert.Empty(Check(new ContactPlacement(null, [new(-1, -2), new(0, 0), new(-2, 0)], ideal))); // by a corner
            Assert.Empty(Check(Pad(ideal, -1, -2, 1, 0))); // by a side
            Assert.Empty(Check(new ContactPlacement(null, [new(-1, -2), new(1, -2 + 1e-10), new(1, 0), new(-1, 0)], ideal))); // within rounding
            Assert.Empty(Check(new ContactPlacement(null, [new(-1, -2), new(1, -2 + 1e-3), new(1, 0), new(-1, 0)], ideal))); // thin, but an angle
            Assert.Empty(Check(new ContactPlacement(null, [new(-1, -2.1), new(1, -2.1), new(1, 0), new(-1, 0)], ideal))); // across
            foreach (double off in new[] { 1e-7, 1e-6 })
            {
                PlacementProblem cusp = One(new ContactPlacement(null, [new(-1, -2), new(1, -2 + off), new(1, 0), new(-1, 0)], ideal));
                Assert.Equal(new(0, -1, -1, PlacementFault.PadLeavesCusp, new(-1, -2)), cusp);
            }
        }
    }

    [Fact]
    public void Tips_must_be_on_bare_sheet()
    {
        IReadOnlyList<PlacementProblem> problems = DomainBuilder.Check(
            _bar, [Pad(true, 0, 0, 1, 1), Pad(false, 2, 0, 3, 1)], [new(0.5, 0.5), new(2.5, 0.5), new(5, 0), new(4, 0), new(0, 0.5), new(double.NaN, 0)]);
        Assert.Equal(
            [(0, 0, PlacementFault.TipInPad), (2, -1, PlacementFault.TipOutside), (5, -1, PlacementFault.TipOutside)],
            problems.Select(p => (p.Tip, p.OtherContact, p.Fault)));
        Assert.All(problems, p => Assert.Equal(-1, p.Contact));
    }

    [Fact]
    public void Tip_between_a_flush_ideal_pad_and_the_rim_is_in_the_metal()
    {
        PlacementProblem p = Assert.Single(DomainBuilder.Check(_bar, [Pad(true, -1, -2, 1, 0)], [new(0, -2), new(1, -2), new(0, 0)]));
        Assert.Equal((0, 0, PlacementFault.TipInPad), (p.Tip, p.OtherContact, p.Fault));
        Assert.Empty(DomainBuilder.Check(_bar, [Pad(false, -1, -2, 1, 0)], [new(0, -2)]));
    }

    [Fact]
    public void All_problems_come_at_once_and_building_refuses_them()
    {
        ContactPlacement[] contacts = [Pad(true, 9, 9, 10, 10), Shapes.Edge(0, 0, 99), Shapes.Edge(0, 1, 1), Shapes.Edge(0, 1.5, 1)];
        Assert.Equal(
            [PlacementFault.PadOutside, PlacementFault.SpanWiderThanRim, PlacementFault.SpansOverlap, PlacementFault.TipOutside],
            DomainBuilder.Check(_bar, contacts, [new(9, 9)]).Select(p => p.Fault));
        Assert.Contains("contact 0", Assert.Throws<LayoutException>(() => DomainBuilder.Build(_bar, contacts, [])).Message);
        Assert.Contains("tip 0", Assert.Throws<LayoutException>(() => DomainBuilder.Build(_bar, [], [new(9, 9)])).Message);
        Assert.Throws<ArgumentException>(() => DomainBuilder.Check(_bar, [new(null, null, true)], []));
    }

    private static ContactPlacement Pad(bool ideal, double x0, double y0, double x1, double y1) =>
        new(null, Shapes.Rectangle(x0, y0, x1, y1), ideal);

    private static IReadOnlyList<PlacementProblem> Check(params ContactPlacement[] contacts) => DomainBuilder.Check(_bar, contacts, []);

    private static PlacementProblem One(params ContactPlacement[] contacts) => Assert.Single(Check(contacts));

    private static (int, int, PlacementFault) Pair(ContactPlacement a, ContactPlacement b, bool checkAlone = true)
    {
        IReadOnlyList<PlacementProblem> problems = Check(a, b);
        PlacementProblem p = checkAlone ? Assert.Single(problems) : problems[0];
        return (p.Contact, p.OtherContact, p.Fault);
    }
}
