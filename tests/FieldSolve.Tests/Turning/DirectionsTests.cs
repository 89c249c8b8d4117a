using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests;
using FieldSolve.Turning;

namespace FieldSolve.Tests.TurningTests;

/// <summary>Which wirings a turn makes, and which devices it refuses.</summary>
public class DirectionsTests
{
    private const double Radius = 4e-6;
    private static readonly string Law = DeviceText.Ohmic(2e-3, 1e-3);

    [Fact]
    public void A_ring_steps_every_terminal_of_the_first_wiring()
    {
        SheetDevice device = TestDrive.Device(DeviceText.Disc(Radius, Law).Contacts(12, 3, Radius)
            .Wiring("w", "c7", "c1", "c6 c2", "c4 c10", "more: c5 c3").Wiring("ignored", "c1", "c2"));
        IReadOnlyList<Wiring> all = Directions.Of(device);
        Assert.Equal(12, all.Count);
        Assert.Equal([.. Enumerable.Range(0, 12).Select(k => 30.0 * k)], all.Select(w => CurrentDirection.Degrees(device, w)).ToArray());
        string Name(Terminal t) => device.Contacts[t.Index].Name;
        Wiring last = all[11];
        Assert.Equal("c6 to c12", last.Name);
        Assert.Equal("c5 c1", $"{Name(last.Along!.Plus)} {Name(last.Along.Minus)}");
        Assert.Equal("c3 c9", $"{Name(last.Across!.Plus)} {Name(last.Across.Minus)}");
        Assert.Equal("c4 c2", $"{Name(last.Extra[0].Plus)} {Name(last.Extra[0].Minus)}");
        Assert.Equal("more", last.Extra[0].Name);
    }

    [Fact]
    public void Wirings_by_hand_go_by_their_geometry()
    {
        DeviceText text = DeviceText.Disc(Radius, Law).Arc("e", 0, 3, Radius).Arc("ne", 50, 3, Radius).Arc("w", 180, 3, Radius).Arc("sw", 230, 3, Radius)
            .Wiring("back", "e", "w").Wiring("slanted", "sw", "ne").Wiring("chord", "sw", "e");
        SheetDevice device = TestDrive.Device(text);
        Assert.Equal(["chord", "slanted", "back"], Directions.Of(device).Select(w => w.Name));
        Assert.Equal([25, 50, 180], Directions.Of(device).Select(w => Math.Round(CurrentDirection.Degrees(device, w), 6)));
    }

    [Fact]
    public void One_direction_is_refused_with_what_to_add()
    {
        SheetDevice device = TestDrive.Device(DeviceText.Disc(Radius, Law).Arc("e", 0, 3, Radius).Arc("w", 180, 3, Radius).Wiring("only", "w", "e"));
        TurnException e = Assert.Throws<TurnException>(() => Directions.Of(device));
        Assert.Contains("around", e.Message, StringComparison.Ordinal);
        Assert.Contains("--turn-axis", e.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Concentric_metal_has_no_direction()
    {
        SheetDevice device = TestDrive.Device(DeviceText.Ring(1e-6, 4e-6, Law).Whole("in", "rim", "inner").Whole("out", "rim", "outer").Wiring("w", "in", "out").Drive(1e-6));
        TurnException e = Assert.Throws<TurnException>(() => TurnRun.Execute(device, new TurnOptions { AxisSteps = 4 }, null, default));
        Assert.Contains("'w' has no direction", e.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void An_unknown_wiring_is_named_with_those_there_are()
    {
        SheetDevice device = TestDrive.Device(DeviceText.Disc(Radius, Law).Arc("e", 0, 3, Radius).Arc("w", 180, 3, Radius).Wiring("only", "w", "e").Drive(1e-6));
        TurnException e = Assert.Throws<TurnException>(() => TurnRun.Execute(device, new TurnOptions { AxisSteps = 4, Wiring = "other" }, null, default));
        Assert.Contains("'other'", e.Message, StringComparison.Ordinal);
        Assert.Contains("'only'", e.Message, StringComparison.Ordinal);
    }

    [Fact]
    public void What_is_not_of_the_ring_stays_where_it_is()
    {
        SheetDevice device = TestDrive.Device(DeviceText.Disc(Radius, Law).Contacts(6, 3, Radius).RimTip("tip", 45, Radius).Wiring("w", "c4", "c1", "c3 tip").Drive(1e-6));
        IReadOnlyList<Wiring> all = Directions.Of(device);
        Assert.Equal(6, all.Count);
        Assert.All(all, w => Assert.Equal(device.Wirings[0].Along!.Minus, w.Along!.Minus));
        Assert.Equal(6, all.Select(w => w.Along!.Plus).Distinct().Count());
    }

    [Fact]
    public void A_current_outside_the_ring_is_a_fault_at_its_place()
    {
        string text = DeviceText.Disc(Radius, Law).Contacts(6, 3, Radius).Arc("e", 30, 3, Radius).Arc("f", 210, 3, Radius).Wiring("w", "e", "f", "c3 c2").ToString();
        DeviceReading reading = DeviceFile.Parse(text, "test.toml", ".");
        Fault fault = Assert.Single(reading.Faults);
        int line = 1 + Array.FindIndex(text.ReplaceLineEndings("\n").Split('\n'), l => l.StartsWith("around", StringComparison.Ordinal));
        Assert.StartsWith($"test.toml:{line}:", fault.ToString(), StringComparison.Ordinal);
        Assert.Contains("neither its source nor its drain belongs to it", fault.ToString(), StringComparison.Ordinal);
    }
}
