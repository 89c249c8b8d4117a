using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// Anisotropic sheets against their isotropic equivalents after the stretch x' = x sqrt(rho_x / rho): J. D. Wasscher, Philips Res. Rep. 16 (1961) 301;
/// W. L. V. Price, J. Phys. D 5 (1972) 1127.
/// </summary>
public class AnisotropicTests(ITestOutputHelper output)
{
    private const double Radius = 4e-6, Current = 1e-5, Mean = 1e3;
    private readonly Honesty honesty = new(output);

    // Resistivity ratio 4, high along crystal a. The direction of the current against a is set by the axis, the contacts stay.
    [Theory]
    [InlineData(5, 30)]
    [InlineData(10, 0)]
    [InlineData(10, 75)]
    [InlineData(20, 45)]
    public void Arcs_on_an_anisotropic_disc(double half, double direction)
    {
        DriveResult r = Disc(half, direction, 4);
        DiscArcs arcs = DiscArcs.Opposite(half, direction, RimChords.Anisotropic(4));
        string name = $"anisotropic disc, arcs {half} deg, direction {direction} deg";
        honesty.Reading(name, r, "source", Mean * Current * arcs.Resistance);
        honesty.Reading(name, r, "along", Mean * Current * arcs.Reading(direction + 150, direction + 30));
        honesty.Reading(name, r, "across", Mean * Current * arcs.Reading(direction + 90, direction - 90));
    }

    // The point-contact series, with arcs of half angle 0.5 degrees (8.7e-3 rad): the transverse voltage falls by about the square of that.
    [Theory]
    [InlineData(2, 30)]
    [InlineData(9, 60)]
    public void Point_contact_series(double ratio, double direction)
    {
        DriveResult r = Disc(0.5, direction, ratio);
        LogChord chord = RimChords.Anisotropic(ratio);
        double finiteWidth = 5 * Math.Pow(RimChords.Radians(0.5), 2) * Mean * Current;
        double along = PointContacts.Disc(direction + 180, direction, direction + 150, direction + 30, chord);
        double across = PointContacts.Disc(direction + 180, direction, direction + 90, direction - 90, chord);
        string name = $"point series, ratio {ratio}, direction {direction} deg";
        honesty.Reading(name, r, "along", Mean * Current * along, finiteWidth);
        honesty.Reading(name, r, "across", Mean * Current * across, finiteWidth);
    }

    // Square with point contacts at its corners, resistivity ratio 4 along its edges: H. C. Montgomery, J. Appl. Phys. 42 (1971) 2971. The current
    // goes in and out over the last 1/500 of an edge, which moves its centre by a part of the square of that.
    [Fact]
    public void Corners_of_an_anisotropic_square()
    {
        // rho_x = rho / 2, rho_y = 2 rho: the equivalent rectangle is twice as long along y. Corners are named after the map's directions.
        const double Side = 1e-3, Small = Side / 500, H = Side / 2;
        DriveResult r = TestDrive.Run(DeviceText.Bar(Side, Side, DeviceText.Ohmic(2 / Mean, 0.5 / Mean))
            .Stretch("sw", -H, -H + Small, -H, -H).Stretch("se", H, -H, H, -H + Small).Stretch("nw", -H, H, -H, H - Small).Tip("ne", H, H)
            .Wiring("x", "sw", "se", "nw ne").Wiring("y", "sw", "nw", "se ne").Drive(Current));
        double x = Mean * Current * PointContacts.Rectangle(1, 2), y = Mean * Current * PointContacts.Rectangle(2, 1);
        honesty.Reading("Montgomery square, easy axis", r, r.Rows[0], "along", x, 1e-4 * x);
        honesty.Reading("Montgomery square, hard axis", r, r.Rows[1], "along", y, 1e-4 * y);
    }

    private static DriveResult Disc(double half, double direction, double ratio)
    {
        double root = Math.Sqrt(ratio);
        return TestDrive.Run(DeviceText.Disc(Radius, DeviceText.Ohmic(1 / (Mean * root), root / Mean, axis: -direction))
            .Arc("in", 180, half, Radius).Arc("out", 0, half, Radius)
            .RimTip("p", 150, Radius).RimTip("q", 30, Radius).RimTip("left", 90, Radius).RimTip("right", -90, Radius)
            .Wiring("w", "in", "out", "p q", "left right").Drive(Current));
    }
}
