using FieldSolve.Device;

namespace FieldSolve.Tests.DeviceTests;

/// <summary>[fit] in a device file.</summary>
public class FitFileTests
{
    private static DeviceReading Read(string fit) => DeviceFile.Parse(DeviceTexts.Disc + "\n[fit]\n" + fit, "device.toml", "");

    [Fact]
    public void Numbers_bounds_and_priors()
    {
        DeviceReading r = Read("""
            numerical_share = 0.1
            a = { start = "3 mS", min = "1 mS", max = "9 mS", mean = "4 mS", sigma = "0.1 mS", interval = true }
            b = false
            axis = true
            [fit.contacts]
            position = { sigma = "50 nm" }
            resistance = true
            [[fit.contact]]
            name = "n"
            position = false
            """);
        Assert.Empty(r.Faults);
        FitSpec spec = r.Device!.Fit!;
        Assert.Equal(0.1, spec.NumericalShare);
        Assert.Equal(["a", "axis", "position of w", "position of e"], spec.Parameters.Select(p => p.Label).Order(Comparer<string>.Create((x, y) => Rank(x).CompareTo(Rank(y)))));
        FitParameter a = spec.Parameters.Single(p => p.Key == "a");
        Assert.Equal((3e-3, 1e-3, 9e-3, 4e-3, 1e-4, true), (a.Start, a.Least, a.Most, a.PriorMean, a.PriorSigma!.Value, a.Interval));
        Assert.NotEmpty(spec.Notes);

        static int Rank(string label) => Array.IndexOf(["a", "axis", "position of w", "position of e"], label);
    }

    [Theory]
    [InlineData("a = 3", "'a' is a number; write true to leave it free")]
    [InlineData("a = { mean = \"4 mS\" }", "'a' has a 'mean' but no 'sigma'; a prior needs both")]
    [InlineData("a = { sigma = \"0 mS\" }", "greater than zero")]
    [InlineData("a = { min = \"5 mS\", max = \"4 mS\" }", "'a': 'min' must be less than 'max'")]
    [InlineData("a = { start = \"-1 mS\" }", "'a':")]
    [InlineData("hall = { min = \"1 mS\", max = \"2 mS\" }", "'hall': the fit must start between 'min' and 'max'")]
    [InlineData("d11 = true", "'d11' is no parameter with a value of the law 'ohmic'")]
    [InlineData("numerical_share = 2", "'numerical_share'")]
    [InlineData("[[fit.contact]]\nname = \"q\"\nposition = true", "there is no contact 'q'")]
    [InlineData("[[fit.contact]]\nname = \"n\"\nresistance = true", "'resistance': contact 'n' is ideal")]
    [InlineData("[[fit.contact]]\nname = \"n\"\nposition = true\n[[fit.contact]]\nname = \"n\"\nwidth = true", "contact 'n' already has its [[fit.contact]]; write its numbers together")]
    public void Faults_say_what_would_be_right(string fit, string message) => Assert.Contains(message, Assert.Single(Read(fit).Faults).Message, StringComparison.Ordinal);
}
