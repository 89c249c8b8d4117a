using MathNet.Numerics.RootFinding;

namespace FieldSolve.Readings;

/// <summary>Sheet resistance from four point contacts on the rim: L. J. van der Pauw, Philips Res. Rep. 13, 1 (1958).</summary>
public static class VanDerPauw
{
    /// <summary>
    /// The root of exp(-pi R1/Rs) + exp(-pi R2/Rs) = 1, ohm. For an anisotropic sheet it is the geometric mean of the principal values (W. L. V. Price, J. Phys. D 5, 1127
    /// (1972)).
    /// </summary>
    /// <param name="first">V/I with the current through two neighbours and the voltage between the two others, ohm, greater than zero.</param>
    /// <param name="second">The same, one contact further round, ohm, greater than zero.</param>
    /// <exception cref="ArgumentOutOfRangeException">A resistance is not finite and greater than zero.</exception>
    public static double SheetResistance(double first, double second)
    {
        if (!(first > 0 && double.IsFinite(first)))
        {
            throw new ArgumentOutOfRangeException(nameof(first), first, "The resistance must be finite and greater than zero.");
        }

        if (!(second > 0 && double.IsFinite(second)))
        {
            throw new ArgumentOutOfRangeException(nameof(second), second, "The resistance must be finite and greater than zero.");
        }

        // Of resistances over their sum, x = (R1 + R2)/Rs: ln 4/pi for equal ones, more for others.
        double sum = first + second, p = first / sum, q = second / sum, most = 0.5;
        double F(double y) => Math.Exp(-Math.PI * p * y) + Math.Exp(-Math.PI * q * y) - 1;
        while (F(most) > 0)
        {
            most *= 2;
        }

        return sum / Brent.FindRoot(F, most / 4, most, 1e-15, 200);
    }
}
