using FieldSolve.Runs;
using FieldSolve.Sessions;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.SessionsTests;

/// <summary>What misplaced contacts do to the across voltage.</summary>
public sealed class LayoutSensitivityTests : IDisposable
{
    private readonly TempFolder folder = new("sense");

    public void Dispose() => folder.Dispose();

    [Fact]
    public void An_effect_is_what_a_moved_contact_does_to_the_drive()
    {
        EditSession session = EditSession.Open(folder.Write("device.toml", SmallDevice.Text)).Session!;
        IReadOnlyList<ContactEffect> effects = LayoutSensitivity.Of(session.State, "bar", CancellationToken.None);

        // Ends of the bar lie between corners and cannot be misplaced; the voltage contacts can, those of the pair most.
        Assert.Equal(["bottom 1", "top 1", "top 2"], effects.Select(e => e.Contact).Order(StringComparer.Ordinal));
        Assert.All(effects, e => Assert.Equal("position 50 nm", e.Causes));
        double Across() => DriveRun.Execute(session.State.Device, new DriveOptions { ForPictures = false }, null, CancellationToken.None).Rows[^1].Of("across")!.Odd!.Value;
        void Shift(string by) => Assert.Empty(session.Apply((t, _) => t.With("contact[2].shift", EditableToml.Quoted(by)), null));
        Shift("200 nm");
        double plus = Across();
        Shift("-200 nm");
        double difference = Math.Abs(plus - Across()) / 8;
        ContactEffect effect = effects.Single(e => e.Contact == "top 1");

        // Centred difference over four times the stated size, for the coarse meshes of this device.
        Assert.Equal(difference, effect.Odd, 0.05 * effect.Odd);
        Assert.Throws<LayoutEditException>(() => LayoutSensitivity.Of(session.State, "nobody", CancellationToken.None));
    }

    [Fact]
    public void A_layout_that_names_or_holds_no_place_says_so()
    {
        string Refused(string text) => Assert.Throws<LayoutEditException>(() => LayoutSensitivity.Of(EditSession.Open(folder.Write("device.toml", text)).Session!.State, "bar", CancellationToken.None)).Message;
        Assert.StartsWith("the [tolerance] of the file names no place of a contact", Refused(SmallDevice.Text + "\n[tolerance]\na = \"10 uS\"\n"), StringComparison.Ordinal);
        Assert.StartsWith("the [tolerance] of the file names no place of a contact", Refused("tolerance = { a = \"10 uS\" }\n" + SmallDevice.Text), StringComparison.Ordinal);

        // Ends alone lie between corners.
        string ends = SmallDevice.Text[..SmallDevice.Text.IndexOf("[[contact]]\nname = \"top 1\"", StringComparison.Ordinal)] + """
            [[point]]
            name = "p"
            at = ["0 um", "1 um"]
            [[point]]
            name = "q"
            at = ["0 um", "-1 um"]
            [[wiring]]
            name = "bar"
            source = "left"
            drain = "right"
            across = ["p", "q"]
            [drive]
            current = { from = "0 uA", to = "30 uA", steps = 4 }
            """;
        Assert.Equal("no contact of this layout can be misplaced", Refused(ends));
        Assert.Equal("this wiring reads nothing across", Refused(SmallDevice.Text.Replace("across = [\"top 1\", \"bottom 1\"]", "", StringComparison.Ordinal)));
    }

    [Fact]
    public void Pads_are_misplaced_both_ways_and_a_stated_size_is_taken()
    {
        const string pad = "[[contact]]\nname = \"pad\"\npad = [[\"2.6 um\", \"-0.4 um\"], [\"3.4 um\", \"-0.4 um\"], [\"3.4 um\", \"0.4 um\"], [\"2.6 um\", \"0.4 um\"]]\n\n";
        string text = SmallDevice.Text.Replace("[[point]]", pad + "[[point]]", StringComparison.Ordinal);
        ContactEffect[] effects = [.. LayoutSensitivity.Of(EditSession.Open(folder.Write("device.toml", text)).Session!.State, "bar", CancellationToken.None)];
        Assert.Equal("x 50 nm, y 50 nm", effects.Single(e => e.Contact == "pad").Causes);
        Assert.Equal(effects.OrderByDescending(e => e.Odd).Select(e => e.Contact), effects.Select(e => e.Contact));
        Assert.All(effects, e => Assert.Equal((0.0, 0.0), (e.Even, e.EvenError)));
        ContactEffect one = Assert.Single(LayoutSensitivity.Of(EditSession.Open(folder.Write("stated.toml", SmallDevice.Text + "\n[[tolerance.contact]]\nname = \"top 1\"\nposition = \"25 nm\"\nwidth = \"10 nm\"\n")).Session!.State, "bar", CancellationToken.None));
        Assert.Equal(("top 1", "position 25 nm"), (one.Contact, one.Causes));
    }
}
