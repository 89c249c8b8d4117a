namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>
/// The closed forms that the published checks compare with, against values evaluated separately in multi-precision arithmetic, so that
/// a slip in a reference does not pass for one in the program.
/// </summary>
public class ReferenceTests
{
    private static void Near(double expected, double actual, double relative = 1e-10) =>
        Assert.InRange(actual, expected - (relative * Math.Abs(expected)), expected + (relative * Math.Abs(expected)));

    [Fact]
    public void Elliptic_integrals_agree_with_known_values()
    {
        Near(Math.PI / 2, EllipticIntegrals.Complete(0), 1e-15);
        Near(1.85407467730137, EllipticIntegrals.Complete(0.5), 1e-14); // Gamma(1/4)² / (4 sqrt(pi))
        Near(EllipticIntegrals.Complete(0.7), EllipticIntegrals.Incomplete(Math.PI / 2, 0.7), 1e-13);
        Near(0.3, EllipticIntegrals.Incomplete(0.3, 0), 1e-13);
        Near(Math.Atanh(Math.Sin(0.8)), EllipticIntegrals.Incomplete(0.8, 1), 1e-13);
    }

    [Theory]
    [InlineData(-1, 1, 179, 181, 3.4597075683824)]
    [InlineData(-15, 15, 165, 195, 1.7320508075689)]
    [InlineData(-45, 45, 135, 225, 1.0)]
    [InlineData(-75, 75, 105, 255, 0.57735026918963)]
    [InlineData(-10, 10, 50, 80, 1.445784226291)]
    [InlineData(-5, 5, 170, 200, 2.0827765652808)]
    [InlineData(-2, 2, 160, 164, 3.0104965138733)]
    public void Arcs_on_a_disc(double p1, double p2, double p3, double p4, double resistance) =>
        Near(resistance, new DiscArcs(p1, p2, p3, p4).Resistance, 1e-12);

    [Theory]
    [InlineData(5, 25, 0.301765971925)]
    [InlineData(10, 60, 0.411410975704)]
    [InlineData(20, 30, 0.20181385048)]
    [InlineData(20, 90, 0.5)]
    public void Rim_potential_between_arcs(double half, double at, double share)
    {
        DiscArcs arcs = DiscArcs.Opposite(half);
        Near(share, arcs.Share(at), 1e-11);
        Near(share, arcs.Share(-at), 1e-11);
        Near(1 - share, arcs.Share(180 - at), 1e-11);
        Near(1 - share, arcs.Share(180 + at), 1e-11);
    }

    [Fact]
    public void A_probe_off_its_place() =>
        Near(0.0280283327751, DiscArcs.Opposite(10).Reading(95, 90), 1e-10);

    [Theory]
    [InlineData(1, 0.578099745712, 0.66260536502)]
    [InlineData(10, 1.00891374524, 1.29366620592)]
    [InlineData(22.5, 1.4142135623731, 2)]
    [InlineData(30, 1.70916888656, 2.55852314234)]
    public void Four_equal_arcs(double half, double dipole, double quadrupole)
    {
        var arcs = new FourArcs(half);
        Near(dipole, arcs.Dipole);
        Near(quadrupole, arcs.Quadrupole);
    }

    [Theory]
    [InlineData(0, 90, 180, 270, 0.22063560015265, 0.22063560015265)]
    [InlineData(0, 60, 150, 260, 0.17924399500364, 0.2682256345775)]
    [InlineData(10, 45, 180, 300, 0.12724072273879, 0.35337642979099)]
    public void Point_contacts_on_a_disc_obey_the_theorem(double a, double b, double c, double d, double first, double second)
    {
        double abcd = PointContacts.Disc(a, b, d, c), bcda = PointContacts.Disc(b, c, a, d);
        Near(first, abcd);
        Near(second, bcda);
        Near(1, Math.Exp(-Math.PI * abcd) + Math.Exp(-Math.PI * bcda), 1e-14);
    }

    [Theory]
    [InlineData(0.02, -3.607113343e-5)]
    [InlineData(0.2, -0.003644703898)]
    public void One_arc_instead_of_a_point(double length, double error)
    {
        Near(error, PointContacts.OneArcError(length), 1e-8);
        Near(error, -length * length / (16 * Math.Log(2)), 0.02);
    }

    [Theory]
    [InlineData(0.02, -0.0003003737376)]
    [InlineData(0.2, -0.04373142063)]
    public void One_buried_point_contact(double depth, double error) => Near(error, PointContacts.BuriedPointError(depth), 1e-9);

    [Theory]
    [InlineData(1, 0.2206356001527, 0.2206356001527)]
    [InlineData(1.5, 0.04575644867215, 0.640027561834)]
    [InlineData(4, 1.776088877611e-5, 3.117466479787)]
    public void Corners_of_a_rectangle(double l2, double first, double second)
    {
        Near(first, PointContacts.Rectangle(1, l2));
        Near(second, PointContacts.Rectangle(l2, 1));
    }

    [Theory]
    [InlineData(10, 2, 0.150323863067)]
    [InlineData(45, 4, 0.988688915619)]
    [InlineData(70, 9, 0.995134251121)]
    public void Transverse_voltage_of_an_anisotropic_disc(double direction, double ratio, double voltage)
    {
        Near(voltage, PointContacts.Disc(direction + 180, direction, direction + 90, direction - 90, RimChords.Anisotropic(ratio)));

        // The leading term is exactly (2/pi)(rho_h - rho_l) sin 2t, 4/pi times what a uniform field would give.
        Near(voltage, 2 / Math.PI * (Math.Sqrt(ratio) - (1 / Math.Sqrt(ratio))) * Math.Sin(2 * RimChords.Radians(direction)), 0.1);
    }

    [Theory]
    [InlineData(30, 2, 1.38674191509)]
    [InlineData(90, 9, 0.265485241926)]
    public void Longitudinal_voltage_of_an_anisotropic_disc(double direction, double ratio, double voltage) =>
        Near(voltage, PointContacts.Disc(direction + 180, direction, direction + 160, direction + 20, RimChords.Anisotropic(ratio)));

    [Theory]
    [InlineData(5, 30, 3.195206566204, 0.821718284131)]
    [InlineData(10, 75, 1.486227649404, 0.42232337917)]
    [InlineData(20, 45, 1.778793285333, 0.874444867883)]
    public void Arcs_on_an_anisotropic_disc(double half, double direction, double twoTerminal, double transverse)
    {
        DiscArcs arcs = DiscArcs.Opposite(half, direction, RimChords.Anisotropic(4));
        Near(twoTerminal, arcs.Resistance);
        Near(transverse, arcs.Reading(direction + 90, direction - 90));
    }

    [Theory]
    [InlineData(3, 2.26618007091)]
    [InlineData(4, 2.92885033122)]
    [InlineData(40, 4.50797150773)]
    public void Four_probes_on_a_circle(double diameter, double factor) => Near(factor, FourPointProbe.Circle(diameter));

    [Theory]
    [InlineData(1, 3, 2.45617298432)]
    [InlineData(2, 1.5, 1.47874686946)]
    [InlineData(3, 1, 0.998813666775)]
    [InlineData(4, 10, 4.23564088797)]
    public void Four_probes_on_a_rectangle(double shape, double across, double factor) =>
        Near(factor, FourPointProbe.Rectangle(shape * across, across));

    [Theory]
    [InlineData(0.25, 0.1, 0.25217326363)]
    [InlineData(2, 0.5, 2.1498119838)]
    [InlineData(1, 1.3, 3.7383341271)]
    [InlineData(5, 1.3, 7.8159921117)]
    public void Two_terminal_resistance_of_a_Hall_plate(double shape, double hallAngle, double resistance) =>
        Near(resistance, new HallPlate(shape, hallAngle).Resistance, 1e-8);

    [Theory]
    [InlineData(0.1, 1.4, 0.3667438744)]
    [InlineData(1, 0.1, 0.6762804096)]
    [InlineData(1, 1.2, 0.840098054)]
    [InlineData(2.5, 0.45, 0.9702527669)]
    public void Geometry_factor_of_a_Hall_plate(double shape, double hallAngle, double factor)
    {
        Near(factor, new HallPlate(shape, hallAngle).GeometryFactor, 1e-9);
        Near(HallPlate.WeakFieldFactor(shape), new HallPlate(shape, 1e-3).GeometryFactor, 1e-6);
    }

    [Fact]
    public void Square_and_long_Hall_plates_have_closed_forms()
    {
        Near(1 / Math.Cos(1.2), new HallPlate(1, -1.2).Resistance, 1e-8);
        Near(5 + HallPlate.EndTerm(1.0), new HallPlate(5, 1.0).Resistance, 1e-7);
        Near(0.895401242769, HallPlate.EndTerm(1.0));
    }

    [Theory]
    [InlineData(0.1, 1, 0.117007125265)]
    [InlineData(0.7, 1, 1.42581734908)]
    [InlineData(0.9, 2, 1.26600744098)]
    [InlineData(0.9, 4, 1.03712446532)]
    public void Ring_with_a_saturating_law(double part, int sharpness, double voltage)
    {
        double current = 2 * Math.PI * part;
        Near(voltage, ConcentricRing.Voltage(1, 3, current, ConcentricRing.Saturating(1, 1, sharpness)));
        if (sharpness < 3)
        {
            Near(voltage, ConcentricRing.SaturatingVoltage(1, 3, current, 1, 1, sharpness));
        }
    }

    [Theory]
    [InlineData(1, 0.1, 1.0600740317)]
    [InlineData(10, 10, 1.53704371784)]
    [InlineData(2, -0.01, 2.2354481385)]
    public void Ring_with_a_cubic_law(double current, double c, double voltage)
    {
        Near(voltage, ConcentricRing.Voltage(1, 3, 2 * Math.PI * current, ConcentricRing.Cubic(1, c)));
        if (c > 0)
        {
            Near(voltage, ConcentricRing.CubicVoltage(1, 3, 2 * Math.PI * current, 1, c));
        }
    }

    [Theory]
    [InlineData(15, 0.049927937364, -0.0099869738358)]
    [InlineData(60, 0.022210615061, -0.018614333782)]
    public void Second_order_fields_of_a_strip(double degrees, double left, double along)
    {
        var strip = new UniformStrip(new(2, 1, 0.03, 0.05, 0.01, -0.04, 0.02, -0.02), RimChords.Radians(degrees));
        Near(left, strip.LeftRatio);
        Near(along, strip.AlongRatio);
        ((double a1, double l1), (double a2, double l2)) = (strip.Field(1e-3), strip.Field(-1e-3));
        Near(left, (l1 + l2) / 2 / Math.Pow((a1 - a2) / 2, 2), 1e-6);
        Near(along, (a1 + a2) / 2 / Math.Pow((a1 - a2) / 2, 2), 1e-6);
    }

    [Theory]
    [InlineData(90, 4, 3.93854515423, 0.0, 0.390085954072)]
    [InlineData(45, 2, 1.49737479567, -0.01247802171, 0.0687054550544)]
    public void Fields_of_a_strip_at_finite_drive(double degrees, double density, double odd, double even, double leftEven)
    {
        var strip = new UniformStrip(new(2, 1, 0.03, 0.05, D26: -0.02), RimChords.Radians(degrees));
        ((double a1, double l1), (double a2, double l2)) = (strip.Field(density), strip.Field(-density));
        Near(odd, (a1 - a2) / 2);
        Assert.Equal(even, (a1 + a2) / 2, 1e-10);
        Near(leftEven, (l1 + l2) / 2);
    }

    [Theory]
    [InlineData(10, 0.723307936, 0.171072912, 0.233915814)]
    [InlineData(20, 0.605270707, 0.087990246, 0.198816607)]
    [InlineData(45, 0.374316563, 0.007063319, 0.044143219)]
    public void Second_order_transverse_voltage_of_a_disc(double half, double c21, double c22, double c16)
    {
        var disc = new DiscSecondOrder(half);
        Assert.Equal(c21, disc.C21, 2e-6);
        Assert.Equal(c22, disc.C22, 2e-6);
        Assert.Equal(c16, disc.C16, 2e-6);
    }

    [Theory]
    [InlineData(100, 1e-10, 1e-6, 1e-5, 13.130352855, 8.5091812824)]
    [InlineData(1000, 1e-10, 1e-6, 1e-6, 317.36301042, 26.819403127)]
    public void Transfer_length_of_a_pad(double sheet, double contact, double length, double width, double front, double end)
    {
        var pad = new TransferLength(sheet, contact, length, width);
        Near(front, pad.Front);
        Near(end, pad.End);
    }
}
