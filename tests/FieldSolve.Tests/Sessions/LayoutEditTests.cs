using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Sessions;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.SessionsTests;

/// <summary>Moving contacts of every kind: what is written, and where the device then has them.</summary>
public sealed class LayoutEditTests : IDisposable
{
    private readonly TempFolder folder = new("edit");

    public void Dispose() => folder.Dispose();

    private EditSession Open(string text) => EditSession.Open(folder.Write("device.toml", text)) is { Session: { } session } ? session : throw new InvalidDataException("not a device");

    private static string Sheet(string sheet, string contacts, string wiring = "source = \"a\"\ndrain = \"b\"") => $"""
        [sheet]
        {sheet}
        [law]
        kind = "ohmic"
        a = "1 mS"
        b = "1 mS"
        {contacts}
        [[wiring]]
        name = "w"
        {wiring}
        [drive]
        current = {"{"} from = "0 uA", to = "1 uA", steps = 2 {"}"}
        """;

    private static string Contact(string name, string edge, string more = "") => $"[[contact]]\nname = \"{name}\"\nedge = {{ {edge} }}\n{more}\n";

    private static Contact Named(EditSession session, string name) => session.State.Device.Contacts.Single(c => c.Name == name);

    private static void Move(EditSession session, string name, double x, double y) => Assert.Empty(session.Apply((t, d) => LayoutEdit.Move(t, d, name, new(x, y)), null));

    // An angle stays within the ways people write it, -180 to 360 degrees, and in its unit.
    [Theory]
    [InlineData("350 deg", 10, "10 deg")]
    [InlineData("350 deg", 355, "355 deg")]
    [InlineData("-170 deg", 170, "170 deg")]
    [InlineData("-170 deg", -165, "-165 deg")]
    [InlineData("0.5 rad", 57.2957795, "1 rad")]
    public void An_angle_goes_round_and_keeps_its_unit(string at, double to, string expected)
    {
        EditSession session = Open(Sheet("disc = { diameter = \"8 um\" }", Contact("a", $"at = \"{at}\", width = \"1 um\"") + Contact("b", "at = \"90 deg\", width = \"1 um\"")));
        Point2 place = new Point2(4e-6, 0).Turned(to * Math.PI / 180);
        Move(session, "a", place.X, place.Y);
        Assert.Equal(expected, session.State.Text.Find("contact[0].edge.at")!.Value);
        Assert.Equal(0, Point2.Distance(place, Named(session, "a").Middle), 4e-6 * 1e-3);
    }

    // The shift of a contact is along the rim with the sheet to the left; its own document says "counter-clockwise round the sheet (or round the hole)". Units suit the sheet.
    [Theory]
    [InlineData("bar = { length = \"40 mm\", width = \"20 mm\" }", "mm", 1e-3, "1 mm")]
    [InlineData("bar = { length = \"400 nm\", width = \"200 nm\" }", "nm", 1e-8, "10 nm")]
    [InlineData("bar = { length = \"40 um\", width = \"20 um\" }", "um", 1e-6, "1 um")]
    public void A_first_shift_has_the_unit_of_the_sheet(string sheet, string unit, double by, string expected)
    {
        (double half, double low) = unit switch { "mm" => (1.0, -10.0), "nm" => (10, -100), _ => (1, -10) };
        EditSession session = Open(Sheet(sheet, Contact("a", "end = \"left\"") + Contact("b", "end = \"right\"") + Contact("c", FormattableString.Invariant($"from = [\"{-half} {unit}\", \"{low} {unit}\"], to = [\"{half} {unit}\", \"{low} {unit}\"]"))));
        Point2 before = Named(session, "c").Middle;

        // The lower edge runs along x.
        Move(session, "c", before.X + by, before.Y);
        Assert.Equal(expected, session.State.Text.Find("contact[2].shift")!.Value);
        Assert.Equal(before.X + by, Named(session, "c").Middle.X, 1e-3 * by);
        Move(session, "c", before.X + (2 * by), before.Y);
        Assert.Equal(before.X + (2 * by), Named(session, "c").Middle.X, 1e-3 * by);
    }

    [Fact]
    public void A_contact_on_a_hole_slides_round_the_hole()
    {
        const string outline = "outline = { corners = [[\"0 um\", \"0 um\"], [\"10 um\", \"0 um\"], [\"10 um\", \"6 um\"], [\"0 um\", \"6 um\"]], holes = [[[\"3 um\", \"2 um\"], [\"7 um\", \"2 um\"], [\"7 um\", \"4 um\"], [\"3 um\", \"4 um\"]]] }";
        EditSession session = Open(Sheet(
            outline, Contact("a", "from = [\"0 um\", \"4 um\"], to = [\"0 um\", \"2 um\"]") + Contact("b", "from = [\"10 um\", \"2 um\"], to = [\"10 um\", \"4 um\"]")
            + Contact("c", "from = [\"4 um\", \"4 um\"], to = [\"5 um\", \"4 um\"]")));
        Assert.Equal(4.5e-6, Named(session, "c").Middle.X, 1e-12);
        Move(session, "c", 5.5e-6, 4e-6);
        Assert.Equal(0, Point2.Distance(new(5.5e-6, 4e-6), Named(session, "c").Middle), 1e-9);

        // Counter-clockwise round the hole its upper edge runs against x.
        Assert.Equal("-1 um", session.State.Text.Find("contact[2].shift")!.Value);
    }

    [Fact]
    public void What_covers_a_whole_rim_stays()
    {
        EditSession session = Open(Sheet("ring = { inner = \"2 um\", outer = \"4 um\" }", Contact("a", "rim = \"inner\"") + Contact("b", "rim = \"outer\"")));
        Assert.Equal("'a' covers a whole rim and cannot move along it", Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutEdit.Move(t, d, "a", new(1e-6, 0)), null)).Message);
        Assert.Equal("there is no contact 'x'", Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutEdit.Move(t, d, "x", new(1e-6, 0)), null)).Message);
    }

    [Fact]
    public void A_ring_is_written_out_with_all_that_its_contacts_have()
    {
        const string rings = "[[contacts]]\nring = 3\nwidth = \"0.5 um\"\nprefix = \"c\"\nfirst = \"10 deg\"\nresistance = \"100 ohm um\"\nshift = \"0.1 um\"\n"
            + "[[contacts]]\nring = 2\nwidth = \"0.4 um\"\nprefix = \"v\"\nfirst = \"100 deg\"\n[turn]\naround = \"c\"\n";
        EditSession session = Open(Sheet("disc = { diameter = \"8 um\" }", rings, "source = \"c1\"\ndrain = \"c2\""));
        Contact[] before = [.. session.State.Device.Contacts];
        Assert.Empty(session.Apply((t, _) => LayoutEdit.OwnBlock(t, "v2").Text, null));

        // The other ring and [turn], which names that one, are as they were.
        Assert.Equal(["c", "contacts[0]"], [session.State.Text.Find("turn.around")!.Value, session.State.Text.Blocks.First(b => b.Path.StartsWith("contacts[", StringComparison.Ordinal)).Path]);
        Assert.Null(session.State.Text.Find("contact[0].resistance"));
        Assert.Empty(session.Apply((t, _) => LayoutEdit.OwnBlock(t, "c3").Text, null));
        Assert.Null(session.State.Text.Find("turn.around"));
        Assert.DoesNotContain("[[contacts]]", session.State.Text.Text, StringComparison.Ordinal);
        foreach (Contact old in before)
        {
            Contact now = Named(session, old.Name);
            Assert.Equal(0, Point2.Distance(old.Middle, now.Middle), 4e-6 * 1e-8);
            Assert.Equal((old.Width, old.LineResistance), (now.Width, now.LineResistance));
        }

        // Numbers beyond the ring, and names that only begin alike, are no contacts of it.
        Assert.Throws<LayoutEditException>(() => LayoutEdit.OwnBlock(new(Sheet("disc = { diameter = \"8 um\" }", rings)), "c4"));
        Assert.Throws<LayoutEditException>(() => LayoutEdit.OwnBlock(new(Sheet("disc = { diameter = \"8 um\" }", rings)), "c1 left"));
        Assert.Throws<LayoutEditException>(() => LayoutEdit.OwnBlock(new("[[contacts]]\nwidth = \"1 um\"\n"), "1"));
    }

    [Fact]
    public void A_wiring_is_reversed_with_its_probes_and_named_anew()
    {
        EditSession session = Open(Sheet(
            "bar = { length = \"12 um\", width = \"4 um\" }", Contact("a", "end = \"left\"") + Contact("b", "end = \"right\"") + "[[point]]\nname = \"p1\"\nat = [\"-1 um\", \"0 um\"]\n[[point]]\nname = \"q\"\nat = [\"1 um\", \"0 um\"]\n",
            "source = \"a\"\ndrain = \"b\"\nalong = [\"p1\", \"q\"]"));
        Assert.Empty(session.Apply((t, d) => LayoutParts.Add(t, d, "wiring", default), null));
        Assert.Empty(session.Apply((t, d) => LayoutParts.Add(t, d, "wiring", default), null));
        IReadOnlyList<Wiring> wirings = session.State.Device.Wirings;
        Assert.Equal(["w", "reversed", "wiring 2"], wirings.Select(w => w.Name));
        Assert.Equal((1, 0), (wirings[1].Source, wirings[1].Drain));
        Assert.Equal((wirings[0].Along!.Minus, wirings[0].Along!.Plus), (wirings[1].Along!.Plus, wirings[1].Along!.Minus));
        Assert.Equal((wirings[0].Source, wirings[0].Along!.Plus), (wirings[2].Source, wirings[2].Along!.Plus));
        Assert.Null(wirings[1].Across);

        // The first free number, whoever has the others.
        Assert.Empty(session.Apply((t, d) => LayoutParts.Add(t, d, "point", new(0, 1e-6)), null));
        Assert.Equal(["p1", "q", "p2"], session.State.Device.Tips.Select(t => t.Name));
        Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutParts.Add(t, d, "hole", default), null));
        Assert.Equal("there is nothing named 'nobody'", Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutParts.Drop(t, d, "nobody"), null)).Message);
        Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutParts.AddPair(t, d, "wiring[0]", "beside"), null));
    }

    [Fact]
    public void A_contact_of_a_round_sheet_is_added_at_its_angle()
    {
        EditSession session = Open(Sheet("disc = { diameter = \"8 um\" }", Contact("a", "at = \"0 deg\", width = \"1 um\"") + Contact("e1", "at = \"90 deg\", width = \"1 um\""), "source = \"a\"\ndrain = \"e1\""));
        Assert.Empty(session.Apply((t, d) => LayoutParts.Add(t, d, "edge", new(-3e-6, -3e-6)), null));
        Assert.Equal(0, Point2.Distance(new Point2(4e-6, 0).Turned(-0.75 * Math.PI), Named(session, "e2").Middle), 4e-6 * 1e-4);

        // A twentieth of the sheet is the width of what is added.
        Assert.Equal(0.05 * session.State.Device.Domain.Size, Named(session, "e2").Width, 1e-9);
        Assert.Empty(session.Apply((t, d) => LayoutParts.Drop(t, d, "e2"), null));
    }
}
