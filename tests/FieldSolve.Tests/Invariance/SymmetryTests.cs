using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests;
using Xunit.Abstractions;

namespace FieldSolve.Tests.InvarianceTests;

/// <summary>Drives that must agree with each other whatever the numbers are.</summary>
public class SymmetryTests(ITestOutputHelper output)
{
    private const double Current = 1e-5;

    // Four uneven arcs on a disc of an anisotropic sheet with a Hall part: R_ab,cd(h) = R_cd,ab(-h). H. B. G. Casimir, Rev. Mod. Phys. 17 (1945) 343.
    [Fact]
    public void Swapping_current_and_voltage_pairs_with_the_Hall_part_reversed_changes_nothing()
    {
        Reading forward = Disc(0.8e-3, 0, 1e-6, "a b", "c d"), back = Disc(-0.8e-3, 0, 1e-6, "c d", "a b"), same = Disc(0.8e-3, 0, 1e-6, "c d", "a b");
        Agree(forward, back);
        Assert.True(Math.Abs(forward.Value - same.Value) > 0.1 * Math.Abs(forward.Value));
    }

    [Fact]
    public void Turning_the_whole_device_changes_nothing() =>
        Agree(Disc(0.8e-3, 0, 1e-6, "a b", "c d"), Disc(0.8e-3, 17.3, 1e-6, "a b", "c d"));

    // The resistance of a sheet does not depend on its size; a power of two keeps the mesh, other factors keep it nearly everywhere.
    [Theory]
    [InlineData(1e-9)]
    [InlineData(1e-2)]
    public void Scaling_the_whole_device_changes_nothing(double radius)
    {
        Reading micrometre = Disc(0.8e-3, 0, 1e-6, "a b", "c d"), scaled = Disc(0.8e-3, 0, radius, "a b", "c d");
        output.WriteLine(string.Create(CultureInfo.InvariantCulture, $"scale {radius}: {(scaled.Value / micrometre.Value) - 1:E2}"));
        Agree(micrometre, scaled);
        Reading twice = Disc(0.8e-3, 0, 1e-6 * Math.Pow(2, Math.Round(Math.Log2(radius / 1e-6))), "a b", "c d");
        Assert.Equal(1, twice.Value / micrometre.Value, 1e-10);
    }

    // An L-shaped flake, drawn as it is, turned by an odd angle, and in the mirror (y -> -y, axis and Hall part reversed).
    [Fact]
    public void A_flake_turned_or_mirrored_reads_the_same()
    {
        string folder = Directory.CreateTempSubdirectory("fieldsolve-test-").FullName;
        try
        {
            Reading[] plain = Flake(folder, 0, false), turned = Flake(folder, 31.7, false), mirrored = Flake(folder, 0, true);
            for (int k = 0; k < plain.Length; k++)
            {
                Agree(plain[k], turned[k]);
                Agree(plain[k], mirrored[k]);
            }
        }
        finally
        {
            Directory.Delete(folder, true);
        }
    }

    [Fact]
    public void An_ohmic_sheet_has_no_even_part()
    {
        DriveResult r = TestDrive.Run(Arcs(0.8e-3, 0, 1e-6).Wiring("w", "a", "b", "c d").Drive(0, Current, 3, bothSigns: true));
        Assert.All(r.Rows.SelectMany(row => row.Readings), reading =>
        {
            Assert.Equal(0, reading.Even);
            Assert.Equal(0, reading.EvenError);
        });
        Assert.Equal(r.Rows[2].Of("along")!.Value, 2 * r.Rows[1].Of("along")!.Value, 1e-12 * Current / 1e-3);
    }

    // Two drives of one question agree within their error bars together.
    private void Agree(Reading a, Reading b)
    {
        output.WriteLine(string.Create(CultureInfo.InvariantCulture,
            $"{a.Value:R} {b.Value:R} differ by {Math.Abs(a.Value - b.Value):E1}, bars {a.Error:E1} {b.Error:E1}"));
        Assert.InRange(Math.Abs(a.Value - b.Value), 0, 2 * (a.Error + b.Error));
        Assert.True(a.Error + b.Error < 1e-3 * Math.Abs(a.Value));
    }

    private static Reading Disc(double hall, double turn, double radius, string currents, string voltages)
    {
        string[] c = currents.Split(' ');
        return TestDrive.Run(Arcs(hall, turn, radius).Wiring("w", c[0], c[1], voltages).Drive(Current)).Rows[0].Of("along")!;
    }

    private static DeviceText Arcs(double hall, double turn, double radius) =>
        DeviceText.Disc(radius, DeviceText.Ohmic(3e-3, 1e-3, hall, 25 + turn))
            .Arc("a", 10 + turn, 6, radius).Arc("b", 130 + turn, 9, radius).Arc("c", 75 + turn, 5, radius).Arc("d", 250 + turn, 7, radius);

    private static Reading[] Flake(string folder, double turn, bool mirror)
    {
        (double s, double c) = Math.SinCos(turn * Math.PI / 180);
        (double X, double Y) Place(double x, double y)
        {
            double v = mirror ? -y : y;
            return ((c * x) - (s * v), (s * x) + (c * v));
        }

        string Point(double x, double y)
        {
            (double px, double py) = Place(x, y);
            return string.Create(CultureInfo.InvariantCulture, $"{px:R} {py:R}");
        }

        (double X, double Y)[] corners = [(0, 0), (6e-6, 0), (6e-6, 2e-6), (2e-6, 2e-6), (2e-6, 5e-6), (0, 5e-6), (0, 0)];
        string file = FormattableString.Invariant($"flake{turn}{mirror}.wkt");
        File.WriteAllText(Path.Combine(folder, file), "POLYGON ((" + string.Join(", ", corners.Select(p => Point(p.X, p.Y))) + "))");
        var text = DeviceText.Outline(file, DeviceText.Ohmic(3e-3, 1e-3, mirror ? -0.5e-3 : 0.5e-3, mirror ? -25 - turn : 25 + turn));
        void Contact(string name, double x1, double y1, double x2, double y2)
        {
            ((double ax, double ay), (double bx, double by)) = (Place(x1, y1), Place(x2, y2));
            text.Stretch(name, ax, ay, bx, by);
        }

        void Tip(string name, double x, double y)
        {
            (double px, double py) = Place(x, y);
            text.Tip(name, px, py);
        }

        Contact("in", 0, 5e-6, 2e-6, 5e-6);
        Contact("out", 6e-6, 0.5e-6, 6e-6, 1.5e-6);
        Tip("p", 0, 3e-6);
        Tip("q", 4e-6, 0);
        Tip("r", 4e-6, 2e-6);
        CurveRow row = TestDrive.Run(text.Wiring("w", "in", "out", "p q", "r q").Drive(Current), folder).Rows[0];
        return [row.Of("along")!, row.Of("across")!, row.Of("source")!];
    }
}
