using System.Numerics;

namespace FieldSolve.Tests.PublishedTests.References;

/// <summary>
/// Isotropic disc of unit radius and sheet resistance, opposite arc contacts (in at 180 degrees, out at 0), ideal probes at +90 and -90 degrees: the second-order voltage
/// V(+90) - V(-90) per element of a quadratic law in the frame of the current. By reciprocity it is minus the integral of E~ . K2(E, E) with E the
/// field of one ampere through the arcs and E~ that of one ampere fed at the probes. No printed table is known; derived here, both fields being closed forms.
/// </summary>
internal sealed class DiscSecondOrder
{
    private readonly double half;
    private readonly double field;  // E at the centre for one ampere
    private readonly double probe;  // E~ at the centre

    public DiscSecondOrder(double halfDegrees)
    {
        half = RimChords.Radians(halfDegrees);
        double c = Math.Cos(2 * half);
        field = 1 / Quadrature.Ends((l, r) => 1 / Math.Sqrt(Math.Pow(l - 1, 4) + (2 * Math.Pow(l - 1, 2) * c) + 1), 2);
        probe = 2 * Math.Cos(half) / Math.PI;
    }

    /// <summary>Coefficient of K_y = d21 E_x².</summary>
    public double C21 => Integrate((ex, _, _, ty) => ty * ex * ex);

    /// <summary>Coefficient of K_y = d22 E_y².</summary>
    public double C22 => Integrate((_, ey, _, ty) => ty * ey * ey);

    /// <summary>Coefficient of K_x = 2 d16 E_x E_y.</summary>
    public double C16 => Integrate((ex, ey, tx, _) => tx * 2 * ex * ey);

    // Both fields are mirror images in the four quadrants up to signs that cancel in these three products. In the first quadrant the singular points
    // (contact end, probe) are corners of two panels in polar coordinates.
    private double Integrate(Func<double, double, double, double, double> product)
    {
        double Panel(double from, double to) => Quadrature.Ends(
            (below, above) => Quadrature.Ends(
                (radius, depth) =>
                {
                    // 1 - zeta² exp(-2 i p) with zeta = (1 - depth) exp(i phi), from the small differences.
                    double phi = from + below;
                    Complex Near(double difference) => new(
                        (depth * (2 - depth)) + (2 * radius * radius * Math.Pow(Math.Sin(difference), 2)),
                        -radius * radius * Math.Sin(2 * difference));
                    double toContact = from == half ? below : -above, toProbe = from == half ? -above : phi - (Math.PI / 2);
                    Complex f = 1 / (Complex.Sqrt(Near(toContact)) * Complex.Sqrt(Near(phi + half)));
                    Complex z2 = Complex.FromPolarCoordinates(radius * radius, 2 * phi);
                    Complex e = field * f, t = probe * Complex.ImaginaryOne * (1 - z2) / Near(toProbe) * f;
                    return -4 * radius * product(e.Real, -e.Imaginary, t.Real, -t.Imaginary);
                },
                1, 1.0 / 16, 4.5),
            to - from, 1.0 / 16, 4.5);
        return Panel(0, half) + Panel(half, Math.PI / 2);
    }
}
