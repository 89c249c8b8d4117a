using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.ToleranceTests;

/// <summary>Along pairs that read zero by symmetry: nothing is a share of their voltage.</summary>
public class ZeroAlongTests
{
    private const double Current = 1e-4;

    // Both along probes lie on the middle line across the current.
    private static DeviceText Bar() => DeviceText.Bar(30e-6, 10e-6, DeviceText.Ohmic(4e-3, 1e-3)).Whole("l", "end", "left").Whole("r", "end", "right");

    [Fact]
    public void A_ratio_to_nothing_is_left_out_and_a_voltage_is_explained_only_where_one_is_read()
    {
        SheetDevice device = ToleranceDevices.Read(
            Bar().Tip("p", 0, 3e-6).Tip("q", 0, -3e-6).Tip("n", 2e-6, 3e-6).Wiring("zero", "l", "r", "p q", "n q").Wiring("good", "l", "r", "p n", "p q").Wiring("none", "l", "r", "p n").Drive(Current).Wanted(1e-2),
            "axis = \"1 deg\"\na = \"0.1 mS\"");
        ToleranceResult r = ToleranceRun.Execute(device, new ToleranceOptions { Samples = 2, Explain = 1e-3 }, null, null, default);
        Assert.Equal(["good"], r.Quantities.Where(q => q.IsRatio).Select(q => q.Wiring));
        Assert.Contains(r.Warnings, w => w.StartsWith("The along voltage of wiring 'zero' cannot be told from zero, so across / along is left out.", StringComparison.Ordinal));
        Assert.DoesNotContain(r.Warnings, w => w.Contains("'good'", StringComparison.Ordinal));
        Assert.All(r.Statistics, s => Assert.True(double.IsFinite(s.Design) && double.IsFinite(s.Deviation.Value) && double.IsFinite(s.FirstOrder) && double.IsFinite(s.NumericalError), s.Quantity.Label));
        Assert.All(r.Budget, e => Assert.True(double.IsFinite(e.Contribution) && double.IsFinite(e.Error), e.Cause.Label));

        // Shares of the along voltage, and one hundredth of it as a level to keep to, mean nothing there either.
        Assert.DoesNotContain(r.Answers, a => a.StartsWith("Wiring 'zero'", StringComparison.Ordinal) && a.Contains("along", StringComparison.Ordinal));
        Assert.Equal("Wiring 'none' has no across pair, so --explain has no voltage to explain there; give the wiring 'across', or explain another one.", Assert.Single(r.Warnings, w => w.Contains("--explain", StringComparison.Ordinal)));
    }

    // Exactly zero: a state whose readings are made up.
    [Fact]
    public void A_share_of_exactly_zero_is_no_number()
    {
        SheetDevice device = ToleranceDevices.Read(Bar().Tip("p", 0, 3e-6).Tip("q", 0, -3e-6).Tip("n", 2e-6, 3e-6).Wiring("w", "l", "r", "p q", "n q").Drive(Current), "axis = \"1 deg\"");
        DesignState Read(double along, double error) => new()
        {
            Plan = new ReadingPlan(device.Wirings[0]),
            CoarseU = [],
            CoarseFactor = [],
            CoarseValues = [],
            FineValues = [],
            Coarse = [],
            Fine = [],
            Row = new("w", Current, [new("along", along, error, along, 0, 0, 0, 0)], 1, RowStatus.Ok, null, 0, 0),
        };
        Assert.True(Read(0, 0).AlongIsZero);
        Assert.True(Read(-1e-9, 1e-8).AlongIsZero);
        Assert.False(Read(-1e-8, 1e-9).AlongIsZero);
    }

    // The mirror line of a disc from source to drain exchanges both probes, so that there is exactly nothing between them.
    [Fact]
    public void A_wanted_error_is_reached_though_the_along_voltage_is_zero()
    {
        DriveResult r = TestDrive.Run(DeviceText.Disc(4e-6, DeviceText.Ohmic(4e-3, 1e-3)).Arc("w", 180, 5, 4e-6).Arc("e", 0, 5, 4e-6).Arc("n", 90, 5, 4e-6).Arc("s", 270, 5, 4e-6)
            .Wiring("x", "w", "e", "n s").Drive(Current).Wanted(1e-2));
        CurveRow row = Assert.Single(r.Rows);
        Reading along = row.Of("along")!;

        // A hundredth of a thousandth of 100 uA times 500 ohm.
        Assert.Equal(RowStatus.Ok, row.Status);
        Assert.True(Math.Abs(along.Value) <= along.Error && along.Error <= 0.5e-6, $"{along.Value} +- {along.Error}");
        Assert.Contains(r.Warnings, w => w.StartsWith("No along voltage reaches a thousandth of current times sheet resistance (50 µV at 100 µA)", StringComparison.Ordinal));
        Assert.True(r.Figures.Unknowns < 60_000, $"{r.Figures.Unknowns} unknowns");
    }

    [Fact]
    public void The_scale_is_the_along_voltage_unless_that_is_next_to_nothing()
    {
        SheetDevice device = TestDrive.Device(Bar().Wiring("w", "l", "r").Drive(Current));
        (bool, double)[] readings = [(true, -2e-3), (true, 1e-3), (false, 9)];
        Assert.Equal(2e-3, VoltageScale.Of(device, Current, readings));
        Assert.Equal(5e-5, VoltageScale.Of(device, -Current, [(true, 1e-6), (false, 9)]), 1e-17);
        Assert.Equal(9, VoltageScale.Of(device, Current, [(false, -9)]));
        Assert.Equal(0, VoltageScale.Of(device, 0, [(true, 0), (false, 0)]));
        Assert.Null(VoltageScale.Warning(device, [(Current, 1e-3), (Current / 2, 1e-9)]));
        Assert.Null(VoltageScale.Warning(device, []));
        Assert.NotNull(VoltageScale.Warning(device, [(Current, 1e-6), (Current / 2, 1)]));
    }
}
