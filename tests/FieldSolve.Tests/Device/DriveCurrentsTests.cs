using FieldSolve.Device;

namespace FieldSolve.Tests.DeviceTests;

public class DriveCurrentsTests
{
    [Theory]
    [InlineData(-5e-5, 5e-5, 5, 1, -2.5e-5)]
    [InlineData(0, 2e-4, 11, 3, 6e-5)]
    [InlineData(0, 1e-3, 4, 1, 0.000333333333333333)]
    [InlineData(1e-20, 3e-20, 3, 1, 2e-20)]
    public void Currents_carry_no_needless_digits(double from, double to, int steps, int index, double expected)
    {
        IReadOnlyList<double> currents = new DriveSpec(from, to, steps, false, [], 0).Currents;
        Assert.Equal(steps, currents.Count);
        Assert.Equal(from, currents[0]);
        Assert.Equal(to, currents[^1]);
        Assert.Equal(expected, currents[index], 1e-15 * Math.Abs(expected));
    }

    [Fact]
    public void A_round_step_is_a_round_number() => Assert.Equal(-2.5e-5, new DriveSpec(-5e-5, 5e-5, 5, false, [], 0).Currents[1]);
}
