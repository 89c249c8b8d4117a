using FieldSolve.Quantities;

namespace FieldSolve.Tests.QuantitiesTests;

public class QuantityTests
{
    // Compared bit for bit: the decimal text is scaled before it is rounded.
    [Theory]
    [InlineData("10 um", 1e-5)]
    [InlineData("8 um", 8e-6)]
    [InlineData("0.7 um", 0.7e-6)]
    [InlineData("10 \u00B5m", 1e-5)]
    [InlineData("10 \u03BCm", 1e-5)]
    [InlineData("-8 um", -8e-6)]
    [InlineData("\u22128 um", -8e-6)]
    [InlineData("+3.5nm", 3.5e-9)]
    [InlineData("1.5 cm", 0.015)]
    [InlineData("3 mm", 3e-3)]
    [InlineData("2 m", 2.0)]
    [InlineData("5 fm", 5e-15)]
    [InlineData("5 pm", 5e-12)]
    [InlineData("1 km", 1000.0)]
    [InlineData(".5 um", 5e-7)]
    [InlineData("5. um", 5e-6)]
    [InlineData("1e3 nm", 1e-6)]
    [InlineData("1E-3 mm", 1e-6)]
    public void Lengths(string text, double metres) => AssertQuantity(text, metres, Dimension.Length);

    public static TheoryData<string, double, Dimension> Units => new()
    {
        { "1.5 mA", 1.5e-3, Dimension.Current },
        { "2 eV", 2 * 1.602176634e-19, Dimension.Energy }, // exact, BIPM, The International System of Units, 2019
        { "25 meV", 25e-3 * 1.602176634e-19, Dimension.Energy },
        { "3 J", 3.0, Dimension.Energy },
        { "4.2 K", 4.2, Dimension.Temperature },
        { "50 mK", 0.05, Dimension.Temperature },
        { "5e5 m/s", 5e5, Dimension.Velocity },
        { "0.5 1/nm", 5e8, Dimension.WaveNumber },
        { "0.5 / nm", 5e8, Dimension.WaveNumber },
        { "500 uA", 500e-6, Dimension.Current },
        { "120 ohm um", 120e-6, Dimension.LineResistance },
        { "120 \u03A9\u00B7\u00B5m", 120e-6, Dimension.LineResistance },
        { "120 \u2126*um", 120e-6, Dimension.LineResistance },
        { "1 kohm um", 1e-3, Dimension.LineResistance },
        { "1e-7 ohm cm^2", 1e-11, Dimension.ContactResistivity },
        { "1e-7 ohm cm\u00B2", 1e-11, Dimension.ContactResistivity },
        { "4 mS", 4e-3, Dimension.SheetConductance },
        { "4 mS/sq", 4e-3, Dimension.SheetConductance },
        { "4 mS/\u25A1", 4e-3, Dimension.SheetConductance },
        { "2e-9 A m/V^2", 2e-9, Dimension.QuadraticConductance },
        { "2 nA m / V\u00B2", 2e-9, Dimension.QuadraticConductance },
        { "2e-9 m A V^-2", 2e-9, Dimension.QuadraticConductance },
        { "3 A um/mV^2", 3.0, Dimension.QuadraticConductance },
        { "1e-15 A m^2/V^3", 1e-15, Dimension.CubicConductance },
        { "10 kV/m", 1e4, Dimension.Field },
        { "17.77 Hz", 17.77, Dimension.Frequency },
        { "2 MHz", 2e6, Dimension.Frequency },
        { "12 nF/cm^2", 12e-5, Dimension.CapacitancePerArea },
        { "1000 A/m", 1000.0, Dimension.SheetCurrent },
        { "1 mW/um^2", 1e9, Dimension.PowerDensity },
        { "3 uV", 3e-6, Dimension.Voltage },
        { "2 W/A", 2.0, Dimension.Voltage },
        { "2 V/A", 2.0, Dimension.Resistance },
        { "50 mT", 0.05, Dimension.FluxDensity },
        { "3 ms", 3e-3, Dimension.Time },
        { "180 deg", Math.PI, Dimension.Angle },
        { "90 \u00B0", Math.PI / 2, Dimension.Angle },
        { "20 mrad", 0.02, Dimension.Angle },
        { "2 rad", 2.0, Dimension.Angle },
        { "42", 42, Dimension.None },
    };

    [Theory]
    [MemberData(nameof(Units))]
    public void Units_and_their_dimensions(string text, double si, Dimension dimension) => AssertQuantity(text, si, dimension);

    [Theory]
    [InlineData("", 1, "number is missing")]
    [InlineData("um", 1, "number must come first")]
    [InlineData("1,5 um", 2, "decimal point")]
    [InlineData("1,000 um", 2, "decimal point")]
    [InlineData("nan um", 1, "finite")]
    [InlineData("inf m", 1, "finite")]
    [InlineData("-inf m", 1, "finite")]
    [InlineData("1e999 m", 1, "too large")]
    [InlineData("1e99999999999 m", 1, "too large")]
    [InlineData("1e-400 m", 1, "too small")]
    [InlineData("5 furlong", 3, "unknown unit 'furlong'")]
    [InlineData("5 UM", 3, "did you mean 'um'")]
    [InlineData("5 micron", 3, "did you mean 'um'")]
    [InlineData("5 khz", 3, "did you mean 'kHz'")]
    [InlineData("5 cA", 3, "unknown unit 'cA'")]
    [InlineData("5 um/", 5, "missing at the end")]
    [InlineData("5 m^", 4, "small integer")]
    [InlineData("5 m^1.5", 6, "not expected")]
    [InlineData("5 m^12", 4, "small integer")]
    [InlineData("5 m^0", 6, "small integer")]
    [InlineData("5 m2", 4, "'2' is not expected")]
    [InlineData("5 6 um", 3, "'6' is not expected")]
    [InlineData("2 1 m", 3, "'1' is not expected")]
    [InlineData("5 (um)", 3, "'(' is not expected")]
    [InlineData("5 A//m", 5, "'/' is not expected")]
    public void What_is_no_quantity(string text, int column, string fragment)
    {
        Assert.False(Quantity.TryParse(text, out double value, out _, out int at, out string? error));
        Assert.Equal(0, value);
        Assert.Contains(fragment, error, StringComparison.Ordinal);
        Assert.Equal(column, at);
    }

    [Fact]
    public void Every_example_of_a_dimension_has_that_dimension()
    {
        Dimension[] all =
        [
            Dimension.None, Dimension.Length, Dimension.Angle, Dimension.Current, Dimension.SheetConductance, Dimension.QuadraticConductance,
            Dimension.CubicConductance, Dimension.Field, Dimension.LineResistance, Dimension.ContactResistivity, Dimension.Frequency,
            Dimension.CapacitancePerArea, Dimension.SheetCurrent, Dimension.PowerDensity, Dimension.Voltage, Dimension.Resistance,
            Dimension.Power, Dimension.Time, Dimension.FluxDensity, Dimension.Capacitance,
        ];
        Assert.All(all, d =>
        {
            Assert.True(Quantity.TryParse(d.Example, out _, out Dimension got, out _, out _), d.Example);
            Assert.Equal(d, got);
            Assert.DoesNotContain("quantity in", d.Name, StringComparison.Ordinal);
        });
        Assert.Equal(all.Length, all.Distinct().Count());
    }

    [Fact]
    public void Names_take_their_article()
    {
        Assert.Equal("a length", Dimension.Length.NameWithArticle);
        Assert.Equal("an angle", Dimension.Angle.NameWithArticle);
        Assert.Equal("a quantity in kg^2 m", new Dimension(2, 1, 0, 0).NameWithArticle);
    }

    [Theory]
    [InlineData("um", 5, 5e-6)]
    [InlineData("um", 0.1, 1e-7)]
    [InlineData("nm", 1e-20, 1e-29)]
    [InlineData("mm", 1.5e21, 1.5e18)]
    public void A_unit_scales_a_number_as_if_they_stood_in_one_text(string text, double number, double si)
    {
        Assert.True(Unit.TryParse(text, out Unit unit, out string? error), error);
        Assert.Equal(si, unit.Of(number));
        Assert.Equal(Dimension.Length, unit.Dimension);
    }

    private static void AssertQuantity(string text, double si, Dimension dimension)
    {
        Assert.True(Quantity.TryParse(text, out double value, out Dimension got, out int column, out string? error), error);
        Assert.Equal(si, value);
        Assert.Equal(dimension, got);
        Assert.Equal(0, column);
    }
}
