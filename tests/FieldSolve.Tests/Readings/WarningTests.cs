using FieldSolve.Device;
using FieldSolve.Lockin;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.ReadingsTests;

/// <summary>What is said of rows and points that cannot be trusted, and of currents and voltages that harm: from made-up rows, whose figures are to be found in the words.</summary>
public class WarningTests
{
    private static readonly LawExit Exit = new(1e-6, -2e-6, 3e5, 2e5, 4e-8);
    private static readonly Dictionary<string, string> None = [];

    private static SheetDevice Device(string kind = "ohmic") => TestDrive.Device(
        DeviceText.Bar(12e-6, 4e-6, kind == "ohmic" ? DeviceText.Ohmic(1e-3, 1e-3) : DeviceText.Law(kind, 1e-3, 1e-3, 0, ("d12", 1e-9, "A m/V^2"), ("field_limit", 1e6, "V/m")))
            .Whole("l", "end", "left").Whole("r", "end", "right").Tip("p", -1e-6, 2e-6).Tip("q", 1e-6, 2e-6).Tip("s", -1e-6, -2e-6).Wiring("w", "l", "r", "p q", "p s").Wiring("v", "r", "l").Drive(1e-4));

    private static CurveRow Row(string wiring, double current, RowStatus status, double error = 1e-6, LawExit? exit = null, double k = 0, double power = 0, params (string Pair, double Value)[] values) =>
        new(wiring, current, [.. values.Select((v, i) => new Reading(v.Pair, v.Value, error * (i + 1), null, null, null, 0, 0))], 5, status, exit, k, power);

    private static LockinPoint Point(string wiring, double current, double? frequency, RowStatus status, params HarmonicReading[] readings) =>
        new(wiring, current, frequency, readings, [.. readings.Select(r => new Waveform(r.Pair, [], []))], status, status == RowStatus.OutsideLaw ? Exit : null, 0, 0, 5);

    [Fact]
    public void A_drive_names_the_smallest_current_of_each_trouble()
    {
        CurveRow[] rows =
        [
            Row("w", 0, RowStatus.Ok), Row("w", -3e-4, RowStatus.OutsideLaw, exit: Exit), Row("w", 2e-4, RowStatus.OutsideLaw, exit: Exit),
            Row("v", 1e-4, RowStatus.ErrorAboveWanted, 2e-6, null, 0, 0, ("along", 1), ("source", 2)), Row("v", 5e-4, RowStatus.NotConverged), Row("u", 6e-4, RowStatus.NotConverged),
        ];
        IReadOnlyList<string> words = DriveWarnings.Of(Device(), rows, new Dictionary<string, string> { ["v"] = "The table ends." });
        Assert.Equal(4, words.Count);
        Assert.StartsWith("Wiring 'w' leaves its law from 200 µA on: at (1 µm, -2 µm) the field reaches 300 kV/m, beyond 200 kV/m where the law is guarded (zone of radius 40 nm)", words[0], StringComparison.Ordinal);
        Assert.StartsWith("Wiring 'v' has no solution from 500 µA on: the iteration did not converge. The table ends. The sheet may", words[1], StringComparison.Ordinal);
        Assert.StartsWith("Wiring 'v' misses the wanted numerical error (first at 100 µA; largest error bar 4 µV in 'source').", words[2], StringComparison.Ordinal);
        Assert.StartsWith("Wiring 'u' has no solution from 600 µA on: the iteration did not converge. The sheet may", words[3], StringComparison.Ordinal);
        Assert.Empty(DriveWarnings.Of(Device(), [rows[0]], None));
    }

    [Fact]
    public void An_ac_run_names_the_harmonic_and_the_frequency()
    {
        HarmonicReading Bad(string pair, int h, double error, double guard, RowStatus status) => new(pair, h, 1e-3, 0, error, guard, status);
        LockinPoint[] points =
        [
            Point("w", 2e-4, null, RowStatus.OutsideLaw, Bad("along", 1, 0, -3e-6, RowStatus.OutsideLaw), Bad("across", 2, 0, 2e-6, RowStatus.OutsideLaw), Bad("source", 1, 0, 9, RowStatus.Ok)),
            Point("w", 1e-4, 100, RowStatus.ErrorAboveWanted, Bad("along", 1, 1e-9, 0, RowStatus.ErrorAboveWanted), Bad("across", 3, 2e-9, 0, RowStatus.ErrorAboveWanted)),
            Point("v", 5e-4, 20, RowStatus.NotConverged), Point("v", 4e-4, null, RowStatus.Ok, Bad("along", 1, 0, 0, RowStatus.Ok)), Point("u", 3e-4, null, RowStatus.NotConverged),
        ];
        IReadOnlyList<string> words = LockinWarnings.Of(Device(), points, new Dictionary<string, string> { ["u"] = "It breaks." });
        Assert.Equal(4, words.Count);
        Assert.Contains("leaves its law from 200 µA RMS on", words[0], StringComparison.Ordinal);
        Assert.Contains("that moves harmonic 1 of 'along' by more than its wanted error", words[0], StringComparison.Ordinal);
        Assert.Contains("(first at 100 µA RMS and 100 Hz; error bar 2 nV in harmonic 3 of 'across')", words[1], StringComparison.Ordinal);
        Assert.StartsWith("Wiring 'v' has no solution from 500 µA RMS and 20 Hz on: the iteration did not converge. The sheet", words[2], StringComparison.Ordinal);
        Assert.StartsWith("Wiring 'u' has no solution from 300 µA RMS on: the iteration did not converge. It breaks. The sheet", words[3], StringComparison.Ordinal);
    }

    // Limits of touch: 60 V DC and 30 V RMS (IEC 61010-1, clause 6.3, from memory, as in the code); those of a flake: common practice, no source.
    [Theory]
    [InlineData(59, false, false)]
    [InlineData(-61, false, true)]
    [InlineData(29, true, false)]
    [InlineData(31, true, true)]
    public void Voltages_beyond_what_may_be_touched_are_cautioned(double volts, bool ac, bool cautioned)
    {
        SheetDevice device = Device();
        device = device with { Drive = device.Drive! with { Frequencies = ac ? [100] : [] } };
        IReadOnlyList<string> said = Cautions.Of(device, [Row("v", 1e-4, RowStatus.NotConverged), Row("w", 1e-4, RowStatus.Ok, 0, null, 0, 0, ("source", volts))]);
        Assert.Equal(cautioned ? 1 : 0, said.Count);
        if (cautioned)
        {
            Assert.StartsWith($"Hazardous voltage: the source reaches {Math.Abs(volts)} V in wiring 'w', above the touch-safe limit of {(ac ? "30 V RMS AC" : "60 V DC")}", said[0], StringComparison.Ordinal);
        }
    }

    [Fact]
    public void Dense_currents_and_power_are_cautioned_with_the_wiring_that_has_them()
    {
        SheetDevice device = Device();
        CurveRow[] rows = [Row("w", 1e-4, RowStatus.Ok, 0, null, 1100, 1), Row("v", 1e-4, RowStatus.Ok, 0, null, 1, 1.1e9)];
        IReadOnlyList<string> said = Cautions.Of(device, rows);
        Assert.StartsWith("The sheet may be destroyed: the sheet current density peaks at 1.1 kA/m in wiring 'w', above 1 kA/m", said[0], StringComparison.Ordinal);
        Assert.StartsWith("The device may burn: the power density peaks at 1.1 GW/m² in wiring 'v', above 1 GW/m²", said[1], StringComparison.Ordinal);
        Assert.Contains("(110 GA/m² through its thickness)", Cautions.Of(device with { Thickness = 1e-8 }, rows)[0], StringComparison.Ordinal);
        Assert.Empty(Cautions.Of(device with { Caution = new() { SheetCurrentDensity = 2000, PowerDensity = 2e9 } }, rows));
        Assert.Empty(Cautions.Of(device, []));
    }

    [Fact]
    public void A_mean_free_path_is_set_beside_the_smallest_feature()
    {
        SheetDevice bar = TestDrive.Device(DeviceText.Bar(12e-6, 4e-6, DeviceText.Ohmic(1e-3, 1e-3)).Whole("l", "end", "left").Whole("r", "end", "right").Wiring("w", "l", "r").Drive(1e-4));
        double end = bar.Domain.Edges.Min(e => e.Curve.Length);
        Assert.Null(Cautions.OfMeanFreePath(bar));
        Assert.Null(Cautions.OfMeanFreePath(bar with { MeanFreePath = end / 10.1 }));
        Assert.StartsWith("A local law is in doubt: the smallest feature (contact '", Cautions.OfMeanFreePath(bar with { MeanFreePath = end / 9.9 }), StringComparison.Ordinal);
        SheetDevice split = TestDrive.Device(DeviceText.Bar(12e-6, 4e-6, DeviceText.Ohmic(1e-3, 1e-3)).Stretch("l", -5.5e-6, 2e-6, -5.9e-6, 2e-6).Whole("r", "end", "right").Wiring("w", "l", "r").Drive(1e-4));
        Assert.Contains("(a stretch of the edge, 100 nm)", Cautions.OfMeanFreePath(split with { MeanFreePath = 2e-8 }), StringComparison.Ordinal);
    }

    // V2 = -k V1²/sqrt(2) and V3 = c V1³ for a quadratic and a cubic response: slopes 1, 2 and 3 in log r against log I (README, lockin).
    [Fact]
    public void Harmonics_grow_with_their_order_and_doubtful_ones_are_left_out()
    {
        const double k = 40, c = 7;
        HarmonicReading Of(int h, double i, RowStatus status = RowStatus.Ok, double error = 0) => h switch
        {
            1 => new("along", 1, 300 * i, 0, error, 0, status),
            2 => new("across", 2, 0, -k * Math.Pow(300 * i, 2) / Math.Sqrt(2), error, 0, status),
            _ => new("along", 3, c * Math.Pow(i, 3), 0, error, 0, status),
        };
        double[] currents = [1e-4, 2e-4, 5e-4, 1e-3];
        LockinPoint[] points =
        [
            Point("w", 0, null, RowStatus.Ok, Of(1, 0), Of(2, 0)), .. currents.Select(i => Point("w", i, null, RowStatus.Ok, Of(1, i), Of(2, i), Of(3, i))),
            Point("w", 2e-3, null, RowStatus.OutsideLaw, Of(1, 9, RowStatus.OutsideLaw), Of(2, 9, RowStatus.OutsideLaw)), Point("w", 3e-3, null, RowStatus.Ok, new HarmonicReading("along", 1, 9e9, 0, 1e9, 0, RowStatus.Ok)),
        ];
        IReadOnlyList<HarmonicSlope> slopes = LockinSummaries.Slopes(points);
        Assert.Equal([("along", 1), ("along", 3), ("across", 2)], slopes.Select(s => (s.Pair, s.Harmonic)).OrderBy(s => s.Pair == "across").ThenBy(s => s.Harmonic));
        Assert.All(slopes, s => Assert.Equal(((double)s.Harmonic, 4), (Math.Round(s.Slope, 9), s.Points)));
        Assert.Empty(LockinSummaries.Slopes(points[..2]));

        SecondHarmonicLine line = Assert.Single(LockinSummaries.Lines(Device("quadratic"), points));
        Assert.Equal(-k / Math.Sqrt(2), line.Line.Slope, 1e-9 * k);
        Assert.Equal((0.0, 1.0, 5), (Math.Round(line.Line.Intercept, 12), Math.Round(line.Line.RSquared, 9), line.Line.Points));
        Assert.Empty(LockinSummaries.Lines(Device(), points));
        Assert.Empty(LockinSummaries.Lines(Device("quadratic"), points[..1]));
        Assert.Equal(0, Assert.Single(LockinSummaries.Lines(Device("quadratic"), points[..2])).Line.SlopeError);
    }

    [Fact]
    public void A_summary_takes_the_smallest_current_and_a_line_through_what_can_be_trusted()
    {
        // V_even = 5 V_odd² + 1 uV.
        CurveRow Even(double i, RowStatus status, double off = 0, double slope = 5) => new(
            "w", i, [new("along", 100 * i, 0, 100 * i, null, null, 0, 0), new("across", 0, 0, null, (slope * Math.Pow(100 * i, 2)) + 1e-6 + off, 0, 0, 0), new("source", 250 * i, 0, null, null, null, 0, 0)], 3, status, null, 0, 0);
        CurveRow[] rows = [Even(0, RowStatus.Ok), Even(3e-4, RowStatus.OutsideLaw, 1), Even(-1e-4, RowStatus.Ok), Even(1e-4, RowStatus.Ok), Even(2e-4, RowStatus.ErrorAboveWanted), Row("w", 4e-4, RowStatus.NotConverged)];
        IReadOnlyList<WiringSummary> both = Summaries.Of(Device("quadratic"), rows);
        WiringSummary w = both[0];
        Assert.Equal(["w", "v"], both.Select(s => s.Wiring));
        Assert.Equal((0.0, 180.0), (w.DirectionDegrees, both[1].DirectionDegrees));
        Assert.Equal((250.0, 100.0), (Math.Round(w.TwoTerminal!.Value, 9), Math.Round(w.Along!.Value, 9)));
        Assert.Equal((3e-4, 3e-4), (w.LeftLawAt, w.Largest));
        Assert.Equal((5.0, 1e-6, 2), (Math.Round(w.Slope!.Slope, 6), Math.Round(w.Slope.Intercept, 12), w.Slope.Points));
        Assert.Equal((null, null, null, 0.0), (both[1].TwoTerminal, both[1].Slope, both[1].LeftLawAt, both[1].Largest));
        Assert.Null(Summaries.Of(Device(), rows)[0].Slope);
        Assert.Null(Summaries.Of(Device("quadratic"), rows[..3])[0].Slope);

        // Straight rows all alike: the line explains them all.
        double[] currents = [1e-4, 2e-4, 3e-4];
        CurveRow[] flat = [.. currents.Select(i => Even(i, RowStatus.Ok, 0, 0))];
        Assert.Equal(1, Summaries.Of(Device("quadratic"), flat)[0].Slope!.RSquared);
    }
}
