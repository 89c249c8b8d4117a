using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// A pad with a specific contact resistivity over the end of a bar, as wide as the bar: H. H. Berger, Solid-State Electron. 15 (1972) 145. One-dimensional, so exact.
/// </summary>
public class TransferLengthTests(ITestOutputHelper output)
{
    private readonly Honesty honesty = new(output);

    [Theory]
    [InlineData(100, 1e-10, 5e-6)]
    [InlineData(100, 1e-10, 1e-6)]
    public void Front_and_end_resistance(double sheet, double contact, double length)
    {
        const double Width = 1e-5, Bar = 2e-5, H = Width / 2, Current = 1e-4;
        DriveResult r = TestDrive.Run(DeviceText.Bar(Bar, Width, DeviceText.Ohmic(1 / sheet, 1 / sheet))
            .Whole("in", "end", "left").Pad("out", (Bar / 2) - length, -H, Bar / 2, H, contact)
            .Tip("front", (Bar / 2) - length, H).Tip("far", Bar / 2, H / 3)
            .Wiring("w", "in", "out", null, null, "front: front out", "far: far out").Drive(Current));
        var pad = new TransferLength(sheet, contact, length, Width);
        string name = FormattableString.Invariant($"transfer length, L/L_T = {length / pad.Length:G3}");
        honesty.Reading(name, r, "source", Current * ((sheet * (Bar - length) / Width) + pad.Front));
        honesty.Reading(name, r, "front", Current * pad.Front);
        honesty.Reading(name, r, "far", Current * pad.End);
    }
}
