using FieldSolve.Cli.Output;

namespace FieldSolve.Tests.FilesTests;

/// <summary>Numbers of the terminal. Expected texts by hand: an error has two significant digits, its value ends at the same place
/// (common practice, no source: GUM 7.2.6 recommends at most two digits for an uncertainty, from memory).</summary>
public class EngineeringTests
{
    [Theory]
    [InlineData(0.03099315, 3.7e-7, "30.99315 mV +- 0.00037 mV")]
    [InlineData(-1.139256e-4, 3.4e-9, "-113.9256 µV +- 0.0034 µV")]
    [InlineData(1.21244e-6, 9e-10, "1.21244 µV +- 0.00090 µV")]
    [InlineData(2e-9, 4e-7, "0 nV +- 400 nV")]
    [InlineData(0, 4e-7, "0 nV +- 400 nV")]
    [InlineData(12.345e-3, 0, "12.345 mV")]
    [InlineData(-0.2e-9, 5e-6, "0.0 µV +- 5.0 µV")]
    public void A_value_ends_where_its_error_ends(double value, double error, string expected) =>
        Assert.Equal(expected, Engineering.Measured(value, error, "V"));

    [Theory]
    [InlineData(8.15e-10, 1.2e-11, "A m/V^2", "(8.15 +- 0.12)e-10 A m/V^2")]
    [InlineData(-0.0535627, 4.2e-5, "1/V", "-0.053563 +- 0.000042 1/V")]
    [InlineData(0.022468, 0.013178, "deg", "0.022 +- 0.013 deg")]
    [InlineData(1.02, 0, "", "1.02")]
    public void A_unit_without_prefix_shares_a_power_of_ten(double value, double error, string unit, string expected) =>
        Assert.Equal(expected, Engineering.MeasuredPlain(value, error, unit));

    [Theory]
    [InlineData(9.04e-10, 2, "900 pV")]
    [InlineData(9.97e-7, 2, "1 µV")]
    [InlineData(0.9999999, 5, "1 V")]
    [InlineData(238.545, 6, "238.545 V")]
    public void No_exponent_stands_before_a_unit(double value, int digits, string expected) =>
        Assert.Equal(expected, Engineering.Text(value, "V", digits));
}
