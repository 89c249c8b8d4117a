using FieldSolve.Readings;

namespace FieldSolve.Tests.FitTests;

/// <summary>Sheet resistance of two four-terminal resistances.</summary>
public class VanDerPauwFormulaTests
{
    // The f factor of ASTM F76: cosh[((Q-1)/(Q+1)) ln2/f] = exp(ln2/f)/2, and Rs = (pi/ln2)(R_A + R_B) f/2 (L. J. van der Pauw, Philips Res. Rep. 13, 1 (1958)).
    // Values of Rs for R_A = Q, R_B = 1 by multi-precision root finding of the f relation, not of the theorem that the code solves.
    [Theory]
    [InlineData(1, 4.53236014183)]
    [InlineData(1.5, 5.58605513745)]
    [InlineData(2, 6.52850260527)]
    [InlineData(5, 11.1721102749)]
    [InlineData(10, 17.4311262605)]
    [InlineData(100, 92.4346510544)]
    [InlineData(1000, 598.192629441)]
    public void Agrees_with_the_f_factor(double ratio, double expected)
    {
        Assert.Equal(expected, VanDerPauw.SheetResistance(ratio, 1), 1e-9 * expected);
        Assert.Equal(expected, VanDerPauw.SheetResistance(1, ratio), 1e-9 * expected);
    }

    [Theory]
    [InlineData(0, 1)]
    [InlineData(1, -1)]
    [InlineData(double.NaN, 1)]
    public void Refuses_what_is_no_resistance(double first, double second) =>
        Assert.Throws<ArgumentOutOfRangeException>(() => VanDerPauw.SheetResistance(first, second));
}
