using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.RegressionTests;

/// <summary>Sheets whose potentials are large beside the voltage across them: the residual's own rounding passes 1e-11 of the current.</summary>
public class RoundedResidualTests
{
    private const double R = 4e-6;

    private static DeviceText Disc(double resistance)
    {
        string law = DeviceText.Law("quadratic", 3e-3, 1e-3, 27, ("d12", 2e-9, "A m/V^2"), ("field_limit", 6e4, "V/m"));
        string contact = FormattableString.Invariant($"width = \"1 um\" }}\nresistance = \"{resistance:R} ohm m\"");
        return DeviceText.Disc(R, law)
            .Contact("s", "edge = { at = \"180 deg\", " + contact).Contact("d", "edge = { at = \"0 deg\", " + contact)
            .RimTip("p", 120, R).RimTip("q", 60, R).RimTip("r", 240, R)
            .Wiring("w", "s", "d", "p q", "p r").Drive(1e-6, bothSigns: true);
    }

    // Contacts that resist far more than the sheet feed their current evenly along their length; the probes then hardly see the resistance
    // (2e-3 between 10 kohm and 1 Mohm, measured).
    [Theory]
    [InlineData(1)]
    [InlineData(10)]
    public void Contacts_of_megaohms_do_not_stop_the_iteration(double resistance)
    {
        CurveRow row = Assert.Single(TestDrive.Run(Disc(resistance)).Rows), other = Assert.Single(TestDrive.Run(Disc(1e-2)).Rows);
        Assert.Equal(RowStatus.Ok, row.Status);
        Assert.Equal(RowStatus.Ok, other.Status);
        double along = Math.Abs(row.Of("along")!.Value);
        foreach (string pair in (string[])["along", "across"])
        {
            Assert.InRange(row.Of(pair)!.Error, 0, 2e-4 * along);
            Assert.InRange(Math.Abs(row.Of(pair)!.Value - other.Of(pair)!.Value), 0, 5e-3 * along);
        }
    }
}
