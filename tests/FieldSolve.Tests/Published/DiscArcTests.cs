using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// Isotropic disc with two ideal arc contacts: R = Rs K(1 - m)/K(m) and the rim potential between them as an incomplete elliptic integral
/// (R. F. Wick, J. Appl. Phys. 25 (1954) 741).
/// </summary>
public class DiscArcTests(ITestOutputHelper output)
{
    private const double Radius = 4e-6, Current = 1e-6, SheetResistance = 1000;
    private static readonly string Law = DeviceText.Ohmic(1 / SheetResistance, 1 / SheetResistance);
    private readonly Honesty honesty = new(output);

    [Theory]
    [InlineData(1)]
    [InlineData(5)]
    [InlineData(10)]
    [InlineData(20)]
    [InlineData(45)]
    public void Opposite_arcs(double half)
    {
        // Probes 20 degrees off the contacts (beyond those of the widest), a transverse pair, and one with a probe 5 degrees off its place.
        double near = Math.Max(20, 1.5 * half);
        DriveResult r = TestDrive.Run(DeviceText.Disc(Radius, Law)
            .Arc("in", 180, half, Radius).Arc("out", 0, half, Radius)
            .RimTip("p", 180 - near, Radius).RimTip("q", near, Radius).RimTip("left", 90, Radius).RimTip("right", -90, Radius).RimTip("off", 95, Radius)
            .Wiring("w", "in", "out", "p q", "left right", "misplaced: off right").Drive(Current));
        DiscArcs arcs = DiscArcs.Opposite(half);
        double unit = SheetResistance * Current;
        string name = $"disc, opposite arcs {half} deg";
        honesty.Reading(name, r, "source", unit * arcs.Resistance);
        honesty.Reading(name, r, "along", unit * arcs.Reading(180 - near, near));
        honesty.Reading(name, r, "across", 0);
        honesty.Reading(name, r, "misplaced", unit * arcs.Reading(95, 270));
    }

    [Theory]
    [InlineData(-10, 10, 50, 80)]
    [InlineData(-5, 5, 170, 200)]
    [InlineData(-2, 2, 160, 164)]
    public void Arcs_anywhere(double p1, double p2, double p3, double p4)
    {
        DriveResult r = TestDrive.Run(DeviceText.Disc(Radius, Law)
            .Arc("in", (p3 + p4) / 2, (p4 - p3) / 2, Radius).Arc("out", (p1 + p2) / 2, (p2 - p1) / 2, Radius)
            .RimTip("short", p2 + (0.3 * (p3 - p2)), Radius).RimTip("long", p4 + (0.6 * (p1 + 360 - p4)), Radius)
            .Wiring("w", "in", "out", null, null, "between: short long").Drive(Current));
        var arcs = new DiscArcs(p1, p2, p3, p4);
        double unit = SheetResistance * Current;
        string name = $"disc, arcs {p1}..{p2}, {p3}..{p4} deg";
        honesty.Reading(name, r, "source", unit * arcs.Resistance);
        honesty.Reading(name, r, "between", unit * arcs.Reading(p2 + (0.3 * (p3 - p2)), p4 + (0.6 * (p1 + 360 - p4))));
    }
}
