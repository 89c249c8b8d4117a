using FieldSolve.Readings;
using FieldSolve.Tests.PublishedTests.References;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// Sheets with a Hall part. Rectangle with contacts over its ends: R. F. Wick, J. Appl. Phys. 25 (1954) 741; H. J. Lippmann, F. Kuhrt, Z. Naturforsch. 13a
/// (1958) 462, 474. At the contact ends |E| goes like r^(-2 theta / pi) in a square corner and r^(-1/2 - theta / pi) on a smooth rim.
/// </summary>
public class HallPlateTests(ITestOutputHelper output)
{
    private const double Sigma = 1e-3, Current = 1e-6;
    private readonly Honesty honesty = new(output);

    [Theory]
    [InlineData(0.5, 1.0)]
    [InlineData(1, 0.1)]
    [InlineData(1, 1.2)]
    [InlineData(2, 0.5)]
    [InlineData(2.5, 0.45)]
    [InlineData(5, -1.0)]
    public void Bar_with_contacts_over_its_ends(double shape, double hallAngle)
    {
        const double Width = 2e-6;
        DriveResult r = TestDrive.Run(DeviceText.Bar(shape * Width, Width, Law(hallAngle))
            .Whole("in", "end", "left").Whole("out", "end", "right").Tip("left", 0, Width / 2).Tip("right", 0, -Width / 2)
            .Wiring("w", "in", "out", null, "left right").Drive(Current));
        (double rhoXx, double rhoXy) = Resistivity(hallAngle);
        var plate = new HallPlate(shape, hallAngle);
        double twoTerminal = shape == 1 ? 1 / Math.Cos(hallAngle) : shape == 5 ? 5 + HallPlate.EndTerm(hallAngle) : plate.Resistance;
        string name = $"Hall bar L/W {shape}, angle {hallAngle}";
        honesty.Reading(name, r, "source", Current * rhoXx * twoTerminal, shape == 5 ? 3e-7 * Current * rhoXx : 0);
        honesty.Reading(name, r, "across", -Current * rhoXy * plate.GeometryFactor);
    }

    // Two 90 degree arcs make the disc its own dual, so R = rho_xx / cos(theta) as for the square, whose geometry factor it shares.
    [Theory]
    [InlineData(0.5)]
    [InlineData(1.0)]
    public void Disc_with_quarter_arcs_is_a_square(double hallAngle)
    {
        const double Radius = 3e-6;
        DriveResult r = TestDrive.Run(DeviceText.Disc(Radius, Law(hallAngle))
            .Arc("in", 180, 45, Radius).Arc("out", 0, 45, Radius).RimTip("left", 90, Radius).RimTip("right", -90, Radius)
            .Wiring("w", "in", "out", null, "left right").Drive(Current));
        (double rhoXx, double rhoXy) = Resistivity(hallAngle);
        string name = $"disc, quarter arcs, Hall angle {hallAngle}";
        honesty.Reading(name, r, "source", Current * rhoXx / Math.Cos(hallAngle));
        honesty.Reading(name, r, "across", -Current * rhoXy * new HallPlate(1, hallAngle).GeometryFactor);
    }

    // The law's Hall part: K_a = s E_a + h E_b, K_b = s E_b - h E_a, so tan(theta) = h / s.
    private static string Law(double hallAngle) => DeviceText.Ohmic(Sigma, Sigma, Sigma * Math.Tan(hallAngle), 35);

    private static (double Xx, double Xy) Resistivity(double hallAngle)
    {
        (double s, double c) = Math.SinCos(hallAngle);
        return (c * c / Sigma, s * c / Sigma);
    }
}
