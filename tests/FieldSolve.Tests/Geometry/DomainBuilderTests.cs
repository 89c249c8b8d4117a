using FieldSolve.Geometry;

namespace FieldSolve.Tests.GeometryTests;

public class DomainBuilderTests
{
    private static readonly Outline _bar = Shapes.Bar(8, 4);

    [Fact]
    public void Bare_disc_needs_four_arcs_and_contacts_move_the_cuts()
    {
        Assert.Equal(4, Build(Shapes.Disc(1)).Edges.Count);

        // Sixth of the rim across the first point: its ends are vertices, the quarter points are not.
        Domain d = Build(Shapes.Disc(1), Shapes.Edge(0, -Math.PI / 6, Math.PI / 3));
        Assert.Equal(5, d.Edges.Count);
        DomainEdge contact = Assert.Single(d.Edges, e => e.Contact == 0);
        Assert.Equal(Math.PI / 3, contact.Curve.Sweep, 14);
        Assert.Equal(0, Point2.Distance(contact.Curve.At(0.5), new(1, 0)), 14);
        Assert.Equal(5 * Math.PI / 3, DomainChecks.RimLength(d, -1), 13);
    }

    [Theory]
    [InlineData(0)]
    [InlineData(1)]
    public void A_whole_loop_may_be_one_contact(int loop)
    {
        Outline ring = Shapes.Ring(1, 4);
        Domain d = Build(ring, Shapes.Edge(loop, 0.3, ring.LoopLength(loop)));
        Assert.Equal(4, d.Edges.Count(e => e.Contact == 0));
        Assert.Equal(ring.LoopLength(loop), DomainChecks.RimLength(d, 0), 12);
    }

    [Fact]
    public void A_contact_may_turn_corners()
    {
        Domain d = Build(_bar, Shapes.Edge(0, 22, 14));
        Assert.Equal(14, DomainChecks.RimLength(d, 0), 12);
        Assert.Equal(10, DomainChecks.RimLength(d, -1), 12);
        Assert.Equal(3, d.Edges.Count(e => e.Contact == 0)); // half of the left side, bottom, right side
    }

    [Fact]
    public void Ideal_pad_inside_becomes_a_hole_with_its_contact()
    {
        Domain d = Build(_bar, Shapes.Ideal(Shapes.Rectangle(-1, -1, 1, 1)));
        Assert.Equal(32 - 4, DomainChecks.RimArea(d), 12);
        Assert.Equal(8, DomainChecks.RimLength(d, 0), 12);
        Assert.Empty(d.Regions);
    }

    [Theory]
    [InlineData(2, -3, 9, 3, 24, 4)] // beyond the whole end
    [InlineData(2, -2, 9, 2, 24, 4)] // flush with both long sides
    [InlineData(2, -2, 4, 2, 24, 4)] // flush with three sides
    [InlineData(2, -3, 4, 1, 26, 5)] // flush with the end
    [InlineData(2, -5, 9, 1, 26, 5)] // over a corner of the bar
    [InlineData(-1, -9, 1, 9, 24, 8)] // cuts the bar in two
    [InlineData(-1, -2, 1, 2, 24, 8)] // the same, flush
    [InlineData(-1, -2, 1, 0, 28, 6)] // on the lower rim
    public void Ideal_pad_over_the_rim_takes_its_area_away(double x0, double y0, double x1, double y1, double area, double metal)
    {
        foreach (double off in new[] { 0, 1e-10, -1e-10, 3e-9 })
        {
            Domain d = Build(_bar, Shapes.Ideal(Shapes.Rectangle(x0, y0 + off, x1, y1 + off)));
            Assert.Equal(area, DomainChecks.RimArea(d), 1e-7);
            if (Math.Abs(off) < 1e-9)
            {
                Assert.Equal(metal, DomainChecks.RimLength(d, 0), 1e-7);
            }
        }
    }

    [Fact]
    public void Pad_edge_through_a_corner_uses_that_corner()
    {
        // Diagonal edge from beyond the upper left corner down to the lower right one.
        Domain d = Build(_bar, Shapes.Ideal(new(-8, 4), new(-8, -4), new(8, -4)));
        Assert.Equal(16, DomainChecks.RimArea(d), 12);
        Assert.Equal(3, d.Vertices.Count);
        Assert.Equal(3, d.Edges.Count);
    }

    [Fact]
    public void Pad_corner_on_the_rim_splits_it()
    {
        Domain d = Build(_bar, Shapes.Ideal(new(0, -2 + 1e-10), new(1, 0), new(-1, 0)));
        Assert.Equal(32 - 2, DomainChecks.RimArea(d), 8);
        int v = Enumerable.Range(0, d.Vertices.Count).Single(i => Point2.Distance(d.Vertices[i], new(0, -2)) < 1e-8);
        Assert.Equal(-2, d.Vertices[v].Y); // the pad moved, not the rim
        Assert.Equal(4, d.Edges.Count(e => e.From == v || e.To == v));
    }

    [Theory]
    [InlineData(0)]
    [InlineData(1e-10)]
    [InlineData(-1e-10)]
    public void Pad_edge_tangent_to_an_arc_touches_at_one_vertex(double off)
    {
        // From inside: the pad's upper edge touches the disc's top.
        Domain d = Build(Shapes.Disc(1), Shapes.Ideal(Shapes.Rectangle(-0.25, 0, 0.25, 1 + off)));
        double cut = (0.25 * Math.Sqrt(1 - 0.0625)) + Math.Asin(0.25); // area of the strip below the arc
        Assert.Equal(Math.PI - cut, DomainChecks.RimArea(d), 1e-8);

        // Two corners of the pad on the rim, the edge between them a chord.
        Domain chord = Build(Shapes.Disc(1), Shapes.Resistive(new(1, 0), new(0, 1), new(0, 0)));
        Assert.Equal(2 + Math.Sqrt(2), DomainChecks.InnerLength(chord), 12);
        Assert.Equal(6, chord.Vertices.Count(p => p.Length > 0.5) + 2); // four quarter points, no more
    }

    [Fact]
    public void Tangent_from_outside_or_over_the_end_leaves_the_disc_alone()
    {
        Domain d = Build(Shapes.Disc(1), Shapes.Ideal(new(-2, 1), new(2, 1), new(2, 2), new(-2, 2)), expectProblem: PlacementFault.PadOutside);
        Assert.Empty(d.Edges);
    }

    [Fact]
    public void Resistive_pad_draws_inner_edges_and_a_region()
    {
        Domain d = Build(_bar, Shapes.Resistive(Shapes.Rectangle(2, -3, 5, 0)));
        Assert.Equal(32, DomainChecks.RimArea(d), 12);
        Assert.Equal(24, DomainChecks.RimLength(d, -1), 12);
        Assert.Equal(4, DomainChecks.InnerLength(d), 12); // 2 up and 2 across, within the sheet
        DomainRegion region = Assert.Single(d.Regions);
        Assert.Equal(0, region.Contact);
        Assert.True(Outline.SignedArea(Shapes.Loop([.. region.Corners])) > 0);
        Assert.Contains(new(2, -2), d.Vertices);
        Assert.Contains(new(4, 0), d.Vertices);

        Domain clockwise = Build(_bar, Shapes.Resistive([.. Shapes.Rectangle(2, -3, 5, 0).Reverse()]));
        Assert.Equal(9, Outline.SignedArea(Shapes.Loop([.. clockwise.Regions[0].Corners])), 12);
    }

    [Fact]
    public void Tips_become_vertices_where_they_stand()
    {
        Point2[] tips = [new(-4, -2 + 1e-10), new(0, 2), new(0.5, 0), new(2, -1), new(0.5, 1e-10), new(3, 1)];
        ContactPlacement[] contacts = [Shapes.Resistive(Shapes.Rectangle(2, -3, 5, 0)), Shapes.Edge(0, 14, 4)]; // top, from x = 2 to -2
        Domain d = DomainBuilder.Build(_bar, contacts, tips);
        DomainChecks.Sound(d, _bar, contacts);
        Assert.Equal(new(-4, -2), d.Vertices[d.Tips[0]]);
        Assert.Equal(2, d.Edges.Count(e => e.Contact == 1)); // split at the tip in the middle
        Assert.Equal(new(0.5, 0), d.Vertices[d.Tips[2]]);
        Assert.Equal(2, d.Edges.Count(e => !e.IsRim && (e.From == d.Tips[3] || e.To == d.Tips[3])));
        Assert.Equal(d.Tips[2], d.Tips[4]);
        Assert.DoesNotContain(d.Edges, e => e.From == d.Tips[5] || e.To == d.Tips[5]);
    }

    [Theory]
    [InlineData(true)]
    [InlineData(false)]
    public void A_tip_beside_a_flush_pad_does_not_part_them(bool ideal)
    {
        // The pad's lower edge runs along the rim, past a tip outside it and up to one at its corner; and a tip below a resistive pad.
        ContactPlacement[] contacts = [new(null, Shapes.Rectangle(-1, -2, 1, 0), ideal)];
        Point2[] tips = ideal ? [new(1, -2), new(2, -2)] : [new(0, -2), new(1, -2), new(2, -2)];
        Domain d = DomainBuilder.Build(_bar, contacts, tips);
        DomainChecks.Sound(d, _bar, contacts);
        Assert.Equal(ideal ? 28 : 32, DomainChecks.RimArea(d), 12);
        Assert.Equal(ideal ? 0 : 6, DomainChecks.InnerLength(d), 12);
    }

    [Fact]
    public void Metal_against_the_rim_from_outside_is_part_of_the_contact()
    {
        // An L round the lower right corner: one leg on the sheet, the other along the right side outside it.
        Domain d = Build(_bar, Shapes.Ideal(new(3, -3), new(5, -3), new(5, 1), new(4, 1), new(4, -1), new(3, -1)));
        Assert.Equal(32 - 1, DomainChecks.RimArea(d), 12);
        Assert.Equal(2 + 2, DomainChecks.RimLength(d, 0), 12);
    }

    [Fact]
    public void Same_input_gives_the_same_domain()
    {
        Domain One()
        {
            var random = new Random(5);
            Outline sheet = Shapes.Disc(1);
            return DomainBuilder.Build(sheet, [Shapes.Edge(0, 1, 0.5), Shapes.Ideal(Shapes.Rectangle(-0.5, -0.5, 0.1, 0.1))], [new(random.NextDouble() / 2, 0.2)]);
        }

        Assert.Equal(One().Vertices, One().Vertices);
        Assert.Equal(One().Edges, One().Edges);
    }

    private static Domain Build(Outline live, ContactPlacement contact, PlacementFault? expectProblem = null)
    {
        if (expectProblem is { } fault)
        {
            Assert.Equal(fault, Assert.Single(DomainBuilder.Check(live, [contact], [])).Fault);
            return new([], [], [], []);
        }

        Domain d = DomainBuilder.Build(live, [contact], []);
        DomainChecks.Sound(d, live, [contact]);
        return d;
    }

    private static Domain Build(Outline live)
    {
        Domain d = DomainBuilder.Build(live, [], []);
        DomainChecks.Sound(d, live, []);
        return d;
    }
}
