using System.Globalization;
using System.Text;
using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>Drives that a naive iteration loses, and currents that have no solution.</summary>
public class HardCaseTests(ITestOutputHelper output)
{
    private const double Inner = 1e-6, Outer = 3e-6, Sigma = 1e-3, Field = 1e5;
    private readonly Honesty honesty = new(output);

    // The inner rim carries no more than 2 pi r1 sigma F: rows up to there stand, rows beyond say so.
    [Fact]
    public void A_current_that_the_sheet_cannot_carry()
    {
        double full = 2 * Math.PI * Inner * Sigma * Field;
        string law = DeviceText.Law("saturating", Sigma, Sigma, 0, ("field_a", Field, "V/m"), ("field_b", Field, "V/m"), ("sharpness", 2, ""));
        DriveResult r = TestDrive.Run(RingDevice(law).Drive(0.3 * full, 1.5 * full, 5).Wanted(1e-2));
        Assert.Equal([RowStatus.NotConverged, RowStatus.NotConverged], r.Rows.Skip(3).Select(row => row.Status));
        Assert.All(r.Rows.Skip(3), row => Assert.Empty(row.Readings));
        Assert.Contains(r.Warnings, w => w.Contains("not converge", StringComparison.Ordinal));
        foreach (CurveRow row in r.Rows.Take(3))
        {
            double exact = ConcentricRing.Voltage(Inner, Outer, row.Current, ConcentricRing.Saturating(Sigma, Field, 2));
            Assert.Equal(1, row.Of("source")!.Value / exact, 1e-2);
        }
    }

    // From zero to deep in the cubic regime in one stride.
    [Fact]
    public void A_single_current_far_beyond_the_ohmic_regime()
    {
        double c = 1e3 * Sigma / (Field * Field), current = 2 * Math.PI * Inner * Sigma * Field * 10;
        string law = DeviceText.Law("cubic", Sigma, Sigma, 0, ("c11", c, "A m^2/V^3"), ("c12", c, "A m^2/V^3"), ("c21", c, "A m^2/V^3"), ("c22", c, "A m^2/V^3"));
        DriveResult r = TestDrive.Run(RingDevice(law).Drive(current));
        honesty.Reading("ring, cubic, one stride", r, "source", ConcentricRing.Voltage(Inner, Outer, current, ConcentricRing.Cubic(Sigma, c)));
    }

    // Step by step or at once, the last current reads the same.
    [Fact]
    public void A_warm_start_ends_where_a_cold_one_does()
    {
        const string Second = "A m/V^2";
        string law = DeviceText.Law("quadratic", 2e-3, 1e-3, 20, ("d11", -6e-9, Second), ("d12", -4e-9, Second), ("d26", -3e-9, Second), ("field_limit", 1e5, "V/m"));
        DriveResult Drive(int steps) => TestDrive.Run(DeviceText.Bar(12e-6, 6e-6, law)
            .Whole("in", "end", "left").Whole("out", "end", "right").Tip("p", -2e-6, 3e-6).Tip("q", 2e-6, 3e-6).Tip("l", 0, 3e-6).Tip("r", 0, -3e-6)
            .Wiring("w", "in", "out", "p q", "l r").Drive(steps == 1 ? 1e-3 : 0, 1e-3, steps).Wanted(1e-3));
        IReadOnlyList<CurveRow> steps = Drive(9).Rows;
        CurveRow cold = Drive(1).Rows[0], weak = steps[1], warm = steps[^1];
        Assert.Equal(RowStatus.Ok, warm.Status);
        foreach (Reading reading in cold.Readings)
        {
            Assert.Equal(reading.Value, warm.Of(reading.Pair)!.Value, 1e-10 * cold.Of("source")!.Value);
        }

        // The law matters here: across does not grow in proportion.
        double growth = warm.Of("across")!.Value / weak.Of("across")!.Value / (warm.Current / weak.Current);
        Assert.True(Math.Abs(growth - 1) > 0.05, FormattableString.Invariant($"{growth}"));
    }

    // At ideal contact ends the field exceeds every bound: driven hard, a quadratic law without a limit must say that the guard decides, and where; a limit helps.
    [Fact]
    public void A_quadratic_law_driven_beyond_itself_says_so()
    {
        DriveResult Drive(string law) => TestDrive.Run(DeviceText.Disc(4e-6, law)
            .Arc("in", 180, 8, 4e-6).Arc("out", 0, 8, 4e-6).RimTip("p", 150, 4e-6).RimTip("q", 30, 4e-6).RimTip("l", 90, 4e-6).RimTip("r", -90, 4e-6)
            .Wiring("w", "in", "out", "p q", "l r").Drive(3e-3, bothSigns: true).Wanted(1e-3, 1e-2));
        DriveResult without = Drive(DeviceText.Law("quadratic", 4e-3, 1e-3, 30, ("d12", 2e-9, "A m/V^2")));
        CurveRow row = without.Rows[0];
        Assert.Equal(RowStatus.OutsideLaw, row.Status);
        Assert.NotNull(row.Exit);
        Assert.Contains(without.Warnings, w => w.Contains("field_limit", StringComparison.Ordinal));
        DriveResult with = Drive(DeviceText.Law("quadratic", 4e-3, 1e-3, 30, ("d12", 2e-9, "A m/V^2"), ("field_limit", 4e5, "V/m")));
        Assert.NotEqual(RowStatus.OutsideLaw, with.Rows[0].Status);
    }

    // A table of the cubic law on a fine grid reads like the law; a field beyond the grid is refused with the place.
    [Fact]
    public void A_table_law_reads_like_the_law_it_tabulates_and_refuses_fields_beyond_it()
    {
        string folder = Directory.CreateTempSubdirectory("fieldsolve-test-").FullName;
        try
        {
            const double C = Sigma / (Field * Field);
            var csv = new StringBuilder("ea_V_per_m,eb_V_per_m,ka_A_per_m,kb_A_per_m\n");
            for (int i = -40; i <= 40; i++)
            {
                for (int k = -40; k <= 40; k++)
                {
                    double ea = i * Field / 40, eb = k * Field / 40, g = Sigma + (C * ((ea * ea) + (eb * eb)));
                    csv.Append(CultureInfo.InvariantCulture, $"{ea:R},{eb:R},{g * ea:R},{g * eb:R}\n");
                }
            }

            File.WriteAllText(Path.Combine(folder, "law.csv"), csv.ToString());
            double unit = 2 * Math.PI * Inner * Sigma * Field;
            DriveResult r = TestDrive.Run(
                RingDevice("[law]\nkind = \"table\"\nfile = \"law.csv\"\n").Drive(0.5 * unit, 3.5 * unit, 4), folder);
            foreach (CurveRow row in r.Rows.Take(2))
            {
                // Piecewise cubics on 40 steps: 1e-4 of the cubic part at most.
                double exact = ConcentricRing.Voltage(Inner, Outer, row.Current, ConcentricRing.Cubic(Sigma, C));
                honesty.Reading("ring, table", r, row, "source", exact, 1e-4 * exact);
            }

            Assert.Equal(RowStatus.NotConverged, r.Rows[3].Status);
            Assert.Contains(r.Warnings, w => w.Contains("table", StringComparison.Ordinal));
        }
        finally
        {
            Directory.Delete(folder, true);
        }
    }

    private static DeviceText RingDevice(string law) => DeviceText.Ring(Inner, Outer, law)
        .Whole("in", "rim", "inner").Whole("out", "rim", "outer").Wiring("w", "in", "out");
}
