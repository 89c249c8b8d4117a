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

    // Ohm's law in series: the sheet between the ends, and twice the line resistance over the width. Nothing bends the current, so it is exact.
    [Theory]
    [InlineData(100, 2e-4, 5e-4)]
    [InlineData(2000, 1e-3, 0)]
    public void Resistive_ends_of_a_bar_add_to_its_resistance(double sheet, double first, double second)
    {
        const double Width = 1e-5, Bar = 2e-5, Current = 1e-4;
        static string End(string which, double resistance) => FormattableString.Invariant($"edge = {{ end = \"{which}\" }}\nresistance = \"{resistance:R} ohm m\"");
        DriveResult r = TestDrive.Run(DeviceText.Bar(Bar, Width, DeviceText.Ohmic(1 / sheet, 1 / sheet))
            .Contact("in", End("left", first)).Contact("out", End("right", second)).Tip("p", -Bar / 4, 0)
            .Wiring("w", "in", "out", null, null, "far: p out").Drive(Current));
        string name = FormattableString.Invariant($"resistive ends, {first:G3} and {second:G3} ohm m");
        honesty.Reading(name, r, "source", Current * ((sheet * Bar) + first + second) / Width);
        honesty.Reading(name, r, "far", Current * ((sheet * 3 * Bar / 4) + second) / Width);
    }
}
