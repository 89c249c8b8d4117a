using FieldSolve.Device;
using FieldSolve.Pictures;
using FieldSolve.Readings;
using FieldSolve.Tests.PicturesTests;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.ReadingsTests;

/// <summary>A current from rim to rim of a ring flows in every direction at once, so none is named.</summary>
public class RingDirectionTests
{
    [Fact]
    public void A_current_from_rim_to_rim_has_no_direction()
    {
        SheetDevice ring = TestDrive.Device(DeviceText.Ring(1e-6, 4e-6, DeviceText.Ohmic(1e-3, 1e-3)).Whole("in", "rim", "inner").Whole("out", "rim", "outer").Wiring("w", "in", "out").Drive(1e-4));
        SheetDevice half = TestDrive.Device(DeviceText.Ring(1e-6, 4e-6, DeviceText.Ohmic(1e-3, 1e-3)).Whole("in", "rim", "inner").Arc("out", 90, 20, 4e-6).Wiring("w", "in", "out").Drive(1e-4));
        Assert.False(Assert.Single(Summaries.Of(ring, [])).HasDirection);
        WiringSummary up = Assert.Single(Summaries.Of(half, []));
        Assert.Equal((true, 90.0), (up.HasDirection, up.DirectionDegrees));
    }

    [Fact]
    public void What_has_no_direction_is_told_without_one()
    {
        DriveResult all = SyntheticDrive.Make(mapSteps: []), some = all with { Summaries = [.. all.Summaries.Select(s => s with { HasDirection = false })] };
        Assert.Contains(ReportWords.Answer(all), s => s.Contains("current at 30°", StringComparison.Ordinal));
        Assert.DoesNotContain(ReportWords.Answer(some), s => s.Contains("current at", StringComparison.Ordinal));
        Assert.Contains("(current at 30 deg)", Cli.Output.DriveText.Plain(all, "out"), StringComparison.Ordinal);
        Assert.DoesNotContain("(current at", Cli.Output.DriveText.Plain(some, "out"), StringComparison.Ordinal);
    }
}
