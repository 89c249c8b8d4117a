using System.Text;
using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Tests.EndToEndTests;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.AccuracyTests;

/// <summary>Sheets of so many corners or contacts that a fan of small triangles at each does not fit into the limit of unknowns, and laws at the limits of what is accepted.</summary>
public class ManyCornersTests
{
    private const double Micron = 1e-6;

    [Fact]
    public void A_perforated_sheet_keeps_to_the_limit_of_unknowns()
    {
        using var folder = new TempFolder();
        var text = new StringBuilder("POLYGON ((-7e-6 -5e-6, 7e-6 -5e-6, 7e-6 5e-6, -7e-6 5e-6, -7e-6 -5e-6)");
        for (int k = 0; k < 117; k++)
        {
            (double x, double y) = ((k % 13) - 6, (k / 13) - 4);
            text.Append(", (").AppendJoin(", ", Enumerable.Range(0, 13).Select(i => i % 12 * Math.PI / 6).Select(a => FormattableString.Invariant($"{x + (0.3 * Math.Cos(a)):F9}e-6 {y + (0.3 * Math.Sin(a)):F9}e-6"))).Append(')');
        }

        folder.Write("holes.wkt", text.Append(')').ToString());
        DeviceText device = DeviceText.Outline("holes.wkt", DeviceText.Ohmic(1e-3, 1e-3)).Stretch("s", -7 * Micron, -3 * Micron, -7 * Micron, 3 * Micron)
            .Stretch("d", 7 * Micron, -3 * Micron, 7 * Micron, 3 * Micron).Wiring("w", "s", "d", "s d").Drive(1e-3).Wanted(3e-3);
        DriveResult few = Run(device, folder.Path, 100_000), more = Run(device.Wanted(3e-4), folder.Path, 400_000);
        Assert.All(few.Levels, l => Assert.InRange(l.Unknowns, 1, 100_000));
        Assert.All(more.Levels, l => Assert.InRange(l.Unknowns, 1, 400_000));
        Reading a = few.Rows[0].Readings[0], b = more.Rows[0].Readings[0];
        Assert.True(b.Error < 0.7 * a.Error, $"the reference is no better: {b.Error} and {a.Error}");
        Assert.True(Math.Abs(a.Value - b.Value) <= a.Error + b.Error, $"{a.Value} +- {a.Error}, {b.Value} +- {b.Error}");
    }

    // Turned by 90 degrees with contacts and free edges exchanged, a square between two full ends is itself, so its resistance is sqrt(rho_xx^2 + rho_xy^2), whatever the Hall angle
    // (R. F. Wick, J. Appl. Phys. 25, 741 (1954); the place is from memory).
    [Fact]
    public void A_square_at_a_Hall_angle_of_1_55()
    {
        double hall = 1e-3 * Math.Tan(1.55);
        DriveResult run = TestDrive.Run(DeviceText.Bar(10 * Micron, 10 * Micron, DeviceText.Ohmic(1e-3, 1e-3, hall)).Whole("s", "end", "left").Whole("d", "end", "right")
            .Wiring("w", "s", "d", "s d").Drive(1e-3));
        Reading r = run.Rows[0].Readings[0];
        double exact = 1e-3 / Math.Sqrt(1e-6 + (hall * hall));
        Assert.Equal(RowStatus.Ok, run.Rows[0].Status);
        Assert.True(Math.Abs(r.Value - exact) <= r.Error, $"{r.Value:R} +- {r.Error}, {exact:R}");
    }

    // Between full ends the field is uniform, 10 um / (10 um b) in all and half of it over 5 um, whatever the other conductance.
    [Fact]
    public void A_bar_of_an_anisotropy_of_ten_thousand_along_its_worse_axis()
    {
        DriveResult run = TestDrive.Run(DeviceText.Bar(10 * Micron, 10 * Micron, DeviceText.Ohmic(1e-1, 1e-5, 0, 90)).Whole("s", "end", "left").Whole("d", "end", "right")
            .Tip("p", -2 * Micron, Micron).Tip("q", 3 * Micron, -4 * Micron).Wiring("w", "s", "d", "p q").Drive(1e-6));
        Reading r = run.Rows[0].Readings.Single(x => x.Pair == "along");
        Assert.Equal(RowStatus.Ok, run.Rows[0].Status);
        Assert.True(Math.Abs(r.Value - 0.05) <= r.Error + 1e-12, $"{r.Value:R} +- {r.Error}");
    }

    private static DriveResult Run(DeviceText text, string folder, int most)
    {
        SheetDevice device = TestDrive.Device(text, folder);
        return DriveRun.Execute(device with { Mesh = device.Mesh with { MaxUnknowns = most } }, new DriveOptions { Maps = MapChoice.None, ForPictures = false }, null, default);
    }
}
