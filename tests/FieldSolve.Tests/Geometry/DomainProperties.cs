using FieldSolve.Geometry;
using FsCheck;
using FsCheck.Xunit;
using NetTopologySuite.Geometries;
using Area = NetTopologySuite.Geometries.Geometry;

namespace FieldSolve.Tests.GeometryTests;

public class DomainProperties
{
    [Property(Replay = "(1,3)", MaxTest = 300)]
    public void Areas_and_lengths_add_up(DoNotSize<int> seed)
    {
        (Outline sheet, List<ContactPlacement> contacts, List<Point2> tips) = Sound(seed.Item);
        Domain d = DomainBuilder.Build(sheet, contacts, tips);
        DomainChecks.Sound(d, sheet, contacts);

        Area whole = Fine(sheet), left = whole;
        double inner = 0;
        foreach (ContactPlacement c in contacts.Where(c => c.Pad is not null))
        {
            Polygon pad = OutlinePolygons.Polygon(c.Pad!);
            left = c.IdealPad ? left.Difference(pad) : left;
            inner += c.IdealPad ? 0 : pad.Boundary.Intersection(whole).Length;
        }

        Assert.Equal(left.Area, DomainChecks.RimArea(d), 1e-5);
        Assert.True(DomainChecks.InnerLength(d) <= inner + 1e-4);
        for (int k = 0; k < contacts.Count; k++)
        {
            if (contacts[k].Span is { } span)
            {
                Assert.Equal(span.Length, DomainChecks.RimLength(d, k), 1e-8);
            }
        }

        Assert.Equal(tips.Count, d.Tips.Count);
        Assert.All(tips.Zip(d.Tips), t => Assert.True(Point2.Distance(t.First, d.Vertices[t.Second]) < 1e-8));
    }

    [Property(Replay = "(2,3)", MaxTest = 100)]
    public void Scale_turn_and_place_do_not_matter(DoNotSize<int> seed)
    {
        (Outline sheet, List<ContactPlacement> contacts, List<Point2> tips) = Sound(seed.Item);
        Domain d = DomainBuilder.Build(sheet, contacts, tips);
        foreach (Shapes.Motion motion in new Shapes.Motion[] { new(25e-9, 0.7, new(1e-7, -2e-7)), new(0.5, -2, new(0.3, 0.1)), new(1, Math.PI / 2, default) })
        {
            Domain m = DomainBuilder.Build(motion.Of(sheet), [.. contacts.Select(motion.Of)], [.. tips.Select(motion.Of)]);
            Assert.Equal(d.Edges.Select(e => (e.From, e.To, e.IsRim, e.Contact)), m.Edges.Select(e => (e.From, e.To, e.IsRim, e.Contact)));
            Assert.All(d.Vertices.Zip(m.Vertices), v => Assert.True(Point2.Distance(motion.Of(v.First), v.Second) < 1e-7 * motion.Scale));
        }
    }

    [Property(Replay = "(4,3)", MaxTest = 200)]
    public void Pads_and_contacts_that_meet_are_found(DoNotSize<int> seed)
    {
        var random = new Random(seed.Item);
        Outline sheet = RandomLayouts.Sheet(random);
        List<ContactPlacement> contacts = RandomLayouts.Contacts(random, sheet);
        IReadOnlyList<PlacementProblem> problems = DomainBuilder.Check(sheet, contacts, []);
        Area whole = Fine(sheet);
        for (int i = 0; i < contacts.Count; i++)
        {
            if (contacts[i].Pad is null)
            {
                continue;
            }

            Polygon pad = OutlinePolygons.Polygon(contacts[i].Pad!);
            Expect(whole.Intersection(pad).Area, 1e-4, i, -1, PlacementFault.PadOutside, negate: true);
            for (int j = 0; j < contacts.Count; j++)
            {
                (int a, int b) = (Math.Min(i, j), Math.Max(i, j));
                if (contacts[j].Span is { } span)
                {
                    double under = pad.Buffer(-1e-8).Intersection(Drawn(sheet.Stretch(span))).Length;
                    bool apart = problems.All(p => p.Contact != j && p.OtherContact != j || p.Fault is not (PlacementFault.SpansOverlap or PlacementFault.SpansTouch));
                    Expect(apart ? under : 0, apart ? 1e-4 : 1, a, b, PlacementFault.PadOverlapsContact);
                }
                else if (j > i)
                {
                    Expect(pad.Intersection(OutlinePolygons.Polygon(contacts[j].Pad!)).Area, 1e-9, a, b, PlacementFault.PadOverlapsPad);
                }
            }
        }

        // Larger than the error of the drawing: the problem must be there. Zero: it must not.
        void Expect(double amount, double clear, int a, int b, PlacementFault fault, bool negate = false)
        {
            bool found = problems.Any(p => p.Contact == a && p.OtherContact == b && p.Fault == fault);
            if (amount > clear)
            {
                Assert.NotEqual(negate, found);
            }
            else if (amount == 0 && clear < 1)
            {
                Assert.True(found == negate || fault == PlacementFault.PadOverlapsContact || fault == PlacementFault.PadOutside);
            }
        }
    }

    // A random layout without the contacts and tips that have problems.
    private static (Outline Sheet, List<ContactPlacement> Contacts, List<Point2> Tips) Sound(int seed)
    {
        var random = new Random(seed);
        Outline sheet = RandomLayouts.Sheet(random);
        List<ContactPlacement> contacts = RandomLayouts.Contacts(random, sheet);
        List<Point2> tips = [.. Enumerable.Range(0, 4).Select(_ => new Point2(random.Next(-8, 9) / 8.0, random.Next(-8, 9) / 8.0))];
        while (DomainBuilder.Check(sheet, contacts, tips) is [var first, ..])
        {
            if (first.Contact >= 0)
            {
                contacts.RemoveAt(first.Contact);
            }
            else
            {
                tips.RemoveAt(first.Tip);
            }
        }

        return (sheet, contacts, tips);
    }

    private static Polygon Fine(Outline o)
    {
        Curve[][] loops = [.. o.Loops.Select(l => l.SelectMany(Chords).ToArray())];
        return OutlinePolygons.Polygon(new Outline(loops));
    }

    private static MultiLineString Drawn(IReadOnlyList<Curve> stretch) => OutlinePolygons.Factory.CreateMultiLineString(
        [OutlinePolygons.Factory.CreateLineString([.. stretch.SelectMany(Chords).SelectMany(c => new[] { c.Start, c.End }).Select(p => new Coordinate(p.X, p.Y))])]);

    private static IEnumerable<Curve> Chords(Curve c)
    {
        const int N = 1000;
        return c.IsArc ? Enumerable.Range(0, N).Select(k => Curve.Segment(c.At(k / (double)N), c.At((k + 1) / (double)N))) : [c];
    }
}
