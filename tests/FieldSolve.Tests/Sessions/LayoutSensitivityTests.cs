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
}
