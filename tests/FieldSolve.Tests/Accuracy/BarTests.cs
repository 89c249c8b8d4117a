using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;
using Xunit.Abstractions;

namespace FieldSolve.Tests.AccuracyTests;

/// <summary>Devices on which bars were once found too small, each against a run that is fifty times finer.</summary>
public class BarTests(ITestOutputHelper output)
{
    private const double R = 4e-6;

    // At a twentieth of the largest current the law has not faded: the even part there, and its error, are some ninety times what I² makes of those at the largest current.
    [Fact]
    public void Even_parts_of_a_law_that_fades_at_weak_drive() => Compare(w => DeviceText.Disc(R, DeviceText.Law(
            "quadratic", 4e-3, 1e-3, 20, ("d11", 1e-8, "A m/V^2"), ("d12", 1e-7, "A m/V^2"), ("d26", 5e-8, "A m/V^2"), ("field_limit", 3e3, "V/m")))
        .Arc("a", 180, 5, R).Arc("b", 0, 5, R).Arc("p", 120, 5, R).Arc("q", 60, 5, R).Arc("r", 270, 5, R)
        .Wiring("w", "a", "b", "p q", "p r").Drive(2e-5, 4e-4, 2, bothSigns: true).Wanted(w, 10 * w));

    // Pads whose transfer length, 0.1 um, is a fraction of the triangles: near their rims no smooth rate of convergence is reached.
    [Theory]
    [InlineData(1e-11)]
    [InlineData(1e-13)]
    public void Resistive_pads_of_a_short_transfer_length(double resistivity) => Compare(w => DeviceText.Bar(20e-6, 5e-6, DeviceText.Ohmic(1e-3, 2e-3, 0, 30))
        .Pad("w", -11e-6, -3e-6, -7e-6, 3e-6, resistivity).Pad("e", 7e-6, -3e-6, 11e-6, 3e-6, resistivity).Pad("f", -1e-6, -1e-6, 1e-6, 1e-6, resistivity)
        .Tip("p", -4e-6, 2.5e-6).Tip("q", 4e-6, 2.5e-6).Tip("r", 4e-6, -2.5e-6).Wiring("x", "w", "e", "p q", "q r", "fp: f p").Drive(2e-4).Wanted(w));

    // Right angles become 46 and 134 degrees in the plane where this sheet is isotropic.
    [Fact]
    public void Ends_of_a_bar_with_its_crystal_axis_askew() => Compare(w => DeviceText.Bar(52e-6, 30e-6, DeviceText.Ohmic(6e-3, 69e-3, 0, -20))
        .Whole("w", "end", "left").Whole("e", "end", "right").Stretch("p", -7.9e-6, 15e-6, -7.6e-6, 15e-6).Stretch("q", 18.3e-6, 15e-6, 19.4e-6, 15e-6)
        .Stretch("r", 1e-6, -15e-6, 3.3e-6, -15e-6).Wiring("x", "w", "e", "p q", "p r").Drive(1e-4).Wanted(w));

    // Nothing can be compared with a first mesh, at whatever current.
    [Fact]
    public void Weak_drives_on_a_first_mesh_are_trusted_no_more_than_strong_ones()
    {
        DriveResult r = TestDrive.Run(DeviceText.Disc(R, DeviceText.Law("quadratic", 4e-3, 1e-3, 20, ("d11", 1e-12, "A m/V^2"), ("field_limit", 4e5, "V/m")))
            .Arc("a", 180, 5, R).Arc("b", 0, 5, R).Arc("p", 120, 5, R).Arc("q", 60, 5, R).Wiring("w", "a", "b", "p q").Drive(1e-6, 1e-4, 2).Wanted(0.2));
        Assert.Single(r.Levels);
        Assert.All(r.Rows[0].Readings.Zip(r.Rows[1].Readings), p => Assert.Equal(1, 100 * p.First.Error / p.Second.Error, 0.02));
    }

    private void Compare(Func<double, DeviceText> device)
    {
        DriveResult found = TestDrive.Run(device(1e-3)), fine = TestDrive.Run(device(2e-5));
        foreach ((CurveRow row, CurveRow exact) in found.Rows.Zip(fine.Rows))
        {
            foreach ((Reading a, Reading b) in row.Readings.Zip(exact.Readings))
            {
                Within($"{a.Pair} at {row.Current} A", a.Value, a.Error, b.Value, b.Error);
                if (a.Even is { } even && a.EvenError > 0)
                {
                    Within($"{a.Pair} even at {row.Current} A", even, a.EvenError.Value, b.Even!.Value, b.EvenError!.Value);
                }
            }
        }
    }

    private void Within(string what, double value, double bar, double exact, double exactBar)
    {
        string line = string.Create(CultureInfo.InvariantCulture, $"{what}: {value:R} +- {bar:E2}, {exact:R} +- {exactBar:E2}: {Math.Abs(value - exact) / (bar + exactBar):F2}");
        output.WriteLine(line);
        Assert.True(Math.Abs(value - exact) <= bar + exactBar, line);
    }
}
