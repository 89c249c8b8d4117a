using FieldSolve.Bands;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Laws;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Tests.EndToEndTests;
using FieldSolve.Turning;
using static FieldSolve.Tests.BandsTests.BandSamples;

namespace FieldSolve.Tests.BandsTests;

/// <summary>law.toml pastes into a device file, and the device then reads what the bands say.</summary>
public class LawToDeviceTests
{
    private const string Device = """

        [sheet]
        disc = { diameter = "8 um" }
        [[contacts]]
        ring = 8
        width = "0.8 um"
        prefix = "c"
        [[wiring]]
        name = "0"
        source = "c5"
        drain = "c1"
        along = ["c4", "c2"]
        across = ["c3", "c7"]
        [[wiring]]
        name = "45"
        source = "c6"
        drain = "c2"
        along = ["c5", "c3"]
        across = ["c4", "c8"]
        [[wiring]]
        name = "90"
        source = "c7"
        drain = "c3"
        along = ["c6", "c4"]
        across = ["c5", "c1"]
        [drive]
        current = { from = "50 uA", to = "50 uA", steps = 1 }
        both_signs = true
        [mesh]
        error = 2e-3
        even_error = 3e-2
        """;

    [Fact]
    public void The_device_has_the_law_of_the_bands()
    {
        Cone tilted = Cone(0.5, 0.3, 1.4, 40 * MilliElectronvolt);
        BandsResult result = Run(Model(tilted) with { Axis = 0.3 });
        SheetDevice device = Read(result);
        Assert.Equal(result.Law.Axis, device.Axis, 1e-14);
        double f = 0.02 * result.Law.FieldLimit!.Value;
        double[] ka = new double[1], kb = new double[1];
        device.Law.EvaluatePure([f], [0.5 * f], ka, kb);
        BandResponse r = result.Response!;
        SecondOrder d = r.Total.Value;
        double fade = 1 / (1 + (0.02 * 0.02 * 1.25)), hall = r.Hall!.Value.Value;
        double second = f * f * fade * (d.D11 + (0.25 * d.D12) + d.D16);
        Assert.Equal((r.A.Value * f) + (0.5 * f * hall) + second, ka[0], 1e-9 * Math.Abs(second));
        Assert.NotEqual(0, second);
        Assert.NotEqual(0, hall);
        Assert.Equal("quadratic", device.Law.Kind);
        Assert.Contains("# d12 in A m/V^2: shifted distribution ", LawToml.Text(result), StringComparison.Ordinal);
    }

    [Fact]
    public void A_measured_profile_gives_an_ohmic_law_and_its_own_output_reads_back()
    {
        BandReading reading = BandFile.Read(Repository.Sample("bands/measured-profile.toml"));
        BandsResult result = BandsRun.Execute(reading.Input!, CancellationToken.None);
        SheetDevice device = Read(result);
        Assert.Equal("ohmic", device.Law.Kind);

        // The invented table was made with 4.5 mS along 23 degrees, 1.7 mS across, and noise of 0.02 mS.
        Assert.Equal(4.5e-3, device.Law.AtZeroField.Aa, 3e-5);
        Assert.Equal(1.7e-3, device.Law.AtZeroField.Bb, 3e-5);
        Assert.Equal(23 * Math.PI / 180, device.Axis, 4 * result.Fit.Axis.Error);

        // The table that bands writes is one that it reads: n·σ·n of a band model gives the model's tensor.
        using var folder = new TempFolder();
        BandsResult model = Run(Model(Cone(0.4, 0.3, 1.7)) with { Axis = 0.5 });
        folder.Write("profile.csv", ProfileCsv.Text(model));
        BandInput again = BandFile.Parse("axis = \"30 deg\"\n[profile]\nfile = \"profile.csv\"\n", "again", folder.Path).Input!;
        BandsResult second = BandsRun.Execute(again, CancellationToken.None);
        Assert.Equal(model.Law.A, second.Law.A, 1e-9 * model.Law.A);
        Assert.Equal(model.Law.B, second.Law.B, 1e-9 * model.Law.B);
        Assert.Equal(model.Law.Axis, second.Law.Axis, 1e-9);
    }

    [Fact]
    public void A_resistance_profile_is_inverted()
    {
        // n·ρ·n with principal resistances 200 and 800 ohm: conductances 5 mS and 1.25 mS.
        double[] d = [.. Enumerable.Range(0, 9).Select(k => k * 0.35)];
        var profile = new MeasuredProfile(d, [.. d.Select(x => 200 + (600 * Math.Pow(Math.Sin(x - 0.2), 2)))], null, IsResistance: true);
        BandsResult result = BandsRun.Execute(new BandInput { Title = "t", Path = "t", Sha256 = "", Axis = 0, Profile = profile }, CancellationToken.None);
        Assert.Equal(5e-3, result.Law.A, 1e-12);
        Assert.Equal(1.25e-3, result.Law.B, 1e-12);
        Assert.Equal(0.2, result.Law.Axis, 1e-10);
    }

    [Fact]
    public void The_across_signal_of_a_disc_grows_with_the_tilt_and_is_absent_without()
    {
        // Even part: the mirror line of a tilt along a forbids it for a current along a and allows it along b (I. Sodemann, L. Fu, Phys. Rev. Lett. 115,
        // 216806, 2015; K. Kang et al., Nature Mater. 18, 324, 2019). Odd part: none along the axes, largest between (common practice, no source).
        double lastEven = 0, lastOdd = 0;
        DriveResult? steepest = null;
        foreach (double tilt in new[] { 0, 0.25, 0.5 })
        {
            DriveResult drive = steepest = Turn(Run(Model(Cone(tilt))));
            Reading along = Across(drive, "0"), between = Across(drive, "45"), across = Across(drive, "90");
            double scale = drive.Rows[0].Of("along")!.Value;
            Assert.InRange(Math.Abs(along.Even!.Value), 0, along.EvenError!.Value + (1e-8 * scale));
            Assert.InRange(Math.Abs(along.Odd!.Value), 0, along.Error + (1e-8 * scale));
            if (tilt == 0)
            {
                Assert.InRange(Math.Abs(between.Value), 0, between.Error + (1e-8 * scale));
                Assert.InRange(Math.Abs(across.Even!.Value), 0, across.EvenError!.Value + (1e-8 * scale));
                continue;
            }

            Assert.True(Math.Abs(across.Even!.Value) > lastEven + (10 * across.EvenError!.Value), $"even {across.Even} ± {across.EvenError} after {lastEven}");
            Assert.True(Math.Abs(between.Odd!.Value) > lastOdd + (10 * between.Error), $"odd {between.Odd} ± {between.Error} after {lastOdd}");
            (lastEven, lastOdd) = (Math.Abs(across.Even.Value), Math.Abs(between.Odd.Value));
        }

        // The crystal turned by a right angle: what was read along 90 degrees is read along 180 (the reversed 0), with its sign.
        DriveResult plain = steepest!, turned = Turn(Run(Model(Cone(0.5)) with { Axis = Math.PI / 2 }));
        Reading before = Across(plain, "90"), after = Across(turned, "0");
        Assert.Equal(-before.Even!.Value, after.Even!.Value, before.EvenError!.Value + after.EvenError!.Value);
        Assert.InRange(Math.Abs(Across(turned, "90").Even!.Value), 0, Across(turned, "90").EvenError!.Value + 1e-9);
    }

    private static Reading Across(DriveResult drive, string wiring)
    {
        CurveRow row = drive.Rows.Single(r => r.Wiring == wiring);
        Assert.Equal(RowStatus.Ok, row.Status);
        return row.Of("across")!;
    }

    // The whole way: bands, law.toml, turn over the file's directions.
    private static DriveResult Turn(BandsResult result) => TurnRun.Execute(
        Read(result), new TurnOptions { ForPictures = false }, progress: null, CancellationToken.None).Drive;

    private static BandsResult Run(BandModel model) => BandsRun.Execute(
        new BandInput { Title = model.Title, Path = "bands.toml", Sha256 = "0", Axis = model.Axis, Model = model }, CancellationToken.None);

    private static SheetDevice Read(BandsResult result)
    {
        DeviceReading reading = DeviceFile.Parse(LawToml.Text(result) + Device, "device.toml", "");
        Assert.Empty(reading.Faults);
        return reading.Device!;
    }
}
