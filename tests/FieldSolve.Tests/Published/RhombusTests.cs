using System.Globalization;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Tests.AccuracyTests;
using Xunit.Abstractions;

namespace FieldSolve.Tests.PublishedTests;

/// <summary>
/// Bars with full-end contacts and a crystal axis askew that become a rhombus in the plane where the sheet is isotropic (L. J. van der Pauw, Philips Res. Rep. 16, 187 (1961)). A
/// quadrilateral that is symmetric about a diagonal has modulus 1, since mirroring it swaps contacts and free edges (P. Henrici, Applied and Computational Complex Analysis III (1986),
/// section 16.11, from memory): the resistance is that of one square, 1/sqrt(ab), at any ratio a/b. Its corners are singular though the bar's own are right angles.
/// </summary>
public class RhombusTests(ITestOutputHelper output)
{
    private const double W = 1e-5, Sheet = 1e3;

    [Theory]
    [InlineData(3, 1, 1e-4)]
    [InlineData(5, 1.5, 1e-4)]
    [InlineData(10, 1, 1e-6)]
    [InlineData(30, 1, 1e-4)]
    [InlineData(100, 1.5, 1e-4)]
    public void The_resistance_is_that_of_a_square(double ratio, double length, double wanted)
    {
        double a = Math.Sqrt(ratio) / Sheet, b = 1 / Math.Sqrt(ratio) / Sheet;

        // Both sides are of one length there: L² (c²/a + s²/b) = W² (s²/a + c²/b), with W = 1.
        double l2 = length * length, c2 = ((1 / a) - (l2 / b)) / ((1 + l2) * ((1 / a) - (1 / b)));
        double axis = Math.Acos(Math.Sqrt(c2)) * 180 / Math.PI;
        DriveResult r = TestDrive.Run(DeviceText.Bar(length * W, W, DeviceText.Ohmic(a, b, 0, axis)).Whole("w", "end", "left").Whole("e", "end", "right")
            .Wiring("x", "w", "e", "w e").Drive(1e-3).Wanted(wanted));
        Reading source = r.Rows[^1].Readings.Single(p => p.Pair == ReadingPlan.Source);
        output.WriteLine(string.Create(CultureInfo.InvariantCulture, $"{source.Value:R} V +- {source.Error:E2}: {Math.Abs(source.Value - 1) / source.Error:F2}"));
        Assert.InRange(Math.Abs(source.Value - 1), 0, source.Error);
        Assert.InRange(source.Error, 0, 1.01 * wanted);
    }
}
