using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// Second-order transverse voltage of an isotropic disc with arc contacts, V = (Rs³ I² / R)(c21 d21 + c22 d22 + c16 d16), elements in the frame of the current. Derived
/// by reciprocity from two fields in closed form; not known as a printed table. The drive is so weak that the zone in which the law must be guarded at the
/// contact ends takes no part: even over along voltage about 1e-4.
/// </summary>
public class QuadraticDiscTests(ITestOutputHelper output)
{
    private const double Radius = 4e-6, SheetResistance = 1000, Current = 1e-4;
    private readonly Honesty honesty = new(output);

    [Theory]
    [InlineData(10, 1, 0, 0)]
    [InlineData(20, 0, 1, 0)]
    [InlineData(20, 0.5, -0.3, 0.8)]
    [InlineData(45, 0, 0, 1)]
    public void Even_transverse_voltage(double half, double d21, double d22, double d16)
    {
        // d Rs² I / R = 1e-4.
        double unit = 1e-4 * Radius / (SheetResistance * SheetResistance * Current);
        const string Unit = "A m/V^2";
        string law = DeviceText.Law("quadratic", 1 / SheetResistance, 1 / SheetResistance, 0,
            ("d21", d21 * unit, Unit), ("d22", d22 * unit, Unit), ("d16", d16 * unit, Unit));
        DriveResult r = TestDrive.Run(DeviceText.Disc(Radius, law)
            .Arc("in", 180, half, Radius).Arc("out", 0, half, Radius)
            .RimTip("p", 110, Radius).RimTip("q", 70, Radius).RimTip("left", 90, Radius).RimTip("right", -90, Radius)
            .Wiring("w", "in", "out", "p q", "left right").Drive(Current, bothSigns: true));
        var disc = new DiscSecondOrder(half);
        double exact = 1e-4 * SheetResistance * Current * ((disc.C21 * d21) + (disc.C22 * d22) + (disc.C16 * d16));
        Assert.Equal(RowStatus.Ok, r.Rows[0].Status);
        honesty.Even($"disc, arcs {half} deg, d21 {d21}, d22 {d22}, d16 {d16}", r, r.Rows[0], "across", exact, 5e-6 * Math.Abs(exact));
    }
}
