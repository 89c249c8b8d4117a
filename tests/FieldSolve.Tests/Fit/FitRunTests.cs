using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FitTests;

/// <summary>What a fit refuses, where it starts, and what it warns of.</summary>
public class FitRunTests
{
    private const double Degree = Math.PI / 180, A = 4e-3, B = 1e-3, Width = 6e-6, Apart = 4e-6, Current = 1e-4;

    private static DeviceText Strip(double axis) => DeviceText.Bar(30e-6, Width, DeviceText.Ohmic(A, B, 0, axis)).Whole("l", "end", "left").Whole("r", "end", "right")
        .Tip("p", -Apart / 2, Width / 2).Tip("q", Apart / 2, Width / 2).Tip("s", -Apart / 2, -Width / 2).Wiring("x", "l", "r", "p q", "p s").Drive(Current);

    // K = I/W along x and none across: E_x = K (cos²/a + sin²/b), E_y = K (1/a - 1/b) sin cos; V = E times what lies between the tips.
    private static string Table(double axis, double sigma)
    {
        (double s, double c) = Math.SinCos(axis * Degree);
        double k = Current / Width, along = k * ((c * c / A) + (s * s / B)) * Apart, across = -k * ((1 / A) - (1 / B)) * s * c * Width;
        return string.Create(CultureInfo.InvariantCulture, $"wiring,pair,current_A,value_V,sigma_V\nx,along,{Current:R},{along:R},{sigma:R}\nx,across,{Current:R},{across:R},{sigma:R}\n");
    }

    // By the strip two axes that differ in sign differ in the across voltage alone; a start on the wrong side of 0 or 90 degrees has a hill to climb.
    [Theory]
    [InlineData("axis = { start = \"85 deg\", min = \"0 deg\", max = \"90 deg\" }", 85, 22.5, 67.5)]
    [InlineData("axis = { start = \"-70 deg\" }", -70, -10, 50)]
    public void The_axis_is_begun_at_several_angles_and_the_best_is_gone_on_with(string free, double first, double second, double third)
    {
        SheetDevice device = FitDevices.Read(Strip(0), free);
        FitResult result = FitDevices.Fit(device, FitDevices.Table(device, Table(25, 2e-3)), new FitOptions { Starts = 3 });
        double[] begun = [.. new[] { first, second, third }.Take(result.Starts.Count)];
        Assert.All(begun.Zip(result.Starts), p => Assert.Equal(p.First, p.Second.Axis!.Value / Degree, 1e-9));
        FittedParameter axis = result.Of("axis");
        Assert.Equal(0, Math.IEEERemainder(axis.Value!.Value - (25 * Degree), Math.PI), 3 * axis.StandardError!.Value);
        Assert.True(axis.StandardError < 5 * Degree);

        // No further start is tried once one describes the data; the one that was taken is the best.
        Assert.True(result.Starts[^1].Objective <= result.Starts.Min(s => s.Objective) || result.Starts.Count == 3);
        Assert.True(result.AllOk, string.Join(' ', result.Warnings));
    }

    [Fact]
    public void One_start_is_the_one_of_the_file()
    {
        SheetDevice device = FitDevices.Read(Strip(20), "axis = true");
        FitStart only = Assert.Single(FitDevices.Fit(device, FitDevices.Table(device, Table(25, 2e-3)), new FitOptions { Starts = 1 }).Starts);
        Assert.Equal(20 * Degree, only.Axis!.Value, 1e-12);
        Assert.Null(only.Objective);
        SheetDevice fixedAxis = FitDevices.Read(Strip(25), "a = true");
        Assert.Null(Assert.Single(FitDevices.Fit(fixedAxis, FitDevices.Table(fixedAxis, Table(25, 2e-3)), new FitOptions { Starts = 4 }).Starts).Axis);
    }

    [Theory]
    [InlineData("", Current, "The file leaves nothing free; add a table [fit]")]
    [InlineData("a = true", 0, "All currents of the data are zero; there is nothing to fit.")]
    [InlineData("[[fit.contact]]\nname = \"t\"\nposition = { start = \"20 um\" }", Current, "The device cannot be built where the fit starts: ")]
    public void What_cannot_be_fitted_is_refused_in_words(string free, double current, string message)
    {
        SheetDevice device = FitDevices.Read(Strip(0).Stretch("t", 1e-6, 3e-6, -1e-6, 3e-6), free);
        string table = string.Create(CultureInfo.InvariantCulture, $"wiring,pair,current_A,value_V,sigma_V\nx,along,{current:R},1e-3,1e-6\n");
        Assert.StartsWith(message, Assert.Throws<FitException>(() => FitDevices.Fit(device, FitDevices.Table(device, table))).Message, StringComparison.Ordinal);
    }

    private static readonly FitQuality Good = new(10, 10, 0.4, 0.5, 2, 0.4, 7);

    private static IReadOnlyList<string> Warnings(FitQuality? quality = null, bool converged = true, double share = 0.1, bool robust = false, bool atBound = false, double numerical = 0, FitDirection? open = null)
    {
        SheetDevice device = FitDevices.Read(Strip(0), "a = true\n[fit.contacts]\nposition = true");
        FittedParameter a = new(device.Fit!.Parameters.Single(), A, 1e-5, null, atBound) { Ended = A, NumericalError = numerical };
        return FitWarnings.Of(device, [a], open is null ? [] : [open], quality ?? Good, share, new([A], [], new double[0, 0], 0, [], 40, converged), new FitOptions { Robust = robust });
    }

    [Fact]
    public void Every_doubt_about_a_fit_has_its_sentence()
    {
        // Notes of the file come first: contacts that end at corners cannot move.
        string[] notes = [.. Warnings()];
        Assert.Equal(2, notes.Length);
        Assert.StartsWith("'position' of contact 'l' is not free: ", notes[0], StringComparison.Ordinal);
        string One(IReadOnlyList<string> all) => Assert.Single(all.Skip(2));
        Assert.Equal("The fit did not come to rest after 40 steps; the numbers are where it stopped.", One(Warnings(converged: false)));
        Assert.StartsWith("The numerical error of the model reaches 30 % of a datum's standard deviation; 20 % was wanted", One(Warnings(share: 0.3)), StringComparison.Ordinal);
        Assert.Equal("b is not determined by these data.", One(Warnings(open: new(0.1, [1], false, "b is not determined by these data"))));
        Assert.Empty(Warnings(open: new(10, [1], true, "")).Skip(2));
        Assert.StartsWith("The model's numerical errors together may move 'a' by up to 2.5 standard errors", One(Warnings(numerical: 2.5e-5)), StringComparison.Ordinal);
        Assert.Equal("'a' ended at a bound; its standard error says little.", One(Warnings(atBound: true)));

        FitQuality poor = Good with { ChiSquared = 50, Probability = 1e-5 };
        Assert.Equal("Chi squared is 50 for 10 degrees of freedom: the model misses something, or the sigmas are too small; --robust counts outliers less.", One(Warnings(poor)));
        Assert.Equal("Chi squared is 50 for 10 degrees of freedom: the model misses something, or the sigmas are too small.", One(Warnings(poor, robust: true)));
        Assert.Equal("Chi squared is 0.1 for 10 degrees of freedom: the sigmas look too large.", One(Warnings(Good with { ChiSquared = 0.1, Probability = 0.9999 })));
        Assert.Empty(Warnings(Good with { Probability = null, RunsZ = null, Freedom = 0 }).Skip(2));
        Assert.Equal("Residuals keep their sign along the currents (4.2 standard deviations too few changes): the model misses a trend.", One(Warnings(Good with { RunsZ = -4.2 })));
        Assert.Equal("Line 7 of the data is 6.5 standard deviations off: an outlier? --robust counts it less.", One(Warnings(Good with { Largest = -6.5, LargestProbability = 1e-8 })));
        Assert.Equal("Line 7 of the data is 6.5 standard deviations off: an outlier?", One(Warnings(Good with { Largest = 6.5, LargestProbability = 1e-8 }, robust: true)));
    }
}
