using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>Ring with contacts over both rims (O. M. Corbino, Phys. Z. 12 (1911) 561): radial, so every law has a voltage that is one integral.</summary>
public class RingTests(ITestOutputHelper output)
{
    private const double Inner = 1e-6, Outer = 3e-6, Sigma = 1e-3, Field = 1e5;
    private readonly Honesty honesty = new(output);

    [Theory]
    [InlineData(0)]
    [InlineData(1.0)]
    public void Constant_tensor(double hallAngle)
    {
        DriveResult r = TestDrive.Run(Device(DeviceText.Ohmic(Sigma, Sigma, Sigma * Math.Tan(hallAngle))).Drive(1e-4));
        double exact = 1e-4 * ConcentricRing.Resistance(Inner, Outer, Sigma);
        honesty.Reading($"ring, Hall angle {hallAngle}", r, "source", exact);
        honesty.Reading($"ring, Hall angle {hallAngle}", r, "along", exact * Math.Log(2) / Math.Log(3));
        honesty.Reading($"ring, Hall angle {hallAngle}", r, "across", 0);
    }

    // K = sigma E / (1 + (E/F)^m)^(1/m): D. M. Caughey, R. E. Thomas, Proc. IEEE 55 (1967) 2192. The current that the inner rim can carry is 2 pi r1 sigma F.
    [Theory]
    [InlineData(1)]
    [InlineData(2)]
    [InlineData(4)]
    public void Saturating_law(int sharpness)
    {
        double full = 2 * Math.PI * Inner * Sigma * Field;
        string law = DeviceText.Law("saturating", Sigma, Sigma, 25, ("field_a", Field, "V/m"), ("field_b", Field, "V/m"), ("sharpness", sharpness, ""));
        DriveResult r = TestDrive.Run(Device(law).Drive(0.3 * full, 0.9 * full, 3, bothSigns: true));
        Func<double, double> fieldOf = ConcentricRing.Saturating(Sigma, Field, sharpness);
        foreach (CurveRow row in r.Rows)
        {
            string name = FormattableString.Invariant($"ring, saturating m = {sharpness}, {row.Current / full:F1} of the limit");
            honesty.Reading(name, r, row, "source", ConcentricRing.Voltage(Inner, Outer, row.Current, fieldOf));
            honesty.Reading(name, r, row, "along", ConcentricRing.Voltage(Inner, 2 * Inner, row.Current, fieldOf));
            Assert.InRange(Math.Abs(row.Of("source")!.Even!.Value), 0, 1e-10 * row.Of("source")!.Value);
        }
    }

    // An isotropic cubic law, K = (s + c E²) E, from weak to strong: at the last current the cubic part carries most, or for c < 0 half of the slope is gone.
    [Theory]
    [InlineData(10, 10)]
    [InlineData(-0.01, 2)]
    public void Cubic_law(double cubic, double strongest)
    {
        double c = cubic * Sigma / (Field * Field), unit = 2 * Math.PI * Inner * Sigma * Field;
        string law = DeviceText.Law("cubic", Sigma, Sigma, 25,
            ("c11", c, "A m^2/V^3"), ("c12", c, "A m^2/V^3"), ("c21", c, "A m^2/V^3"), ("c22", c, "A m^2/V^3"));
        DriveResult r = TestDrive.Run(Device(law).Drive(0, strongest * unit, 3, bothSigns: true));
        foreach (CurveRow row in r.Rows.Skip(1))
        {
            string name = FormattableString.Invariant($"ring, cubic c = {cubic}, i = {row.Current / unit:G3}");
            Assert.Equal(RowStatus.Ok, row.Status);
            honesty.Reading(name, r, row, "source", ConcentricRing.Voltage(Inner, Outer, row.Current, ConcentricRing.Cubic(Sigma, c)));
        }

        Assert.Equal(0, r.Rows[0].Of("source")!.Value);
    }

    private static DeviceText Device(string law) => DeviceText.Ring(Inner, Outer, law)
        .Whole("in", "rim", "inner").Whole("out", "rim", "outer")
        .Tip("p", 0, 2 * Inner).Tip("q", 2 * Inner * Math.Cos(0.3), -2 * Inner * Math.Sin(0.3))
        .Wiring("w", "in", "out", "in p", "p q");
}
