using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// Long strip with a quadratic law: far from the ends the field is uniform and follows from two algebraic equations. I. Sodemann, L. Fu, Phys. Rev.
/// Lett. 115 (2015) 216806; K. Kang, T. Li, E. Sohn, J. Shan, K. F. Mak, Nature Mater. 18 (2019) 324.
/// </summary>
public class QuadraticStripTests(ITestOutputHelper output)
{
    // Tips at +-W from the middle, 7 W from the ends, whose influence falls at least like exp(-pi x / (sqrt(2) W)): 2e-7 there.
    private const double Width = 6e-6, Conductance = 1e-3, Field = 1e4, EndInfluence = 1e-6;
    private readonly Honesty honesty = new(output);

    [Theory]
    [InlineData(90, 4, 1)]
    [InlineData(45, 2, 1)]
    [InlineData(30, 2, -1)]
    public void At_finite_drive(double degrees, double density, double sign)
    {
        DriveResult r = Strip(degrees, density, sign);
        var strip = new UniformStrip(Elements(sign), RimChords.Radians(degrees));
        CurveRow row = r.Rows[0];
        (double a1, double l1) = strip.Field(density * Conductance * Field);
        (double a2, double l2) = strip.Field(-density * Conductance * Field);
        string name = $"strip {degrees} deg, K = {density}, d x {sign}";
        double scale = 2 * Width * a1;
        honesty.Reading(name, r, row, "along", scale, EndInfluence * scale);
        honesty.Reading(name, r, row, "across", -Width * l1, EndInfluence * scale);
        honesty.Even(name, r, row, "across", -Width * (l1 + l2) / 2, EndInfluence * scale);
        if (degrees != 90)
        {
            honesty.Even(name, r, row, "along", 2 * Width * (a1 + a2) / 2, EndInfluence * scale);
        }
    }

    // At weak drive: V_across_even = -W (E_left / E_along²) (V_along_odd / 2 W)². The strict proportionality ends at relative order K², 1e-5 here.
    [Theory]
    [InlineData(15)]
    [InlineData(60)]
    [InlineData(90)]
    public void Angular_formula(double degrees)
    {
        DriveResult r = Strip(degrees, 0.05, 1);
        CurveRow row = r.Rows[0];
        double along = row.Of("along")!.Odd!.Value / (2 * Width);
        double exact = -Width * new UniformStrip(Elements(1), RimChords.Radians(degrees)).LeftRatio * along * along;
        honesty.Even($"angular formula {degrees} deg", r, row, "across", exact, 2e-4 * Math.Abs(exact));
    }

    private static QuadraticElements Elements(double sign)
    {
        double d = sign * Conductance / Field;
        return new(2 * Conductance, Conductance, 0.03 * d, 0.05 * d, 0.01 * d, -0.04 * d, 0.02 * d, -0.02 * d);
    }

    private static DriveResult Strip(double degrees, double density, double sign)
    {
        QuadraticElements e = Elements(sign);
        const string Unit = "A m/V^2";
        string law = DeviceText.Law("quadratic", e.A, e.B, -degrees,
            ("d11", e.D11, Unit), ("d12", e.D12, Unit), ("d16", e.D16, Unit), ("d21", e.D21, Unit), ("d22", e.D22, Unit), ("d26", e.D26, Unit));
        return TestDrive.Run(DeviceText.Bar(16 * Width, Width, law)
            .Whole("in", "end", "left").Whole("out", "end", "right")
            .Tip("p", -Width, Width / 2).Tip("q", Width, Width / 2).Tip("left", 0, Width / 2).Tip("right", 0, -Width / 2)
            .Wiring("w", "in", "out", "p q", "left right").Drive(density * Conductance * Field * Width, bothSigns: true));
    }
}
