using FieldSolve.Device;
using FieldSolve.Geometry;

namespace FieldSolve.Tests.DeviceTests;

public class GoodFileTests
{
    private const double Um = 1e-6;

    [Fact]
    public void A_disc_keeps_what_the_file_says()
    {
        SheetDevice d = DeviceTexts.Good(DeviceTexts.Disc.Replace("[law]", """
            thickness = "12 nm"
            mean_free_path = "100 nm"
            gate_capacitance = "12 nF/cm^2"
            [law]
            axis = "30 deg"
            """, StringComparison.Ordinal) + """

            both_signs = true
            frequency = ["17.77 Hz", "1 kHz"]
            offset = "1 uA"
            [mesh]
            error = 2e-4
            even_error = 5e-3
            max_unknowns = 1000
            [caution]
            sheet_current_density = "10 A/m"
            power_density = "2 mW/um^2"
            [fit]
            a = true
            """);
        Assert.Equal("Disc", d.Title);
        Assert.Equal("disc", d.Shape);
        Assert.Equal("device.toml", d.Path);
        Assert.Equal(64, d.Sha256.Length);
        Assert.Equal(12e-9, d.Thickness);
        Assert.Equal(100e-9, d.MeanFreePath);
        Assert.Equal(12e-5, d.GateCapacitance);
        Assert.Equal(Math.PI / 6, d.Axis, 1e-15);
        Assert.Equal("ohmic", d.Law.Kind);
        Assert.Equal((0, 500e-6, 11, true, 1e-6), (d.Drive!.From, d.Drive.To, d.Drive.Steps, d.Drive.BothSigns, d.Drive.Offset));
        Assert.Equal([17.77, 1000.0], d.Drive.Frequencies);
        Assert.Equal(new MeshSpec { Error = 2e-4, EvenError = 5e-3, MaxUnknowns = 1000 }, d.Mesh);
        Assert.Equal(new CautionSpec { SheetCurrentDensity = 10, PowerDensity = 2e9 }, d.Caution);
        Wiring w = Assert.Single(d.Wirings);
        Assert.Equal((0, 1), (w.Source, w.Drain));
        Assert.Equal(new Pair("along", new Terminal(false, 2), new Terminal(true, 0)), w.Along);
        Assert.Null(w.Across);
        Assert.Equal(new Tip("p", new Point2(Um, 0)), Assert.Single(d.Tips));
        Assert.Equal(new Point2(Um, 0), d.Domain.Vertices[Assert.Single(d.Domain.Tips)]);
        AssertWidths(d);
    }

    [Fact]
    public void An_absent_part_takes_its_default()
    {
        SheetDevice d = DeviceTexts.Good(DeviceTexts.Bar);
        Assert.Equal("device.toml", d.Title);
        Assert.Null(d.Drive);
        Assert.Null(d.Turn);
        Assert.Null(d.Thickness);
        Assert.Equal(new MeshSpec(), d.Mesh);
        Assert.Equal(0, d.Axis);
    }

    [Fact]
    public void A_contact_at_an_angle_has_its_middle_there_and_its_width_along_the_arc()
    {
        SheetDevice d = DeviceTexts.Good(DeviceTexts.Disc);
        AssertNear(new(-4 * Um, 0), d.Named("w").Middle);
        AssertNear(new(0, 4 * Um), d.Named("n").Middle);
        Assert.Equal(0.7 * Um, d.Named("n").Width, 1e-15);
        Assert.All(d.Domain.Edges, e => Assert.True(e.Curve.IsArc));
        Assert.Equal(2 * Math.PI * 4 * Um, d.Domain.Edges.Sum(e => e.Curve.Length), 1e-15);
    }

    [Fact]
    public void A_dead_edge_keeps_angle_and_width_on_the_live_rim()
    {
        SheetDevice d = DeviceTexts.Good(DeviceTexts.Disc.Replace("[law]", "dead_edge = \"500 nm\"\n[law]", StringComparison.Ordinal));
        AssertNear(new(-3.5 * Um, 0), d.Named("w").Middle);
        Assert.Equal(4 * Um, d.Drawn[0][0].Radius, 1e-18);
        AssertWidths(d);
    }

    [Theory]
    [InlineData("", 0)]
    [InlineData("shift = \"1 um\"", 1)]
    [InlineData("shift = \"-1 um\"", -1)]
    public void A_shift_turns_a_contact_of_the_outer_rim_counter_clockwise(string shift, double um)
    {
        SheetDevice d = DeviceTexts.Good(DeviceTexts.Disc.Replace("name = \"n\"", "name = \"n\"\n" + shift, StringComparison.Ordinal));
        AssertNear(new Point2(4 * Um, 0).Turned((Math.PI / 2) + (um / 4)), d.Named("n").Middle);
        AssertWidths(d);
    }

    [Fact]
    public void A_ring_of_contacts_starts_at_the_first_angle_and_goes_counter_clockwise()
    {
        SheetDevice d = DeviceTexts.Good("""
            [sheet]
            ring = { inner = "1 um", outer = "4 um" }
            [law]
            kind = "saturating"
            a = "1 mS"
            b = "1 mS"
            field_a = "1 kV/m"
            field_b = "1 kV/m"
            sharpness = 2
            [[contacts]]
            ring = 4
            width = "1 um"
            first = "30 deg"
            prefix = "c"
            resistance = "10 ohm um"
            shift = "0.4 um"
            [[contact]]
            name = "i"
            edge = { rim = "inner" }
            [[wiring]]
            name = "a"
            source = "c1"
            drain = "c3"
            pairs = { far = ["c2", "c4"] }
            [turn]
            around = "c"
            """);
        Assert.Equal(["c1", "c2", "c3", "c4", "i"], d.Contacts.Select(c => c.Name));
        for (int k = 0; k < 4; k++)
        {
            AssertNear(new Point2(4 * Um, 0).Turned((Math.PI / 6) + (k * Math.PI / 2) + 0.1), d.Contacts[k].Middle);
            Assert.Equal(10e-6, d.Contacts[k].LineResistance);
        }

        Assert.Equal(2 * Math.PI * Um, d.Named("i").Width, 1e-15);
        Assert.Equal([0, 1, 2, 3], d.Turn!.Contacts);
        Assert.Equal("far", Assert.Single(d.Wirings[0].Pairs).Name);
        AssertWidths(d);
    }

    [Theory]
    [InlineData("0 nm", 0)]
    [InlineData("200 nm", 0.2)]
    public void Contacts_of_a_hall_bar_take_the_whole_live_ends(string dead, double um)
    {
        SheetDevice d = DeviceTexts.Good($$"""
            [sheet]
            hall_bar = { length = "30 um", width = "6 um", arm_width = "1 um", arm_length = "3 um", arms_at = ["8 um", "-8 um"] }
            dead_edge = "{{dead}}"
            [[contact]]
            name = "s"
            edge = { end = "left" }
            [[contact]]
            name = "d"
            edge = { end = "right" }
            [[contact]]
            name = "t1"
            edge = { arm = 1, side = "top" }
            [[contact]]
            name = "b2"
            edge = { arm = 2, side = "bottom" }

            """ + DeviceTexts.Rest);
        AssertNear(new((-15 + um) * Um, 0), d.Named("s").Middle);
        AssertNear(new((15 - um) * Um, 0), d.Named("d").Middle);
        AssertNear(new(8 * Um, (6 - um) * Um), d.Named("t1").Middle);
        AssertNear(new(-8 * Um, (-6 + um) * Um), d.Named("b2").Middle);
        Assert.Equal((6 - (2 * um)) * Um, d.Named("s").Width, 1e-12);
        Assert.Equal((1 - (2 * um)) * Um, d.Named("b2").Width, 1e-12);
        AssertWidths(d);
    }

    [Fact]
    public void A_dead_edge_that_swallows_an_arm_is_a_fault_where_a_contact_names_it()
    {
        DeviceReading reading = DeviceFile.Parse("""
            [sheet]
            hall_bar = { length = "30 um", width = "6 um", arm_width = "1 um", arm_length = "3 um", arms_at = ["8 um"] }
            dead_edge = "600 nm"
            [[contact]]
            name = "s"
            edge = { end = "left" }
            [[contact]]
            name = "d"
            edge = { arm = 1, side = "top" }

            """ + DeviceTexts.Rest, "d.toml", "");
        Fault fault = Assert.Single(reading.Faults);
        Assert.Equal((9, 16), (fault.Line, fault.Column));
        Assert.Contains("leaves nothing of arm 1", fault.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void A_contact_between_two_points_takes_the_shorter_way_round()
    {
        SheetDevice d = DeviceTexts.Good(DeviceTexts.Bar + """
            [[contact]]
            name = "t"
            edge = { from = ["3 um", "3 um"], to = ["1 um", "3 um"] }
            shift = "0.5 um"
            """);
        AssertNear(new(1.5 * Um, 3 * Um), d.Named("t").Middle);
        Assert.Equal(2 * Um, d.Named("t").Width, 1e-15);
        AssertWidths(d);
    }

    [Fact]
    public void A_contact_between_two_points_moves_to_the_live_edge_with_its_width()
    {
        SheetDevice d = DeviceTexts.Good(DeviceTexts.Bar.Replace("[law]", "dead_edge = \"250 nm\"\n[law]", StringComparison.Ordinal) + """
            [[contact]]
            name = "t"
            edge = { from = ["3 um", "3 um"], to = ["1 um", "3 um"] }
            """);
        AssertNear(new(2 * Um, 2.75 * Um), d.Named("t").Middle);
        Assert.Equal(2 * Um, d.Named("t").Width, 1e-15);
        Assert.Equal(5.5 * Um, d.Named("l").Width, 1e-12);
        AssertWidths(d);
    }

    [Fact]
    public void An_ideal_pad_is_cut_out_and_a_resistive_one_is_a_region()
    {
        SheetDevice d = DeviceTexts.Good(DeviceTexts.Bar + """
            [[contact]]
            name = "ideal"
            pad = [["1 um", "1 um"], ["3 um", "1 um"], ["3 um", "2 um"], ["1 um", "2 um"]]
            [[contact]]
            name = "poor"
            pad = [["-3 um", "1 um"], ["-1 um", "1 um"], ["-1 um", "5 um"], ["-3 um", "5 um"], ["-3 um", "1 um"]]
            resistivity = "1e-7 ohm cm^2"
            """);
        Contact ideal = d.Named("ideal"), poor = d.Named("poor");
        Assert.Equal(ContactKind.Pad, ideal.Kind);
        AssertNear(new(2 * Um, 1.5 * Um), ideal.Middle);
        Assert.Equal(Math.Sqrt(2) * Um, ideal.Width, 1e-15);
        Assert.Equal(1e-11, poor.Resistivity);
        Assert.Equal(4, poor.Shape.Count);
        Assert.Equal(3, Assert.Single(d.Domain.Regions).Contact);
        Assert.Equal(6 * Um, d.Domain.Edges.Where(e => e.Contact == 2).Sum(e => e.Curve.Length), 1e-15);
        Assert.DoesNotContain(d.Domain.Edges, e => e.Contact == 3);
    }

    [Fact]
    public void Every_law_of_the_catalogue_that_reads_no_file_can_be_read_from_its_examples()
    {
        foreach (Laws.LawKind kind in Laws.LawCatalogue.Kinds.Where(k => !k.Parameters.Any(p => p.IsFile)))
        {
            string keys = string.Concat(kind.Parameters.Where(p => p.Required)
                .Select(p => $"{p.Key} = {(p.Dimension == Quantities.Dimension.None ? "2" : $"\"{p.Dimension.Example}\"")}\n"));
            SheetDevice d = DeviceTexts.Good(DeviceTexts.Bar.Replace(
                "kind = \"ohmic\"\na = \"4 mS\"\nb = \"1 mS\"\n", $"kind = \"{kind.Name}\"\n{keys}", StringComparison.Ordinal));
            Assert.Equal(kind.Name, d.Law.Kind);
        }
    }

    [Fact]
    public void The_same_text_gives_the_same_hash_with_and_without_a_byte_order_mark_only_if_the_bytes_are_the_same()
    {
        SheetDevice plain = DeviceTexts.Good(DeviceTexts.Bar), marked = DeviceTexts.Good("\uFEFF" + DeviceTexts.Bar);
        Assert.NotEqual(plain.Sha256, marked.Sha256);
        Assert.Equal(plain.Domain.Vertices, marked.Domain.Vertices);
        Assert.Equal(plain.Domain.Vertices, DeviceTexts.Good(DeviceTexts.Bar.ReplaceLineEndings("\r\n")).Domain.Vertices);
    }

    /// <summary>The rim that each edge contact covers in the domain is as long as its width.</summary>
    private static void AssertWidths(SheetDevice d)
    {
        for (int k = 0; k < d.Contacts.Count; k++)
        {
            double covered = d.Domain.Edges.Where(e => e.Contact == k).Sum(e => e.Curve.Length);
            Assert.Equal(d.Contacts[k].Width, covered, 1e-9 * d.Domain.Size);
            Assert.Equal(d.Contacts[k].Width, d.Contacts[k].Shape.Sum(c => c.Length), 1e-9 * d.Domain.Size);
        }
    }

    private static void AssertNear(Point2 wanted, Point2 got) =>
        Assert.True(Point2.Distance(wanted, got) < 1e-13, $"wanted ({wanted.X}, {wanted.Y}), got ({got.X}, {got.Y})");
}
