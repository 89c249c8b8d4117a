using System.Text.Json;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Sessions;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.SessionsTests;

/// <summary>Corners of an outline and traces, as changes of the device file.</summary>
public sealed class LayoutOutlineTests : IDisposable
{
    // Clockwise on purpose, with a hole.
    private const string Corners = "corners = [[\"0 um\", \"0 um\"], [\"0 um\", \"4 um\"], [\"10 um\", \"4 um\"], [\"10 um\", \"0 um\"]], holes = [[[\"4 um\", \"1 um\"], [\"5 um\", \"1 um\"], [\"5 um\", \"2 um\"]]]";

    private const string Text = """
        [sheet]
        outline = { CORNERS }   # kept
        [law]
        kind = "ohmic"
        a = "1 mS"
        b = "1 mS"
        [[contact]]
        name = "left"
        edge = { from = ["0 um", "1 um"], to = ["0 um", "3 um"] }
        [[contact]]
        name = "right"
        edge = { from = ["10 um", "1 um"], to = ["10 um", "3 um"] }
        [[contact]]
        name = "top"
        edge = { from = ["2 um", "4 um"], to = ["3 um", "4 um"] }
        [[wiring]]
        name = "bar"
        source = "left"
        drain = "right"
        [drive]
        current = { from = "0 uA", to = "1 uA", steps = 2 }
        """;

    private readonly TempFolder folder = new("outline");

    public void Dispose() => folder.Dispose();

    private EditSession Open(string outline = Corners) => EditSession.Open(folder.Write("device.toml", Text.Replace("CORNERS", outline, StringComparison.Ordinal))).Session!;

    private static int Find(SheetDevice device, double x, double y) =>
        device.Drawn[0].Select(c => c.Start).ToList().FindIndex(p => Point2.Distance(p, new(x * 1e-6, y * 1e-6)) < 1e-12);

    private static Contact Named(EditSession session, string name) => session.State.Device.Contacts.Single(c => c.Name == name);

    [Fact]
    public void An_outline_of_corners_is_that_of_the_same_file()
    {
        folder.Write("sheet.geojson", """{"type":"Polygon","coordinates":[[[0,0],[0,4],[10,4],[10,0],[0,0]],[[4,1],[5,1],[5,2],[4,1]]]}""");
        SheetDevice here = Open().State.Device, file = Open("file = \"sheet.geojson\", unit = \"um\"").State.Device;
        Assert.Equal("outline", here.Shape);
        Assert.Equal(file.Drawn.SelectMany(l => l).Select(c => c.Start), here.Drawn.SelectMany(l => l).Select(c => c.Start));
        Assert.Equal([4, 3], here.Drawn.Select(l => l.Count));
    }

    [Theory]
    [InlineData("corners = [[\"0 um\", \"0 um\"], [\"1 um\", \"0 um\"]]", "'corners': at least three corners are needed")]
    [InlineData("corners = \"all\"", "'corners' is text; write a list of corners")]
    [InlineData("corners = [[\"0 um\", \"0 um\"], [\"9 um\", \"9 um\"], [\"9 um\", \"0 um\"], [\"0 um\", \"9 um\"]]", "the outline: ")]
    [InlineData(Corners + ", file = \"sheet.geojson\"", "an outline stands in a file or as 'corners', and both are given")]
    [InlineData("file = \"sheet.geojson\", unit = \"um\", holes = []", "'holes' goes with 'corners'")]
    [InlineData(Corners + ", unit = \"V\"", "'unit': \"V\" is no unit of length")]
    [InlineData("corners = [[\"0 um\", \"0 um\"], [\"1 um\", \"0 V\"], [\"1 um\", \"1 um\"]]", "'corners', y: ")]
    public void Wrong_corners_are_faults_at_their_place(string outline, string message)
    {
        folder.Write("sheet.geojson", """{"type":"Polygon","coordinates":[[[0,0],[10,0],[10,4],[0,4],[0,0]]]}""");
        IReadOnlyList<Fault> faults = DeviceFile.Read(folder.Write("device.toml", Text.Replace("CORNERS", outline, StringComparison.Ordinal))).Faults;
        Assert.Contains(faults, f => f.Line == 2 && f.Message.StartsWith(message, StringComparison.Ordinal));
    }

    [Fact]
    public void A_moved_corner_takes_the_contacts_of_its_edges_along_and_a_file_stays_as_it_is()
    {
        string geo = folder.Write("sheet.geojson", """{"type":"Polygon","coordinates":[[[0,0],[0,4],[10,4],[10,0],[0,0]],[[4,1],[5,1],[5,2],[4,1]]]}""");
        foreach (string outline in new[] { Corners, "file = \"sheet.geojson\", unit = \"um\"" })
        {
            EditSession session = Open(outline);
            string before = session.State.Text.Text, file = File.ReadAllText(geo);
            int corner = Find(session.State.Device, 0, 4);
            Assert.Empty(session.Apply((t, d) => LayoutOutline.Move(t, d, 0, corner, new(-2e-6, 6e-6)), null));
            Assert.True(Find(session.State.Device, -2, 6) >= 0);

            // By hand: a quarter and three quarters of the way from (0, 0) to (-2, 6); top: 2/10 and 3/10 of the way from (-2, 6) to (10, 4).
            Contact left = Named(session, "left"), top = Named(session, "top");
            Assert.Equal(0, Point2.Distance(left.Middle, new(-1e-6, 3e-6)), 2e-9);
            Assert.Equal(Math.Sqrt(10) * 1e-6, left.Width, 3e-9);
            Assert.Equal(0, Point2.Distance(top.Middle, new((-2 + (0.25 * 12)) * 1e-6, (6 - (0.25 * 2)) * 1e-6)), 2e-9);
            Assert.Contains("# kept", session.State.Text.Text, StringComparison.Ordinal);
            Assert.Equal(file, File.ReadAllText(geo));
            Assert.True(session.Undo());
            Assert.Equal(before, session.State.Text.Text);
        }
    }

    [Fact]
    public void Corners_come_and_go_and_the_contacts_stay_on_the_edge()
    {
        EditSession session = Open();
        string before = session.State.Text.Text;

        // Every edge, in a text whose order runs against the sheet's.
        for (int k = 0; k < 4; k++)
        {
            Curve edge = session.State.Device.Drawn[0][k];
            Point2 middle = edge.At(0.5), at = middle + new Point2(0, 0.3e-6);
            Assert.Empty(session.Apply((t, d) => LayoutOutline.Add(t, d, 0, k, at), null));
            Assert.Equal(5, session.State.Device.Drawn[0].Count);
            int added = Find(session.State.Device, at.X * 1e6, at.Y * 1e6), n = 5;
            Assert.Equal(edge.Start, session.State.Device.Drawn[0][(added + n - 1) % n].Start);
            Assert.Equal(edge.End, session.State.Device.Drawn[0][(added + 1) % n].Start);
            Assert.Empty(session.Apply((t, d) => LayoutOutline.Drop(t, d, 0, added), null));
            Assert.Equal(0, Point2.Distance(Named(session, "left").Middle, new(0, 2e-6)), 0.1e-6);
            Assert.True(session.Undo());
            Assert.True(session.Undo());
            Assert.Equal(before, session.State.Text.Text);
        }

        Assert.Empty(session.Apply((t, d) => LayoutOutline.Drop(t, d, 1, 0), null));
        Assert.Single(session.State.Device.Drawn);
        int last = Find(session.State.Device, 0, 0);
        Assert.Empty(session.Apply((t, d) => LayoutParts.Drop(t, d, "top"), null));
        Assert.Empty(session.Apply((t, d) => LayoutOutline.Move(t, d, 0, last, new(-1e-6, 0)), null));
        Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutOutline.Move(t, d, 0, 9, default), null));
        Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutOutline.Move(t, d, 3, 0, default), null));
    }

    [Fact]
    public void A_trace_is_geojson_as_its_standard_wants_it_and_becomes_the_sheet()
    {
        EditSession session = Open();
        Point2[] rim = [new(0, 0), new(0, 5e-6), new(12e-6, 5e-6), new(12e-6, 0)], hole = [new(5e-6, 1e-6), new(6e-6, 1e-6), new(6e-6, 2e-6)];
        TraceShape Pad(string name, double x) => new(TraceKind.Pad, name, [new(x * 1e-6, 1e-6), new(x * 1e-6, 3e-6), new((x + 1) * 1e-6, 3e-6), new((x + 1) * 1e-6, 1e-6)]);
        TraceShape[] shapes = [Pad("left", 1), new(TraceKind.Hole, "", hole), new(TraceKind.Outline, "", rim), Pad("right", 10), Pad("new \"one\"", 3)];
        Assert.Equal(SaveOutcome.Saved, LayoutTrace.Save(session.State, "t.geojson", shapes, overwrite: false));
        Assert.Equal(SaveOutcome.Exists, LayoutTrace.Save(session.State, "t.geojson", shapes, overwrite: false));
        Assert.Equal(SaveOutcome.Saved, LayoutTrace.Save(session.State, "t.geojson", shapes, overwrite: true));

        // RFC 7946, sections 3.1.6 and 3.3: rings are closed, the outer one counter-clockwise, holes clockwise; features in a collection.
        using JsonDocument json = JsonDocument.Parse(File.ReadAllText(folder["t.geojson"]));
        Assert.Equal("FeatureCollection", json.RootElement.GetProperty("type").GetString());
        JsonElement first = json.RootElement.GetProperty("features")[0];
        Assert.Equal("Feature", first.GetProperty("type").GetString());
        JsonElement rings = first.GetProperty("geometry").GetProperty("coordinates");
        Assert.Equal(2, rings.GetArrayLength());
        for (int k = 0; k < 2; k++)
        {
            double[][] ring = [.. rings[k].EnumerateArray().Select(p => p.EnumerateArray().Select(v => v.GetDouble()).ToArray())];
            Assert.Equal(ring[0], ring[^1]);
            double area = ring.Zip(ring.Skip(1), (p, q) => ((p[0] * q[1]) - (p[1] * q[0])) / 2).Sum();
            Assert.Equal(k == 0 ? 60 : -0.5, area, 1e-9);
        }

        Assert.Empty(session.Apply((t, d) => LayoutParts.Drop(t, d, "top"), null));
        Assert.Empty(session.Apply((t, d) => LayoutTrace.Use(t, d, "t.geojson", false), null));
        SheetDevice device = session.State.Device;
        Assert.Equal(59.5e-12, new Outline(device.Drawn).Area, 1e-16);
        Assert.Equal(["left", "right", "new \"one\""], device.Contacts.Select(c => c.Name));
        Assert.All(device.Contacts, c => Assert.Equal(ContactKind.Pad, c.Kind));
        Assert.Equal(0, Point2.Distance(Named(session, "left").Middle, new(1.5e-6, 2e-6)), 1e-12);

        // With its pads alone, on a device whose contacts would not fit.
        EditSession disc = EditSession.Open(folder.Write("disc.toml", File.ReadAllText(Path.Combine(Repository.Root, "meshes", "disc-12.toml")))).Session!;
        string before = disc.State.Text.Text;
        Assert.NotEmpty(disc.Apply((t, d) => LayoutTrace.Use(t, d, "t.geojson", false), null));
        Assert.Empty(disc.Apply((t, d) => LayoutTrace.Use(t, d, "t.geojson", true), null));
        Assert.Equal(["left", "right", "new \"one\""], disc.State.Device.Contacts.Select(c => c.Name));
        Assert.Equal((0, 1), (disc.State.Device.Wirings.Single().Source, disc.State.Device.Wirings.Single().Drain));
        Assert.True(disc.Undo());
        Assert.Equal(before, disc.State.Text.Text);
    }

    // TOML lets a table be written in braces, under a header of its own or by dotted keys.
    [Theory]
    [InlineData("outline.file = \"sheet.geojson\"  # dotted\noutline.unit = \"um\"", "outline.corners = [")]
    [InlineData("[sheet.outline]\nfile = \"sheet.geojson\"\nunit = \"um\"", "\ncorners = [")]
    public void A_corner_moves_and_a_trace_is_used_however_the_outline_is_written(string outline, string own)
    {
        folder.Write("sheet.geojson", """{"type":"Polygon","coordinates":[[[0,0],[0,4],[10,4],[10,0],[0,0]],[[4,1],[5,1],[5,2],[4,1]]]}""");
        string Device(string sheet) => Text.Replace("outline = { CORNERS }   # kept", sheet, StringComparison.Ordinal);
        EditSession session = EditSession.Open(folder.Write("device.toml", Device(outline))).Session!;
        string before = session.State.Text.Text;
        Assert.Empty(session.Apply((t, d) => LayoutOutline.Move(t, d, 0, Find(d, 0, 4), new(-2e-6, 6e-6)), null));
        Assert.True(Find(session.State.Device, -2, 6) >= 0);
        Assert.Equal(2, session.State.Device.Drawn.Count);
        Assert.Contains(own, session.State.Text.Text, StringComparison.Ordinal);
        Assert.DoesNotContain("sheet.geojson", session.State.Text.Text, StringComparison.Ordinal);
        Assert.True(session.Undo());
        Assert.Equal(before, session.State.Text.Text);

        TraceShape[] shapes = [new(TraceKind.Outline, "", [new(0, 0), new(0, 4e-6), new(10e-6, 4e-6), new(10e-6, 0)])];
        Assert.Equal(SaveOutcome.Saved, LayoutTrace.Save(session.State, "t.geojson", shapes, overwrite: true));
        Assert.Empty(session.Apply((t, d) => LayoutTrace.Use(t, d, "t.geojson", false), null));
        Assert.Single(session.State.Device.Drawn);

        EditSession bar = EditSession.Open(folder.Write("bar.toml", Device("bar.length = \"10 um\"\nbar.width = \"4 um\"\n")
            .Replace("edge = { from = [\"0 um\", \"1 um\"], to = [\"0 um\", \"3 um\"] }", "edge.end = \"left\"", StringComparison.Ordinal)
            .Replace("edge = { from = [\"10 um\", \"1 um\"], to = [\"10 um\", \"3 um\"] }", "edge.end = \"right\"", StringComparison.Ordinal)
            .Replace("edge = { from = [\"2 um\", \"4 um\"], to = [\"3 um\", \"4 um\"] }", "edge = { from = [\"2 um\", \"2 um\"], to = [\"3 um\", \"2 um\"] }", StringComparison.Ordinal))).Session!;
        EditableToml used = LayoutTrace.Use(bar.State.Text, bar.State.Device, "t.geojson", false);
        Assert.DoesNotContain("bar.", used.Text, StringComparison.Ordinal);
        Assert.Equal("t.geojson", used.Find("sheet.outline.file")!.Value);
    }

    [Fact]
    public void A_save_removes_what_a_killed_one_left()
    {
        EditSession session = Open();
        TraceShape[] shapes = [new(TraceKind.Outline, "", [new(0, 0), new(1e-6, 0), new(0, 1e-6)])];
        string left = folder.Write(".t.geojson.1-1.part", "half"), other = folder.Write(".u.geojson.1-1.part", "half");
        File.SetLastWriteTimeUtc(left, DateTime.UnixEpoch.AddYears(40));
        File.SetLastWriteTimeUtc(other, DateTime.UnixEpoch.AddYears(40));
        Assert.Equal(SaveOutcome.Saved, LayoutTrace.Save(session.State, "t.geojson", shapes, overwrite: false));
        Assert.False(File.Exists(left));
        Assert.True(File.Exists(other));
    }

    [Fact]
    public void A_trace_that_makes_no_sheet_is_refused_with_the_reason()
    {
        TraceShape Shape(TraceKind kind, string name, params double[] xy) => new(kind, name, [.. xy.Chunk(2).Select(p => new Point2(p[0] * 1e-6, p[1] * 1e-6))]);
        TraceShape good = Shape(TraceKind.Outline, "", 0, 0, 4, 0, 4, 4);
        (TraceShape[] Shapes, string Message)[] cases =
        [
            ([], "nothing was traced yet"),
            ([good, good], "a sheet has one outline"),
            ([Shape(TraceKind.Hole, "", 0, 0, 1, 0, 1, 1)], "a hole needs an outline"),
            ([Shape(TraceKind.Outline, "", 0, 0, 4, 4, 4, 0, 0, 4)], "the outline: "),
            ([good, Shape(TraceKind.Hole, "", 3, 3, 9, 3, 9, 9)], "the outline: "),
            ([good, Shape(TraceKind.Pad, "", 0, 0, 1, 0, 1, 1)], "every pad needs a name"),
            ([good, Shape(TraceKind.Pad, "outline", 0, 0, 1, 0, 1, 1)], "a pad cannot be named 'outline'"),
            ([Shape(TraceKind.Pad, "a", 0, 0, 1, 0, 1, 1), Shape(TraceKind.Pad, "a", 0, 0, 1, 0, 1, 1)], "two pads are named 'a'"),
            ([Shape(TraceKind.Pad, "a", 0, 0, 1, 0)], "a traced polygon needs at least three corners"),
            ([Shape(TraceKind.Pad, "a", 0, 0, 1, 0, 1, 2e9)], "a traced polygon needs at least three corners, none beyond 1 km"),
            ([Shape(TraceKind.Pad, "a", 0, 0, -2e9, 0, 1, 1)], "a traced polygon needs at least three corners, none beyond 1 km"),
            ([Shape(TraceKind.Pad, new string('a', 101), 0, 0, 1, 0, 1, 1)], "every pad needs a name of one line"),
            ([Shape(TraceKind.Pad, "a\nb", 0, 0, 1, 0, 1, 1)], "every pad needs a name of one line"),
            ([Shape(TraceKind.Pad, "a", 0, 0, 1, 1, 1, 0, 0, 1)], "the pad 'a': "),
            ([.. Enumerable.Range(0, 501).Select(k => Shape(TraceKind.Pad, $"p{k}", 0, 0, 1, 0, 1, 1))], "up to 500 polygons are saved together"),
            ([Shape(TraceKind.Pad, "a", 0, 0, 1, 0, double.NaN, 2)], "a traced polygon needs at least three corners"),
        ];
        Assert.All(cases, c => Assert.StartsWith(c.Message, Assert.Throws<LayoutEditException>(() => LayoutTrace.GeoJson(c.Shapes)).Message, StringComparison.Ordinal));
    }

    [Theory]
    [InlineData("../t.geojson")]
    [InlineData("t.toml")]
    [InlineData(".t.geojson")]
    [InlineData("a/t.geojson")]
    [InlineData("a\\t.geojson")]
    [InlineData("t\n.geojson")]
    [InlineData("")]
    public void A_trace_is_saved_and_used_under_a_plain_name_only(string name)
    {
        EditSession session = Open();
        TraceShape[] shapes = [new(TraceKind.Outline, "", [new(0, 0), new(1e-6, 0), new(0, 1e-6)])];
        Assert.Throws<LayoutEditException>(() => LayoutTrace.Save(session.State, name, shapes, overwrite: true));
        Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutTrace.Use(t, d, name, false), null));
        Assert.Single(Directory.GetFiles(folder[""]));
    }

    [Fact]
    public void Pairs_come_and_go()
    {
        EditSession session = Open();
        string before = session.State.Text.Text;
        Assert.Empty(session.Apply((t, d) => LayoutParts.AddPair(t, d, "wiring[0]", "along"), null));
        Assert.NotNull(session.State.Device.Wirings[0].Along);
        Assert.Empty(session.Apply((t, d) => LayoutParts.AddPair(t, d, "wiring[0]", "pairs"), null));
        Assert.Empty(session.Apply((t, d) => LayoutParts.AddPair(t, d, "wiring[0]", "pairs"), null));
        Assert.Equal(["along", "pair1", "pair2"], session.State.Device.Wirings[0].Pairs.Select(p => p.Name));
        Assert.Empty(session.Apply((t, _) => t.Without("wiring[0].pairs.pair1"), null));
        Assert.Equal(["along", "pair2"], session.State.Device.Wirings[0].Pairs.Select(p => p.Name));
        Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutParts.AddPair(t, d, "wiring[7]", "along"), null));
        for (int k = 0; k < 4; k++)
        {
            Assert.True(session.Undo());
        }

        Assert.Equal(before, session.State.Text.Text);
    }

    [Theory]
    [InlineData("disc = { diameter = \"8 um\" }", "a disc has no corners to move; its sizes are under [sheet]")]
    [InlineData("hall_bar = { length = \"30 um\", width = \"6 um\", arm_width = \"1 um\", arm_length = \"3 um\", arms_at = [\"-8 um\", \"8 um\"] }", "a hall bar has no corners to move; its sizes are under [sheet]")]
    public void A_shape_of_sizes_has_no_corners(string sheet, string message)
    {
        string contacts = sheet.StartsWith("disc", StringComparison.Ordinal) ? "at = \"0 deg\", width = \"1 um\"|at = \"90 deg\", width = \"1 um\"" : "end = \"left\"|end = \"right\"";
        string text = $"""
            [sheet]
            {sheet}
            [law]
            kind = "ohmic"
            a = "1 mS"
            b = "1 mS"
            [[contact]]
            name = "left"
            edge = {"{"} {contacts.Split('|')[0]} {"}"}
            [[contact]]
            name = "right"
            edge = {"{"} {contacts.Split('|')[1]} {"}"}
            [[wiring]]
            name = "bar"
            source = "left"
            drain = "right"
            [drive]
            current = {"{"} from = "0 uA", to = "1 uA", steps = 2 {"}"}
            """;
        EditSession session = EditSession.Open(folder.Write("shape.toml", text)).Session!;
        Assert.Equal(message, Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutOutline.Move(t, d, 0, 0, default), null)).Message);
        Assert.All(LayoutOutline.Paths(session.State.Text, session.State.Device).SelectMany(l => l), Assert.Null);
    }

    [Fact]
    public void An_outline_of_very_many_corners_is_not_moved_by_hand()
    {
        // A sawtooth of 2100 corners along the lower edge.
        string teeth = string.Join(',', Enumerable.Range(0, 2097).Select(k => FormattableString.Invariant($"[{k * 10.0 / 2097},{(k % 2 == 0 ? 0 : 0.01)}]")));
        folder.Write("sheet.geojson", $"{{\"type\":\"Polygon\",\"coordinates\":[[{teeth},[10,0],[10,4],[0,4],[0,0]]]}}");
        EditSession session = Open("file = \"sheet.geojson\", unit = \"um\"");
        Assert.Equal("the outline has 2100 corners, and up to 2000 are moved by hand; simplify it first", Assert.Throws<LayoutEditException>(() => session.Apply(LayoutOutline.Own, null)).Message);
    }

    [Fact]
    public void An_outline_under_its_own_header_keeps_its_unit_and_its_line_ends()
    {
        folder.Write("sheet.geojson", """{"type":"Polygon","coordinates":[[[0,0],[0,4000],[10000,4000],[10000,0],[0,0]],[[4000,1000],[5000,1000],[5000,2000],[4000,1000]]]}""");
        string text = Text.Replace("[sheet]\noutline = { CORNERS }   # kept", "[sheet.outline]\nfile = \"sheet.geojson\"   # gone with its key\nunit = \"nm\"", StringComparison.Ordinal).Replace("\n", "\r\n", StringComparison.Ordinal);
        EditSession session = EditSession.Open(folder.Write("device.toml", text)).Session!;
        Point2[][] before = [.. session.State.Device.Drawn.Select(l => l.Select(c => c.Start).ToArray())];
        Assert.All(LayoutOutline.Paths(session.State.Text, session.State.Device).SelectMany(l => l), Assert.Null);
        Assert.Empty(session.Apply(LayoutOutline.Own, null));
        string now = session.State.Text.Text;
        Assert.DoesNotContain("sheet.geojson", now, StringComparison.Ordinal);
        Assert.DoesNotContain("\n", now.Replace("\r\n", "", StringComparison.Ordinal), StringComparison.Ordinal);
        Assert.Contains("[\"10000 nm\", \"4000 nm\"]", now, StringComparison.Ordinal);
        Assert.Equal(before.Select(l => l.Length), session.State.Device.Drawn.Select(l => l.Count));
        Assert.All(before.SelectMany(l => l), p => Assert.Contains(session.State.Device.Drawn.SelectMany(l => l), c => Point2.Distance(c.Start, p) < 1e-12));
        Assert.All(LayoutOutline.Paths(session.State.Text, session.State.Device).SelectMany(l => l), Assert.NotNull);

        // What stands there already stays, to the letter.
        Assert.Empty(session.Apply(LayoutOutline.Own, null));
        Assert.Equal(now, session.State.Text.Text);
    }

    [Fact]
    public void Corners_of_holes_move_come_and_go_and_the_last_three_of_the_rim_stay()
    {
        EditSession session = Open();
        int n = session.State.Device.Drawn[1].Count;
        Assert.Empty(session.Apply((t, d) => LayoutOutline.Add(t, d, 1, 0, new(4.2e-6, 1.6e-6)), null));
        Assert.Equal(n + 1, session.State.Device.Drawn[1].Count);
        int added = session.State.Device.Drawn[1].ToList().FindIndex(c => Point2.Distance(c.Start, new(4.2e-6, 1.6e-6)) < 1e-9);
        Assert.Empty(session.Apply((t, d) => LayoutOutline.Move(t, d, 1, added, new(4.1e-6, 1.7e-6)), null));
        Assert.Contains(session.State.Device.Drawn[1], c => Point2.Distance(c.Start, new(4.1e-6, 1.7e-6)) < 1e-9);
        Assert.Empty(session.Apply((t, d) => LayoutOutline.Drop(t, d, 1, added), null));
        Assert.Equal(n, session.State.Device.Drawn[1].Count);
        Assert.Equal("the outline has no corner 8 in hole 1", Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutOutline.Drop(t, d, 1, 7), null)).Message);
        Assert.Equal("the outline has no corner 0", Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutOutline.Drop(t, d, 0, -1), null)).Message);

        // The upper left corner goes, with "top" and "left" on what joins its neighbours; then three are left.
        Assert.Empty(session.Apply((t, d) => LayoutParts.Drop(t, d, "top"), null));
        Assert.Empty(session.Apply((t, d) => LayoutOutline.Drop(t, d, 1, 0), null));
        int corner = Find(session.State.Device, 10, 0), before = session.State.Device.Drawn[0].Count;
        Assert.Equal(4, before);
        Assert.Empty(session.Apply((t, d) => LayoutOutline.Drop(t, d, 0, corner), null));
        Assert.Equal("an outline keeps at least three corners", Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutOutline.Drop(t, d, 0, 0), null)).Message);
    }

    [Fact]
    public void A_trace_of_pads_alone_takes_the_place_of_the_contacts_of_their_names()
    {
        EditSession session = EditSession.Open(folder.Write("device.toml", Text.Replace("CORNERS", Corners, StringComparison.Ordinal)
            .Replace("to = [\"0 um\", \"3 um\"] }", "to = [\"0 um\", \"3 um\"] }\nresistance = \"100 ohm um\"\nshift = \"0.1 um\"", StringComparison.Ordinal))).Session!;
        Assert.True(Named(session, "left").LineResistance > 0);
        TraceShape pad = new(TraceKind.Pad, "left", [new(0.5e-6, 1e-6), new(1.5e-6, 1e-6), new(1.5e-6, 3e-6), new(0.5e-6, 3e-6)]);
        Assert.Equal(SaveOutcome.Saved, LayoutTrace.Save(session.State, "pads.geojson", [pad], overwrite: false));
        Point2[] drawn = [.. session.State.Device.Drawn[0].Select(c => c.Start)];
        Assert.Equal("a current needs two contacts; trace at least two pads", Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutTrace.Use(t, d, "pads.geojson", true), null)).Message);
        Assert.Empty(session.Apply((t, d) => LayoutTrace.Use(t, d, "pads.geojson", false), null));
        Assert.Equal(drawn, session.State.Device.Drawn[0].Select(c => c.Start));
        Assert.Equal(["left", "right", "top"], session.State.Device.Contacts.Select(c => c.Name));
        Assert.Equal((ContactKind.Pad, 0.0, 0.0), (Named(session, "left").Kind, Named(session, "left").LineResistance, Named(session, "left").Resistivity));
        Assert.Equal(0, Point2.Distance(new(1e-6, 2e-6), Named(session, "left").Middle), 1e-12);

        // Used once more nothing changes; a file that is no trace, or none at all, is said to be so.
        string text = session.State.Text.Text;
        Assert.Empty(session.Apply((t, d) => LayoutTrace.Use(t, d, "pads.geojson", false), null));
        Assert.Equal(text, session.State.Text.Text);
        folder.Write("bad.geojson", "{\"type\": 3}");
        Assert.StartsWith("the file 'bad.geojson': this is no GeoJSON", Assert.Throws<LayoutEditException>(() => session.Apply((t, d) => LayoutTrace.Use(t, d, "bad.geojson", false), null)).Message, StringComparison.Ordinal);
        Assert.Throws<FileNotFoundException>(() => session.Apply((t, d) => LayoutTrace.Use(t, d, "gone.geojson", false), null));
    }

    [Fact]
    public void A_traced_outline_takes_the_place_of_one_under_a_header()
    {
        folder.Write("sheet.geojson", """{"type":"Polygon","coordinates":[[[0,0],[0,4],[10,4],[10,0],[0,0]]]}""");
        EditSession session = EditSession.Open(folder.Write("device.toml", Text.Replace("[sheet]\noutline = { CORNERS }   # kept", "[sheet]\n[sheet.outline]\nfile = \"sheet.geojson\"\nunit = \"um\"", StringComparison.Ordinal))).Session!;
        TraceShape outline = new(TraceKind.Outline, "", [new(0, 0), new(10e-6, 0), new(10e-6, 5e-6), new(0, 5e-6)]);
        Assert.Equal(SaveOutcome.Saved, LayoutTrace.Save(session.State, "t.geojson", [outline], overwrite: false));
        Assert.Empty(session.Apply((t, d) => LayoutParts.Drop(t, d, "top"), null));
        Assert.Empty(session.Apply((t, d) => LayoutTrace.Use(t, d, "t.geojson", false), null));
        Assert.Equal(50e-12, new Outline(session.State.Device.Drawn).Area, 1e-16);
        Assert.DoesNotContain("[sheet.outline]", session.State.Text.Text, StringComparison.Ordinal);
    }
}
