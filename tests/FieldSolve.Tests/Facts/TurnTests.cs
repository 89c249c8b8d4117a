using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests;
using FieldSolve.Turning;

namespace FieldSolve.Tests.FactsTests;

/// <summary>What a turn shows on any device. Common practice, no source, unless a test says otherwise.</summary>
public class TurnTests
{
    private const double Radius = 4e-6, Current = 1e-5;

    [Fact]
    public void Isotropic_ring_reads_zero_across_in_every_direction()
    {
        TurnResult r = TestTurn.Run(Ring(8, DeviceText.Ohmic(1e-3, 1e-3, axis: 17)));
        Assert.Equal(TurnMode.Ring, r.Mode);
        Assert.Equal(8, r.Rows.Count);
        Assert.All(r.Rows, row =>
        {
            Reading across = row.Row.Of("across")!;
            Assert.InRange(Math.Abs(across.Value), 0, 2 * across.Error);
            Assert.InRange(across.Error, 0, 1e-4 * row.Row.Of("along")!.Value);
        });

        // Nothing singles out an axis: the fit does not name one.
        Assert.Equal(1, r.Fit!.Geometry!.AnisotropyRatio!.Value.Value, 1e-3);
        Assert.Null(r.Fit.Geometry.AxisDegrees);
    }

    [Fact]
    public void Across_vanishes_at_ratio_one_and_along_the_axes_and_grows_with_the_ratio()
    {
        TurnResult r = TestTurn.Run(Wired(DeviceText.Ohmic(4e-3, 1e-3)).Wanted(1e-3), 16, 1, 2, 4, 8);
        double[] extreme = [.. r.Ratios.Select(c => c.Points.Max(p => Math.Abs(p.Across!.Value.Value)))];
        Assert.InRange(extreme[0], 0, 2 * r.Ratios[0].Points.Max(p => p.Across!.Value.Error));
        Assert.True(extreme[0] < extreme[1] && extreme[1] < extreme[2] && extreme[2] < extreme[3]);
        foreach (RatioCurve curve in r.Ratios.Skip(1))
        {
            Assert.All(curve.Points.Where(p => p.AngleDegrees % 90 == 0), p => Assert.InRange(Math.Abs(p.Across!.Value.Value), 0, 2 * p.Across.Value.Error));

            // Crystal a conducts better: at 45 degrees from it the probe on the left is the lower one. Steps are 22.5 degrees.
            RatioPoint lowest = curve.Points.MinBy(p => p.Across!.Value.Value)!;
            Assert.Equal(45, lowest.AngleDegrees % 180, 6);
        }

        // At the device's own ratio the overlay is the device.
        TurnRow own = r.Rows.Single(x => x.AngleDegrees == 45);
        RatioPoint same = r.Ratios[2].Points.Single(p => p.AngleDegrees == 45);
        Assert.Equal(own.Row.Of("across")!.Value / Current, same.Across!.Value.Value, 1e-6 * Math.Abs(same.Across.Value.Value));
    }

    [Fact]
    public void Conductance_profile_is_a_circle_or_a_peanut()
    {
        double[] ordinary = Profile(1e-3, 1e-3), strong = Profile(9e-3, 1e-3);
        Assert.All(ordinary, g => Assert.Equal(ordinary[0], g, 1e-3 * ordinary[0]));

        // Two-fold: largest along a, and along b a waist that lies within the chord of its neighbours, 22.5 degrees to either side.
        Assert.Equal(strong.Max(), strong[0]);
        Assert.Equal(strong.Min(), strong[4]);
        Assert.True(strong[4] < Math.Cos(Math.PI / 8) * Math.Min(strong[3], strong[5]), string.Join(", ", strong));
    }

    [Fact]
    public void Half_a_turn_reverses_the_even_part_and_a_mirror_reverses_across()
    {
        // The mirror line is crystal a, which lies along the first direction; d16, d21, d22 are not allowed by it.
        const string U = "A m/V^2";
        string law = DeviceText.Law("quadratic", 2e-3, 1e-3, 0, ("d11", 2e-9, U), ("d12", 5e-9, U), ("d26", -3e-9, U), ("field_limit", 1e5, "V/m"));
        TurnResult r = TestTurn.Run(Ring(8, law, bothSigns: true).Wanted(1e-3, 1e-2));
        Assert.True(r.Drive.AllOk);
        foreach (TurnRow row in r.Rows)
        {
            CurveRow half = TestTurn.At(r, row.DirectionDegrees + 180), mirror = TestTurn.At(r, 360 - row.DirectionDegrees);
            foreach (string pair in new[] { "along", "across" })
            {
                Reading here = row.Row.Of(pair)!, there = half.Of(pair)!, image = mirror.Of(pair)!;
                double sign = pair == "along" ? 1 : -1;

                // Even parts are odd under half a turn: any law K(E) becomes -K(-E).
                Near(here.Odd!.Value, there.Odd!.Value, here.Error + there.Error);
                Near(here.Even!.Value, -there.Even!.Value, here.EvenError!.Value + there.EvenError!.Value);
                Near(here.Odd.Value, sign * image.Odd!.Value, here.Error + image.Error);
                Near(here.Even.Value, sign * image.Even!.Value, here.EvenError.Value + image.EvenError!.Value);
            }
        }

        double largest = r.Rows.Max(x => Math.Abs(x.Row.Of("across")!.Even!.Value));
        Assert.True(largest > 20 * r.Rows.Max(x => x.Row.Of("across")!.EvenError!.Value));

        // The device's own geometry finds the sheet again; the strip does not.
        AngleFit fit = r.Fit!;
        Assert.Equal(2, fit.Geometry!.AnisotropyRatio!.Value.Value, 1e-3);
        Assert.Equal(0, Degrees.Apart(fit.Geometry.AxisDegrees!.Value.Value, 0), 0.05);
        Assert.Equal(Math.Sqrt(0.5) * 1e3, fit.Geometry.SheetResistance!.Value.Value, 0.5);
        Assert.Equal(5e-9, fit.GeometrySecond!.Elements[1]!.Value.Value, 5e-11);
        Assert.True(Math.Abs(fit.Strip!.AnisotropyRatio!.Value.Value - 2) > 0.1);
    }

    [Fact]
    public void Half_of_the_axes_say_what_solving_all_of_them_says()
    {
        // An odd number of steps is solved in full; 3 and 6 steps share the turns by 0, 120 and 240 degrees, the last of which follows from 60 degrees.
        const string U = "A m/V^2";
        string law = DeviceText.Law("quadratic", 2e-3, 1e-3, 25, ("d12", 5e-9, U), ("d21", 2e-9, U), ("field_limit", 1e5, "V/m"));
        DeviceText device = Wired(law).Wanted(1e-3, 1e-2).Drive(Current, bothSigns: true);
        TurnResult all = TestTurn.Run(device, 3), half = TestTurn.Run(device, 6);
        Assert.Equal(6, all.SolvedPoints);
        Assert.Equal(6, half.SolvedPoints);
        foreach (TurnRow row in all.Rows)
        {
            CurveRow same = half.Rows.Single(x => Degrees.Apart(x.AxisDegrees, row.AxisDegrees) < 1e-6).Row;
            foreach (string pair in new[] { "along", "across", "source" })
            {
                Reading a = row.Row.Of(pair)!, b = same.Of(pair)!;
                Near(a.Value, b.Value, a.Error + b.Error);
                Near(a.Even!.Value, b.Even!.Value, a.EvenError!.Value + b.EvenError!.Value);
            }
        }
    }

    private static void Near(double expected, double actual, double bars) => Assert.InRange(Math.Abs(expected - actual), 0, 2 * bars);

    // I / V_along by the angle of the current from crystal a, in steps of 22.5 degrees.
    private static double[] Profile(double a, double b)
    {
        TurnResult r = TestTurn.Run(Wired(DeviceText.Ohmic(a, b)).Wanted(1e-3), 16);
        return [.. r.Rows.OrderBy(x => x.AngleDegrees).Select(x => Current / x.Row.Of("along")!.Value)];
    }

    private static DeviceText Ring(int count, string law, bool bothSigns = false) => DeviceText.Disc(Radius, law).Contacts(count, 5, Radius)
        .Wiring("first", $"c{(count / 2) + 1}", "c1", $"c{count / 2} c2", $"c{(count / 4) + 1} c{(3 * count / 4) + 1}").Drive(Current, bothSigns);

    private static DeviceText Wired(string law) => DeviceText.Disc(Radius, law)
        .Arc("source", 180, 8, Radius).Arc("drain", 0, 8, Radius).RimTip("p", 155, Radius).RimTip("q", 25, Radius)
        .RimTip("left", 90, Radius).RimTip("right", -90, Radius)
        .Wiring("w", "source", "drain", "p q", "left right").Drive(Current);
}
