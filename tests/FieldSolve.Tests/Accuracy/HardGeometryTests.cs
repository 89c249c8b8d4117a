using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Tests.EndToEndTests;
using FieldSolve.Tests.PublishedTests;
using Xunit.Abstractions;

namespace FieldSolve.Tests.AccuracyTests;

/// <summary>
/// Sheets with corners, contacts and gaps at which a mesh made by eye fails. There is no closed form for most of them, so each run is compared with one
/// that asks for far more: no reading may differ by more than the bars of both.
/// </summary>
public class HardGeometryTests(ITestOutputHelper output)
{
    private const double Micron = 1e-6;

    [Fact]
    public void L_shaped_flake_with_a_second_order_law()
    {
        using var folder = new TempFolder();
        folder.Write("l.wkt", "POLYGON ((0 0, 10e-6 0, 10e-6 10e-6, 6e-6 10e-6, 6e-6 4e-6, 0 4e-6, 0 0))");
        string law = DeviceText.Law(
            "quadratic", 2e-3, 1e-3, 20, ("hall", 3e-4, "S"), ("d11", 4e-10, "A m/V^2"), ("d26", -3e-10, "A m/V^2"), ("field_limit", 3e6, "V/m"));
        DeviceText text = DeviceText.Outline("l.wkt", law)
            .Stretch("s", 0, 0, 0, 4 * Micron).Stretch("d", 6 * Micron, 10 * Micron, 10 * Micron, 10 * Micron)
            .Stretch("p", 3 * Micron, 0, 3.4 * Micron, 0).Stretch("q", 10 * Micron, 6 * Micron, 10 * Micron, 6.4 * Micron)
            .Stretch("l", 3 * Micron, 4 * Micron, 3.3 * Micron, 4 * Micron).Stretch("r", 6 * Micron, 0, 6.3 * Micron, 0)
            .Wiring("w", "s", "d", "p q", "l r").Drive(2e-4, 4e-4, 2, bothSigns: true);
        Compare(text, folder.Path);
    }

    [Fact]
    public void Hall_bar_with_narrow_arms_and_a_turned_crystal()
    {
        string text = "[sheet]\nhall_bar = { length = \"30 um\", width = \"6 um\", arm_width = \"0.5 um\", arm_length = \"2 um\", arms_at = [\"-8 um\", \"8 um\"] }\n"
            + DeviceText.Ohmic(3e-3, 1e-3, 2e-4, 35)
            + "[[contact]]\nname = \"s\"\nedge = { end = \"left\" }\n[[contact]]\nname = \"d\"\nedge = { end = \"right\" }\n"
            + Arm(1, "top") + Arm(2, "top") + Arm(1, "bottom")
            + "[[wiring]]\nname = \"w\"\nsource = \"s\"\ndrain = \"d\"\nalong = [\"top1\", \"top2\"]\nacross = [\"top1\", \"bottom1\"]\n"
            + "[drive]\ncurrent = { from = \"1 mA\", to = \"1 mA\", steps = 1 }\n";
        Compare(text, ".");
    }

    private static string Arm(int arm, string side) =>
        FormattableString.Invariant($"[[contact]]\nname = \"{side}{arm}\"\nedge = {{ arm = {arm}, side = \"{side}\" }}\n");

    [Theory]
    [InlineData(1e-3)]
    [InlineData(1e-5)]
    public void Contact_of_a_thousandth_of_the_disc_and_less(double share)
    {
        const double Radius = 5 * Micron;
        Compare(DeviceText.Disc(Radius, DeviceText.Ohmic(2e-3, 1e-3, 2e-4, 15))
            .Arc("s", 180, share * 180 / Math.PI, Radius).Arc("d", 0, 5, Radius).Arc("l", 90, 4, Radius).Arc("r", 270, 4, Radius)
            .Arc("p", 150, 3, Radius).Arc("q", 30, 3, Radius)
            .Wiring("w", "s", "d", "p q", "l r").Drive(1e-5), ".");
    }

    [Theory]
    [InlineData(1e-3)]
    [InlineData(1e-6)]
    public void Two_contacts_a_thousandth_of_the_disc_apart_and_less(double share)
    {
        const double Radius = 5 * Micron;
        double gap = share * 2 * 180 / Math.PI;
        Compare(DeviceText.Disc(Radius, DeviceText.Ohmic(2e-3, 1e-3, 0, 15))
            .Arc("s", 180, 6, Radius).Arc("d", 0, 6, Radius).Arc("l", 90, 5, Radius).Arc("m", 100 + gap, 5, Radius).Arc("r", 270, 4, Radius)
            .Wiring("w", "s", "d", "m l", "l r").Drive(1e-5), ".");
    }

    [Fact]
    public void Anisotropy_of_a_thousand()
    {
        const double Radius = 5 * Micron;
        Compare(DeviceText.Disc(Radius, DeviceText.Ohmic(1e-1, 1e-4, 0, 20))
            .Arc("s", 180, 6, Radius).Arc("d", 0, 6, Radius).Arc("l", 90, 5, Radius).Arc("r", 270, 4, Radius)
            .Wiring("w", "s", "d", null, "l r").Drive(1e-5).Wanted(1e-3), ".", finer: 10);
    }

    /// <summary>Reading one more pair costs unknowns; a contact that nobody reads gets none.</summary>
    [Fact]
    public void Nothing_is_refined_for_a_pair_nobody_reads()
    {
        const double Radius = 5 * Micron;
        DeviceText Text(params string[] extra) => DeviceText.Disc(Radius, DeviceText.Ohmic(2e-3, 1e-3, 0, 15))
            .Arc("s", 180, 6, Radius).Arc("d", 0, 6, Radius).Arc("p", 150, 5, Radius).Arc("q", 30, 5, Radius).Arc("x", 300, 5, Radius).Arc("y", 240, 5, Radius)
            .Wiring("w", "s", "d", "p q", null, extra).Drive(1e-5).Wanted(1e-6);
        int without = TestDrive.Run(Text()).Figures.Unknowns, with = TestDrive.Run(Text("e: y x")).Figures.Unknowns;
        Assert.True(without < 0.98 * with, $"{without} unknowns without the pair, {with} with it");
    }

    private void Compare(DeviceText text, string folder, double finer = 30) => Compare(text.ToString(), folder, finer);

    private void Compare(string text, string folder, double finer = 30)
    {
        DeviceReading read = DeviceFile.Parse(text, "test.toml", folder);
        Assert.True(read.Faults.Count == 0, string.Join('\n', read.Faults));
        SheetDevice device = read.Device!;
        DriveResult here = Run(device), reference = Run(device with
        {
            Mesh = device.Mesh with { Error = device.Mesh.Error / finer, EvenError = device.Mesh.EvenError / finer },
        });
        output.WriteLine($"{here.Figures.Unknowns} unknowns, reference {reference.Figures.Unknowns}");
        for (int k = 0; k < here.Rows.Count; k++)
        {
            Assert.Equal(RowStatus.Ok, here.Rows[k].Status);
            foreach (Reading r in here.Rows[k].Readings)
            {
                Reading exact = reference.Rows[k].Of(r.Pair)!;
                output.WriteLine(FormattableString.Invariant($"{r.Pair}: {r.Value:G9} differs by {Math.Abs(r.Value - exact.Value):E1}, bars {r.Error:E1} and {exact.Error:E1}"));
                Assert.True(Math.Abs(r.Value - exact.Value) <= r.Error + exact.Error, $"{r.Pair} is off by more than its bar");
                Assert.True(exact.Error < 0.5 * r.Error, $"{r.Pair}: the reference is no better");
                if (r.Even is { } even && r.EvenError > 0)
                {
                    Assert.True(Math.Abs(even - exact.Even!.Value) <= r.EvenError + exact.EvenError, $"the even part of {r.Pair} is off by more than its bar");
                }
            }
        }
    }

    private static DriveResult Run(SheetDevice device) =>
        DriveRun.Execute(device, new DriveOptions { Maps = MapChoice.None, ForPictures = false }, null, default);
}
