using FieldSolve.Laws;
using FieldSolve.Turning;

namespace FieldSolve.Tests.TurningTests;

/// <summary>The algebra behind the fits.</summary>
public class FitTests
{
    // The law itself is the check: the field that the two readings mean, put into K = sigma E with the Hall part, is the current again (README, signs and law "ohmic").
    [Theory]
    [InlineData(0)]
    [InlineData(30)]
    [InlineData(135)]
    public void Strip_formula_gives_the_field_whose_current_is_the_current(double degrees)
    {
        const double A = 2e-3, B = 1e-3, Hall = 0.5e-3, Length = 3e-6, Width = 0.7e-6;
        (double s, double c) = Math.SinCos(degrees * Math.PI / 180);
        var strip = new StripFormula(new(A, B, 0, Hall), Length, Width);

        // Per ampere, in the crystal frame: along the current, and to its left, where the first across probe lies.
        double along = strip.Along(degrees * Math.PI / 180) / Length, left = -strip.Across(degrees * Math.PI / 180) / Width;
        double ea = (along * c) - (left * s), eb = (along * s) + (left * c);
        Assert.Equal(c / Width, (A * ea) + (Hall * eb), 1e-12 / Width);
        Assert.Equal(s / Width, (B * eb) - (Hall * ea), 1e-12 / Width);
    }

    // Second-order strip of section "uniform strip, fixed current": rho_1 = 1/2, rho_2 = 1, d11 = 0.03, d12 = 0.05, d16 = 0.01, d21 = -0.04, d22 = 0.02, d26 = -0.02; E_across2 / E_along²
    // and E_along2 / E_along², each found outside this project by solving the law's two equations at +-1e-5 of current and taking the even part.
    [Theory]
    [InlineData(0, 0.04, -0.015)]
    [InlineData(15, 0.049927937364, -0.0099869738358)]
    [InlineData(45, 0.027498597046, -0.014927809825)]
    [InlineData(60, 0.022210615061, -0.018614333782)]
    [InlineData(90, 0.025, -0.02)]
    public void Strip_formula_gives_the_second_order_fields(double degrees, double across, double along)
    {
        double[] d = [0.03, 0.05, 0.01, -0.04, 0.02, -0.02];
        var strip = new StripFormula(new(2, 1, 0, 0), 3, 0.7);
        double angle = degrees * Math.PI / 180;
        double field = strip.Along(angle) / 3;          // E_along at I = 1
        double evenAcross = strip.Even(angle, false).Zip(d, (a, b) => a * b).Sum(), evenAlong = strip.Even(angle, true).Zip(d, (a, b) => a * b).Sum();

        // V(+90 side) - V(-90 side) = -E_across W; V_along = E_along L.
        Assert.Equal(across, -evenAcross / 0.7 / (field * field), 1e-11);
        Assert.Equal(along, evenAlong / 3 / (field * field), 1e-11);
    }

    [Theory]
    [InlineData(20, 20, 4)]
    [InlineData(-130, 50, 4)]
    [InlineData(100, 10, 0.25)]
    public void The_label_a_goes_to_the_axis_nearest_to_the_files(double near, double at, double ratio)
    {
        // Conductances 4 along 50 (or 20, or 100) degrees and 1 across it.
        double good = ratio > 1 ? at : at + 90;
        Tensor2 tensor = new Tensor2(4, 0.3, -0.3, 1).ToLab(good * Math.PI / 180);
        PrincipalSheet sheet = PrincipalSheet.Of(tensor, near * Math.PI / 180);
        double axis = sheet.Axis * 180 / Math.PI;
        Assert.InRange(Math.Abs(axis - near), 0, 45 + 1e-9);
        Assert.Equal(0, Math.Abs(Math.IEEERemainder(axis - good, 90)), 1e-9);
        Assert.Equal(0.3, sheet.Hall, 1e-12);
        Tensor2 back = new Tensor2(sheet.A, sheet.Hall, -sheet.Hall, sheet.B).ToLab(sheet.Axis);
        Assert.Equal(tensor.Aa, back.Aa, 1e-12);
        Assert.Equal(tensor.Ab, back.Ab, 1e-12);
        Assert.Equal(tensor.Bb, back.Bb, 1e-12);
    }

    [Fact]
    public void Second_order_elements_are_read_off_any_law()
    {
        var written = new SecondOrder(1e-10, -4e-10, 3e-10, 0, 2e-10, -5e-11);
        Assert.Equal(written, LawSecondOrder.Of(new QuadraticLaw(4e-3, 1e-3, 2e-4, written, 4e5)));
        Assert.Equal(default, LawSecondOrder.Of(new OhmicLaw(1e-3, 2e-3)));
        Assert.Equal(default, LawSecondOrder.Of(new SaturatingLaw(1e-3, 1e-3, 0, 1e5, 1e5, 2)));
    }

    [Fact]
    public void Least_squares_says_what_is_not_determined()
    {
        // Two unknowns that enter only by their sum.
        double[][] rows = [[1, 1], [2, 2], [3, 3]];
        LeastSquares fit = LeastSquares.Solve(rows, [2, 4, 6], [0, 0, 0])!;
        Assert.False(fit.IsFull);
        Assert.Equal(1, fit.Rank);
        Assert.Equal(2, fit.Value.Sum(), 1e-12);

        // A known line with a known misfit: y = 1 + 2 x, off by +-0.1.
        LeastSquares line = LeastSquares.Solve([[1, 0], [1, 1], [1, 2], [1, 3]], [1.1, 2.9, 4.9, 7.1], [0, 0, 0, 0])!;
        Assert.Equal(1, line.Value[0], 1e-12);
        Assert.Equal(2, line.Value[1], 1e-12);
        Assert.Equal(0.1, line.Misfit, 1e-12);

        // Standard error of the slope: sqrt(0.04 / (4 - 2) / 5).
        Assert.Equal(Math.Sqrt(0.04 / 2 / 5), line.ErrorOf(1), 1e-12);
    }

    [Theory]
    [InlineData(-30, 330)]
    [InlineData(360, 0)]
    [InlineData(719.9999999999, 0)]
    [InlineData(45.5, 45.5)]
    public void Angles_wrap(double degrees, double wrapped) => Assert.Equal(wrapped, Degrees.Wrapped(degrees));
}
