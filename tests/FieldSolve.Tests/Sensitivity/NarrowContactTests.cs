using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Sensitivity;
using FieldSolve.Tests.PublishedTests;
using FieldSolve.Tests.ToleranceTests;

namespace FieldSolve.Tests.SensitivityTests;

/// <summary>Contacts so narrow, or so close to something, that a step on the scale of the sheet has no room.</summary>
public class NarrowContactTests
{
    // A bar of 30 um by 10 um with full ends: the field is uniform, I / (sheet conductance times width).
    private const double Current = 1e-4, Field = Current / (1e-3 * 10e-6), Top = 5e-6;

    private static DeviceText Bar() => DeviceText.Bar(30e-6, 10e-6, DeviceText.Ohmic(1e-3, 1e-3)).Whole("l", "end", "left").Whole("r", "end", "right");

    private static string Text(DeviceText text, string causes = "position = \"1 pm\"\nwidth = \"1 pm\"") =>
        $"{text.Tip("p", 5e-6, 0).Wiring("w", "l", "r", "n p").Drive(Current)}\n[[tolerance.contact]]\nname = \"n\"\n{causes}\n";

    // A floating contact narrow against everything takes the potential at its middle: moving it by s, counter-clockwise and so against x on the upper
    // edge, changes that by the field times s; widening it on both sides changes nothing.
    [Theory]
    [InlineData(3e-8)]
    [InlineData(2e-9)]
    [InlineData(2e-12)]
    public void A_contact_narrower_than_the_step_has_the_derivative_of_a_point(double width)
    {
        var mesh = new SmallMesh(Text(Bar().Stretch("n", width / 2, Top, -width / 2, Top)), false);
        double Slope(string key)
        {
            SheetCause cause = mesh.Device.Tolerance!.Causes.Single(c => c.Kind.Key == key);
            return CauseSlope.Of(mesh.State, 0, cause, CauseSlope.Field(mesh.Device, cause, mesh.Motion) ?? throw new InvalidOperationException(key + " has no velocities"));
        }

        Assert.Equal(Field, Slope("position"), 0.01 * Field);
        Assert.Equal(0, Slope("width"), 0.01 * Field);
    }

    // 1 nm from its neighbour, 3 nm from a corner: 3e-5 and 1e-4 of the sheet.
    [Fact]
    public void A_close_neighbour_or_corner_leaves_room_for_a_smaller_step()
    {
        SheetDevice near = ToleranceDevices.Read(Text(Bar().Stretch("m", 2e-6, Top, 1e-9, Top).Stretch("n", 0, Top, -2e-6, Top)));
        SheetDevice corner = ToleranceDevices.Read(Text(DeviceText.Bar(30e-6, 10e-6, DeviceText.Ohmic(1e-3, 1e-3))
            .Stretch("l", -15e-6, -1e-6, -15e-6, 1e-6).Whole("r", "end", "right").Stretch("n", -12e-6, Top, -15e-6 + 3e-9, Top)));
        foreach (SheetDevice device in new[] { near, corner })
        {
            Assert.All(device.Tolerance!.Causes, c => Assert.True(MotionScale.IsSmooth(device, c.Kind, c.Target, by => CauseSlope.Moved(device, c, by))));
        }
    }

    [Fact]
    public void Without_any_room_the_reason_is_the_true_one()
    {
        string Why(DeviceText text, string key, bool noRoom, string causes = "position = \"1 pm\"\nwidth = \"1 pm\"")
        {
            SheetDevice device = ToleranceDevices.Read(Text(text, causes));
            (bool none, string why) = MotionScale.Obstacle(device, device.Tolerance!.Causes.Single(c => c.Kind.Key == key));
            Assert.Equal(noRoom, none);
            return why;
        }

        Assert.EndsWith("nothing is left of contact 'n'", Why(Bar().Stretch("n", 1e-13, Top, -1e-13, Top), "width", true), StringComparison.Ordinal);
        Assert.EndsWith("contacts 'm' and 'n' meet", Why(Bar().Stretch("m", 2e-6, Top, 2e-13, Top).Stretch("n", 0, Top, -2e-6, Top), "width", true), StringComparison.Ordinal);
        Assert.Contains("lies on the edge of the sheet", Why(Bar().Pad("n", -1e-6, 2e-6, 1e-6, Top), "y", false, "y = \"1 nm\""), StringComparison.Ordinal);
    }

    // However small the step, it must not be taken for smooth that the metal leaves the edge.
    [Fact]
    public void A_pad_whose_side_lies_on_the_edge_has_no_derivative()
    {
        SheetDevice device = ToleranceDevices.Read(Text(Bar().Pad("n", -1e-6, 2e-6, 1e-6, Top), "y = \"1 nm\"\nrotation = \"1 deg\""));
        Assert.All(device.Tolerance!.Causes, c => Assert.False(MotionScale.IsSmooth(device, c.Kind, c.Target, by => CauseSlope.Moved(device, c, by))));
    }
}
