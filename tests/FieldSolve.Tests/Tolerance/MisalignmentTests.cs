using FieldSolve.Device;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;
using FieldSolve.Tests.PublishedTests.References;
using MathNet.Numerics.Distributions;

namespace FieldSolve.Tests.ToleranceTests;

/// <summary>
/// Misplaced contacts against closed forms: the isotropic disc with arc contacts (R. F. Wick, J. Appl. Phys. 25, 741 (1954)), the ideal bar, and the
/// van der Pauw disc with one contact of finite width (L. J. van der Pauw, Philips Res. Rep. 13, 1 (1958)).
/// </summary>
public class MisalignmentTests
{
    private const double Radius = 4e-6, Current = 1e-3, Sheet = 1000;
    private static readonly string Law = DeviceText.Ohmic(1 / Sheet, 1 / Sheet);

    [Fact]
    public void Probe_of_a_disc_off_its_place()
    {
        // Current arcs of 10 degrees half angle; a narrow probe contact 90 degrees off. A degree off, it reads 0.00559861833918 Rs I more, a tenth
        // of a degree 0.000559832818477 (recomputed from the closed form); between narrow points of the rim the slope would be Rs I / pi.
        ToleranceResult r = ToleranceDevices.Budget(ToleranceDevices.Read(
            DeviceText.Disc(Radius, Law).Arc("in", 180, 10, Radius).Arc("out", 0, 10, Radius).Arc("p", 90, 0.5, Radius).RimTip("q", -90, Radius)
                .Wiring("w", "in", "out", null, "p q").Drive(Current),
            "[[tolerance.contact]]\nname = \"p\"\nposition = \"10 nm\"\nwidth = \"10 nm\""));
        double slope = 0.000559832818477 / (0.1 * Math.PI / 180);
        BudgetEntry position = r.Of("across", ReadingPart.Odd, "position", "p");
        Assert.Equal(slope, position.Slope * Radius / (Sheet * Current), 2e-4 * slope);
        Assert.True(position.Error < 1e-3 * position.Contribution && Math.Abs((position.Slope * Radius / (Sheet * Current)) - slope) <= position.Error / position.Contribution * slope);
        Assert.Equal(position.Slope * 10e-9, position.Contribution, 1e-12 * Math.Abs(position.Contribution));
        Assert.Equal(1.0 / Math.PI, slope, 0.01);

        // By symmetry the probe's width does nothing, in any order; what the mesh makes of it stays within its error bar.
        BudgetEntry width = r.Of("across", ReadingPart.Odd, "width", "p");
        Assert.True(Math.Abs(width.Contribution) <= 2 * width.Error && width.Error < 1e-3 * position.Contribution, $"{width.Contribution} +- {width.Error}");
    }

    [Theory]
    [InlineData(1, 0.00559861833918)]
    [InlineData(5, 0.0280283327751)]
    [InlineData(10, 0.0562786934596)]
    public void Contact_shifted_by_hand(double degrees, double expected)
    {
        SheetDevice device = TestDrive.Device(DeviceText.Disc(Radius, Law).Arc("in", 180, 10, Radius).Arc("out", 0, 10, Radius).Arc("p", 90, 0.1, Radius)
            .RimTip("q", -90, Radius).Wiring("w", "in", "out", "in out", "p q").Drive(Current));
        double metres = Radius * degrees * Math.PI / 180;
        (SheetDevice? moved, string? error) = CauseText.Apply(device, [string.Create(System.Globalization.CultureInfo.InvariantCulture, $"p={metres:R} m")]);
        Assert.Null(error);
        var across = DriveRun.Execute(moved!, new DriveOptions { Maps = MapChoice.None, ForPictures = false }, null, default).Rows[^1].Of("across")!;

        // The probe's own width of 0.2 degrees changes the potential there by less than 1e-6 of it.
        Assert.Equal(Sheet * Current * expected, across.Value, (2 * across.Error) + (2e-5 * Sheet * Current));
    }

    [Fact]
    public void Probes_of_a_bar_off_by_a_length()
    {
        // Exactly rho_xx I s / W for a bar; a probe of width w short-circuits a part of order (w/W)² of it.
        const double W = 4e-6;
        ToleranceResult r = ToleranceDevices.Budget(ToleranceDevices.Read(
            DeviceText.Bar(16e-6, W, DeviceText.Ohmic(2e-3, 1e-3)).Whole("in", "end", "left").Whole("out", "end", "right")
                .Stretch("p", -0.02e-6, W / 2, 0.02e-6, W / 2).Stretch("q", -0.02e-6, -W / 2, 0.02e-6, -W / 2)
                .Wiring("w", "in", "out", null, "p q").Drive(Current),
            "[tolerance.contacts]\nposition = \"10 nm\"\n[[tolerance.layer]]\nname = \"gold\"\nx = \"10 nm\"\nrotation = \"1 deg\""));
        double slope = Current / (2e-3 * W);

        // Counter-clockwise round the sheet: the upper probe moves against x, towards the source; the lower one along x, away from it.
        Assert.Equal(slope, r.Of("across", ReadingPart.Odd, "position", "p").Slope, 2e-3 * slope);
        Assert.Equal(slope, r.Of("across", ReadingPart.Odd, "position", "q").Slope, 2e-3 * slope);

        // Shifted together they stay opposite each other; turned by an angle they are apart by that angle times W.
        Assert.True(Math.Abs(r.Of("across", ReadingPart.Odd, "layer_x", "gold").Slope) < 1e-5 * slope);
        Assert.Equal(slope * W, r.Of("across", ReadingPart.Odd, "layer_rotation", "gold").Slope, 2e-3 * slope * W);
        Assert.StartsWith("'position' of contacts 'in', 'out' left out: the contact ends at a corner", Assert.Single(r.Warnings), StringComparison.Ordinal);
    }

    [Fact]
    public void Width_of_a_van_der_Pauw_contact()
    {
        // Current out at a contact of length l, in at a narrow one, tips at the other two: R = Rs/pi ln(1 + sqrt(1 - tan²(l/2D))), which is the
        // apparent sheet resistance times ln 2 / pi; for small l it falls short by l²/(16 D² ln 2).
        const double length = 0.3 * 2 * Radius;
        double half = length / 2 / Radius * 180 / Math.PI;
        ToleranceResult r = ToleranceDevices.Budget(ToleranceDevices.Read(
            DeviceText.Disc(Radius, Law).Arc("a", 0, half, Radius).Arc("b", 90, 0.2, Radius).RimTip("c", 180, Radius).RimTip("d", 270, Radius)
                .Wiring("w", "b", "a", "c d").Drive(Current),
            "[[tolerance.contact]]\nname = \"a\"\nwidth = \"10 nm\""));
        double e = Math.Tan(length / (4 * Radius)), de = (1 + (e * e)) / (4 * Radius), root = Math.Sqrt(1 - (e * e));
        double slope = -Sheet * Current / Math.PI * e * de / (root * (1 + root));
        Assert.Equal(slope, r.Of("along", ReadingPart.Odd, "width", "a").Slope, 2e-3 * Math.Abs(slope));

        // In the papers' form: d(rho)/rho = -2 l dl / (16 D² ln 2), good to a few per cent at this length.
        double formula = -2 * length / (16 * 4 * Radius * Radius * Math.Log(2)) * Sheet * Current * Math.Log(2) / Math.PI;
        Assert.Equal(formula, slope, 0.05 * Math.Abs(formula));
    }

    [Fact]
    public void Samples_follow_the_exact_distribution()
    {
        // The source arc slides by a normal distribution so wide that the reading is no longer linear in it.
        const double sigma = 0.5e-6;
        SheetDevice device = ToleranceDevices.Read(
            DeviceText.Disc(Radius, Law).Arc("in", 100, 10, Radius).Arc("out", 0, 10, Radius).RimTip("p", 150, Radius).RimTip("q", 45, Radius)
                .Wiring("w", "in", "out", null, "p q").Drive(Current),
            "[[tolerance.contact]]\nname = \"in\"\nposition = \"500 nm\"");
        ToleranceResult r = ToleranceRun.Execute(device, new ToleranceOptions { Samples = 128, Seed = 7 }, null, null, default);
        double Exact(double shift)
        {
            double at = 100 + (shift / Radius * 180 / Math.PI);
            return Sheet * Current * new DiscArcs(-10, 10, at - 10, at + 10).Reading(150, 45);
        }

        Assert.Equal(128, r.Samples.Count);
        Assert.All(r.Samples, s => Assert.True(s.Status is SampleStatus.Ok or SampleStatus.Remeshed));
        int across = r.Quantities.ToList().FindIndex(q => q.Pair == "across");
        SampleStatistics s = r.Statistics[across];
        foreach (SampleResult sample in r.Samples)
        {
            double exact = Exact(r.Draw(sample.Index)[0]);
            Assert.Equal(exact, sample.Values[across], (2 * s.NumericalError) + (0.01 * s.Deviation.Value));
        }

        // Kolmogorov-Smirnov: the distribution of V is that of the shift seen through Exact, which rises. 1.36 / sqrt(n) is the 5 % point
        // (N. Smirnov, Ann. Math. Stat. 19, 279 (1948)); a hypercube stays far below it.
        double[] sorted = [.. r.Samples.Select(x => x.Values[across]).Order()];
        double distance = 0;
        for (int i = 0; i < sorted.Length; i++)
        {
            double low = -4 * sigma, high = 4 * sigma;
            for (int k = 0; k < 60; k++)
            {
                double middle = (low + high) / 2;
                (low, high) = Exact(middle) < sorted[i] ? (middle, high) : (low, middle);
            }

            double p = Normal.CDF(0, sigma, low);
            distance = Math.Max(distance, Math.Max(Math.Abs(p - ((double)i / sorted.Length)), Math.Abs(p - ((i + 1.0) / sorted.Length))));
        }

        Assert.True(distance < 1.36 / Math.Sqrt(sorted.Length), $"distance {distance}");
        Assert.True(Math.Abs(s.Mean.Value - s.Design) > 3 * s.NumericalError, "the case is not curved enough to test anything");
    }
}
