using FieldSolve.Pictures;

namespace FieldSolve.Tests.PicturesTests;

public class NumberTextTests
{
    [Theory]
    [InlineData(4e-6, "m", "µm")]
    [InlineData(999e-9, "m", "nm")]
    [InlineData(1e-6, "m", "µm")]
    [InlineData(0.0461, "V", "mV")]
    [InlineData(-12, "V", "V")]
    [InlineData(2.5e5, "V/m", "kV/m")]
    [InlineData(0, "A", "A")]
    [InlineData(double.NaN, "A", "A")]
    [InlineData(1e-30, "A", "aA")]
    public void Prefixes_suit_the_largest_value(double largest, string unit, string expected)
    {
        SiScale scale = SiScale.For(largest, unit);
        Assert.Equal(expected, scale.Unit);
        if (Math.Abs(largest) is > 1e-18 and < 1e15)
        {
            Assert.InRange(Math.Abs(largest) * scale.Factor, 0.999999, 1000);
        }
    }

    [Theory]
    [InlineData(186.4, 2, "190")]
    [InlineData(0.00012345, 3, "0.000123")]
    [InlineData(-4.2e7, 2, "−4.2·10⁷")]
    [InlineData(9.9e-13, 2, "9.9·10⁻¹³")]
    public void Numbers_are_written_without_computer_powers(double value, int digits, string expected) =>
        Assert.Equal(expected, SiScale.Number(value, digits));

    [Theory]
    [InlineData(2.1e-3, "mV²", 1e6)]
    [InlineData(3e-8, "µV²", 1e12)]
    [InlineData(2.5, "V²", 1)]
    public void A_squared_unit_squares_its_prefix(double largest, string unit, double factor)
    {
        SiScale scale = SiScale.For(largest, "V", power: 2);
        Assert.Equal(unit, scale.Unit);
        Assert.Equal(factor, scale.Factor, 1e-9 * factor);
    }

    [Theory]
    [InlineData(0.046051234, 4.6e-6, "46.0512 ± 0.0046 mV")]
    [InlineData(-1.5, 0.25, "−1.50 ± 0.25 V")]
    [InlineData(123.4, 700.0, "123 ± 700 V")]
    [InlineData(1e-9, 2e-7, "1 ± 200 nV")]
    [InlineData(0.5, 0.0, "500 mV")]
    [InlineData(0.5, double.NaN, "500 mV")]
    [InlineData(double.NaN, 1.0, "–")]
    public void Values_are_shown_at_the_digits_of_their_error(double value, double error, string expected) =>
        Assert.Equal(expected, ErrorText.Of(value, error, "V"));

    [Fact]
    public void A_value_that_rounds_to_zero_has_no_sign() => Assert.Equal("0.00 ± 0.12", ErrorText.In(new(1, "V"), -0.001, 0.12));

    [Theory]
    [InlineData(620, 22, 20)]
    [InlineData(1, 10, 0.1)]
    [InlineData(0.3, 10, 0.02)]
    [InlineData(0, 10, 1)]
    public void Steps_are_round(double range, int parts, double step) => Assert.Equal(step, Levels.Step(range, parts), 1e-12);

    [Fact]
    public void Levels_lie_strictly_inside() => Assert.Equal([-10, 0, 10], Levels.Between(-20, 20, 10));
}
