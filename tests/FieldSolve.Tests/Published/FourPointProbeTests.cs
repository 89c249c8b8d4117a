using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// Four probes in a line on a finite sheet: F. M. Smits, Bell Syst. Tech. J. 37 (1958) 711. Current through square pads of side w, ideal tips for the voltage. A
/// square pad acts like a point up to its polarisation in the other pad's field, of order (w / s)² of the reading.
/// </summary>
public class FourPointProbeTests(ITestOutputHelper output)
{
    private const double Spacing = 1e-3, Side = 0.02 * Spacing, SheetResistance = 50, Current = 1e-4;
    private static readonly string Law = DeviceText.Ohmic(1 / SheetResistance, 1 / SheetResistance);
    private readonly Honesty honesty = new(output);

    [Theory]
    [InlineData(4)]
    public void On_a_circle(double diameter)
    {
        DriveResult r = TestDrive.Run(Probes(DeviceText.Disc(diameter * Spacing / 2, Law)));
        Check($"four probes, circle d/s {diameter}", r, FourPointProbe.Circle(diameter));
    }

    [Theory]
    [InlineData(6, 3)]
    public void On_a_rectangle(double along, double across)
    {
        DriveResult r = TestDrive.Run(Probes(DeviceText.Bar(along * Spacing, across * Spacing, Law)));
        Check($"four probes, rectangle {along} x {across}", r, FourPointProbe.Rectangle(along, across));
    }

    private static DeviceText Probes(DeviceText sheet)
    {
        const double H = Side / 2, X = 1.5 * Spacing;
        return sheet.Pad("in", -X - H, -H, -X + H, H).Pad("out", X - H, -H, X + H, H)
            .Tip("p", -Spacing / 2, 0).Tip("q", Spacing / 2, 0).Wiring("w", "in", "out", "p q").Drive(Current);
    }

    private void Check(string name, DriveResult r, double factor)
    {
        double exact = SheetResistance * Current / factor;
        honesty.Reading(name, r, "along", exact, Math.Pow(Side / Spacing, 2) * exact);
    }
}
