using FieldSolve.Readings;
using FieldSolve.Turning;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// Even transverse voltage of an isotropic disc with opposite arcs while a second-order crystal is turned: V = (Rs³ I² / R)(c21 d21' + c22 d22' + c16 d16'), elements in the
/// frame of the current. Constants of arcs of half angle 20 degrees by reciprocity from two fields in closed form, evaluated outside this project; not known as a printed table.
/// </summary>
public class TurnedSecondOrderTests(ITestOutputHelper output)
{
    private const double Radius = 4e-6, SheetResistance = 1000, Current = 1e-4;
    private const double C21 = 0.605270707, C22 = 0.087990246, C16 = 0.198816607;
    private static readonly double[] Elements = [0.6, -0.9, 0.35, 0.5, 0.8, -0.45];   // d11, d12, d16, d21, d22, d26
    private static readonly double Unit = 1e-4 * Radius / (SheetResistance * SheetResistance * Current);
    private static readonly Lazy<TurnResult> Turned = new(Run);

    [Theory]
    [InlineData(0)]
    [InlineData(45)]
    [InlineData(90)]
    [InlineData(225)]
    public void Even_transverse_voltage_turns_with_the_crystal(double direction)
    {
        CurveRow row = TestTurn.At(Turned.Value, direction);
        double exact = 1e-4 * SheetResistance * Current * Weighted(direction);
        Reading reading = row.Of("across")!;
        output.WriteLine($"{direction} deg: {reading.Even} V, exact {exact} V, bar {reading.EvenError} V");
        Assert.Equal(RowStatus.Ok, row.Status);

        // The drive is weak, not zero: 1e-5 of the largest even part is left for the next order.
        double next = 1e-5 * 1e-4 * SheetResistance * Current;
        Assert.InRange(Math.Abs(reading.Even!.Value - exact), 0, (2 * reading.EvenError!.Value) + next);
        Assert.InRange(reading.EvenError.Value, 0, 1e-3 * 1e-4 * SheetResistance * Current);
    }

    [Fact]
    public void Device_geometry_gives_the_elements_back_and_the_strip_does_not()
    {
        AngleFit fit = Turned.Value.Fit!;
        for (int k = 0; k < Elements.Length; k++)
        {
            Assert.Equal(Elements[k], fit.GeometrySecond!.Elements[k]!.Value.Value / Unit, 0.02);
        }

        double largest = Enumerable.Range(0, 6).Max(k => Math.Abs(Elements[k] - ((fit.StripSecond!.Elements[k]?.Value ?? 0) / Unit)));
        Assert.True(largest > 0.1, $"largest bias of the strip {largest}");
    }

    private static TurnResult Run()
    {
        const string U = "A m/V^2";
        string law = DeviceText.Law(
            "quadratic", 1 / SheetResistance, 1 / SheetResistance, 45,
            [.. FittedSecondOrder.Names.Select((n, k) => (n, Elements[k] * Unit, U))]);
        return TestTurn.Run(
            DeviceText.Disc(Radius, law)
                .Arc("in", 180, 20, Radius).Arc("out", 0, 20, Radius)
                .RimTip("p", 135, Radius).RimTip("q", 45, Radius).RimTip("left", 90, Radius).RimTip("right", -90, Radius)
                .Wiring("w", "in", "out", "p q", "left right").Drive(Current, bothSigns: true),
            8);
    }

    // The elements in the frame of a current that flows at an angle from crystal a.
    private static double Weighted(double degrees)
    {
        (double s, double c) = Math.SinCos(degrees * Math.PI / 180);
        (double d11, double d12, double d16, double d21, double d22, double d26) = (Elements[0], Elements[1], Elements[2], Elements[3], Elements[4], Elements[5]);
        double t21 = (-s * ((d11 * c * c) + (d12 * s * s) + (2 * d16 * c * s))) + (c * ((d21 * c * c) + (d22 * s * s) + (2 * d26 * c * s)));
        double t22 = (-s * ((d11 * s * s) + (d12 * c * c) - (2 * d16 * c * s))) + (c * ((d21 * s * s) + (d22 * c * c) - (2 * d26 * c * s)));
        double t16 = (c * (((d12 - d11) * c * s) + (d16 * ((c * c) - (s * s))))) + (s * (((d22 - d21) * c * s) + (d26 * ((c * c) - (s * s)))));
        return (C21 * t21) + (C22 * t22) + (C16 * t16);
    }
}
