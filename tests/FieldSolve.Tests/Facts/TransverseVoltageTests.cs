using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FactsTests;

/// <summary>What every experimentalist on anisotropic conductors knows. Common practice, no source.</summary>
public class TransverseVoltageTests
{
    private const double Radius = 4e-6, Current = 1e-6;

    [Fact]
    public void Across_vanishes_for_an_isotropic_sheet_and_along_a_crystal_axis_and_is_largest_in_between()
    {
        double[] isotropic = Across(1e-3, 1e-3, 30), crystal = Across(4e-3, 1e-3, 0, 30, 45, 60, 90);
        Assert.All(isotropic, v => Assert.InRange(v, -1, 1));
        Assert.InRange(crystal[0], -1, 1);
        Assert.InRange(crystal[^1], -1, 1);

        // Crystal a conducts better, so the probe on the left is the lower one. The third direction is 45 degrees.
        Assert.All(crystal[1..^1], v => Assert.True(v < -100));
        Assert.Equal(crystal.Min(), crystal[2]);
    }

    [Fact]
    public void Even_across_grows_with_the_square_of_along_at_small_drive()
    {
        string law = DeviceText.Law("quadratic", 4e-3, 1e-3, 30, ("d12", 2e-9, "A m/V^2"), ("field_limit", 2e5, "V/m"));
        DriveResult r = TestDrive.Run(Wired(law).Drive(Current, 5 * Current, 5, bothSigns: true).Wanted(1e-3));
        (double X, double Y)[] points = [.. r.Rows.Select(w => (Math.Pow(w.Of("along")!.Odd!.Value, 2), w.Of("across")!.Even!.Value))];
        (double slope, double rSquared) = TestDrive.Line(points);
        Assert.True(rSquared > 0.999, $"R² = {rSquared}");
        Assert.All(points, p => Assert.InRange(p.Y / p.X / slope, 0.98, 1.02));
        Assert.NotNull(r.Summaries[0].Slope);
        Assert.Equal(slope, r.Summaries[0].Slope!.Slope, Math.Abs(slope) * 0.02);
    }

    // V_across over the current, ohm, per direction of the current against crystal a; the crystal is turned, the contacts stay.
    private static double[] Across(double a, double b, params double[] directions) => [.. directions.Select(direction =>
    {
        DriveResult r = TestDrive.Run(Wired(DeviceText.Ohmic(a, b, axis: -direction)).Drive(Current).Wanted(1e-3));
        return r.Rows[0].Of("across")!.Value / Current;
    })];

    private static DeviceText Wired(string law) => DeviceText.Disc(Radius, law)
        .Arc("source", 180, 8, Radius).Arc("drain", 0, 8, Radius).RimTip("p", 155, Radius).RimTip("q", 25, Radius)
        .RimTip("left", 90, Radius).RimTip("right", -90, Radius)
        .Wiring("w", "source", "drain", "p q", "left right");
}
