using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// The theorem exp(-pi R_AB,CD / Rs) + exp(-pi R_BC,DA / Rs) = 1 and the errors that contacts of finite width bring: L. J. van der Pauw, Philips
/// Res. Rep. 13 (1958) 1 and Philips Tech. Rev. 20 (1958/59) 220.
/// </summary>
public class VanDerPauwTests(ITestOutputHelper output)
{
    private const double Radius = 5e-4, Current = 1e-3;
    private readonly Honesty honesty = new(output);

    // Uneven places and small arcs, which the theorem takes for points: each arc costs about (width / diameter)² / (16 ln 2) of Rs, 7e-6 here, more where
    // neighbours are close. An anisotropic sheet answers with sqrt(rho_a rho_b) (W. L. V. Price, Solid-State Electron. 16 (1973) 753), rho being the symmetric part
    // of the resistivity. With arcs, a Hall part enters at first order of their width and reverses with the field: the mean over both signs is taken, as in
    // every laboratory (common practice, no source).
    [Theory]
    [InlineData(2e-3, 2e-3, 0)]
    [InlineData(4e-3, 1e-3, 1.5e-3)]
    public void The_theorem_gives_the_sheet_resistance(double a, double b, double hall)
    {
        (double abcd, double bcda) = Uneven(a, b, hall);
        if (hall != 0)
        {
            (double x, double y) = Uneven(a, b, -hall);
            (abcd, bcda) = ((abcd + x) / 2, (bcda + y) / 2);
        }

        double expected = Math.Sqrt(a * b) / ((a * b) + (hall * hall));
        double low = expected / 2, high = 2 * expected;
        for (int i = 0; i < 60; i++)
        {
            double rs = (low + high) / 2;
            (low, high) = Math.Exp(-Math.PI * abcd / rs) + Math.Exp(-Math.PI * bcda / rs) < 1 ? (rs, high) : (low, rs);
        }

        output.WriteLine(FormattableString.Invariant($"theorem: Rs off by {(low / expected) - 1:E2}"));
        Assert.InRange(low / expected, 1 - 2e-4, 1 + 2e-4);
    }

    // One wide arc at A, the others points: by reciprocity the current goes through C and D, whose own width of 0.5 degrees takes 2e-6 of Rs each.
    [Theory]
    [InlineData(0.2)]
    public void One_wide_contact_lowers_the_reading(double lengthOverDiameter)
    {
        double small = 0.25, rs = 500;
        DriveResult r = TestDrive.Run(DeviceText.Disc(Radius, DeviceText.Ohmic(1 / rs, 1 / rs))
            .Arc("a", 0, lengthOverDiameter * 180 / Math.PI, Radius).RimTip("b", 90, Radius).Arc("c", 180, small, Radius).Arc("d", 270, small, Radius)
            .Wiring("cd", "c", "d", "b a").Drive(Current));
        double exact = rs * Math.Log(2) / Math.PI * (1 + PointContacts.OneArcError(lengthOverDiameter)) * Current;
        honesty.Reading("van der Pauw, one arc l/D = 0.2", r, "along", exact, 1e-5 * exact);
    }

    [Theory]
    [InlineData(0.05)]
    public void A_contact_inside_the_rim_lowers_the_reading(double depthOverDiameter)
    {
        double small = 0.25, rs = 500;
        DriveResult r = TestDrive.Run(DeviceText.Disc(Radius, DeviceText.Ohmic(1 / rs, 1 / rs))
            .Tip("a", Radius * (1 - (2 * depthOverDiameter)), 0).RimTip("b", 90, Radius).Arc("c", 180, small, Radius).Arc("d", 270, small, Radius)
            .Wiring("cd", "c", "d", "b a").Drive(Current));
        double exact = rs * Math.Log(2) / Math.PI * (1 + PointContacts.BuriedPointError(depthOverDiameter)) * Current;
        honesty.Reading("van der Pauw, buried point l/D = 0.05", r, "along", exact, 1e-5 * exact);
    }

    // Current through B and D, Hall voltage between A and C: a wide A loses 2 l / (pi² D) of the Hall voltage at weak field (from memory), 0.018575 for l/D = 0.1 at a
    // Hall angle of 0.5 (exact field, recomputed). Against the same sheet with a point at A, so that the small arcs B and D drop out; they leave 0.2 % of the loss.
    [Theory]
    [InlineData(0.05, 0.020295)]
    [InlineData(0.5, 0.018575)]
    public void One_wide_contact_lowers_the_Hall_voltage(double hallAngle, double loss)
    {
        const double Small = 0.25, Sigma = 2e-3, LengthOverDiameter = 0.1;
        double Hall(bool wide)
        {
            DeviceText text = DeviceText.Disc(Radius, DeviceText.Ohmic(Sigma, Sigma, Sigma * Math.Tan(hallAngle)))
                .Arc("b", 90, Small, Radius).Arc("d", 270, Small, Radius).RimTip("c", 180, Radius);
            text = wide ? text.Arc("a", 0, LengthOverDiameter * 180 / Math.PI, Radius) : text.RimTip("a", 0, Radius);

            // The loss is a small part of a voltage that is itself small beside the source's, which the wanted error counts from.
            return TestDrive.Run(text.Wiring("bd", "b", "d", null, "a c").Drive(Current).Wanted(2e-6)).Rows[0].Of("across")!.Value;
        }

        double found = 1 - (Hall(true) / Hall(false));
        output.WriteLine(FormattableString.Invariant($"loss of Hall voltage {found:F6}, exact {loss}"));
        Assert.Equal(loss, found, 5e-3 * loss);
        Assert.Equal(2 * LengthOverDiameter / (Math.PI * Math.PI), found, 0.1 * loss);
    }

    [Theory]
    [InlineData(2.5)]
    [InlineData(10)]
    [InlineData(30)]
    public void Four_equal_arcs(double half)
    {
        double rs = 250, unit = rs * Current;
        var exact = new FourArcs(half);
        DriveResult r = TestDrive.Run(DeviceText.Disc(Radius, DeviceText.Ohmic(1 / rs, 1 / rs))
            .Arc("a", 0, half, Radius).Arc("b", 90, half, Radius).Arc("c", 180, half, Radius).Arc("d", 270, half, Radius)
            .Wiring("ab", "a", "b", "d c").Wiring("ac", "a", "c", null, "b d").Drive(Current));
        string name = $"four arcs {half} deg";
        honesty.Reading(name, r, "along", unit * exact.VanDerPauw);
        honesty.Reading(name + ", neighbours", r, "source", unit * exact.Adjacent);
        honesty.Reading(name + ", opposite", r, r.Rows[1], "source", unit * exact.Opposite);
        honesty.Reading(name + ", opposite", r, r.Rows[1], "across", 0);
    }

    private static (double AbCd, double BcDa) Uneven(double a, double b, double hall)
    {
        const double Half = 0.5;
        DriveResult r = TestDrive.Run(DeviceText.Disc(Radius, DeviceText.Ohmic(a, b, hall, 20))
            .Arc("a", 10, Half, Radius).Arc("b", 65, Half, Radius).Arc("c", 180, Half, Radius).Arc("d", 290, Half, Radius)
            .Wiring("ab", "a", "b", "d c").Wiring("bc", "b", "c", "a d").Drive(Current));
        return (r.Rows[0].Of("along")!.Value / Current, r.Rows[1].Of("along")!.Value / Current);
    }
}
