using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;
using FieldSolve.Tests.SensitivityTests;

namespace FieldSolve.Tests.ToleranceTests;

/// <summary>Budgets against finite differences of whole runs on meshes of their own, and what symmetry says must be zero.</summary>
public class BudgetTests
{
    private const string Flake = ContactedBar.Sheet + """
        [law]
        kind = "quadratic"
        axis = "20 deg"
        a = "3 mS"
        b = "1 mS"
        d12 = "1e-9 A m/V^2"
        d21 = "1e-9 A m/V^2"
        field_limit = "200 kV/m"

        """ + ContactedBar.Ends + """
        resistivity = "1e-7 ohm cm^2"
        [[contact]]
        name = "p"
        pad = [["-1 um", "1.5 um"], ["0.5 um", "1.7 um"], ["0.5 um", "4 um"], ["-1 um", "4 um"]]
        resistivity = "2e-7 ohm cm^2"
        [[contact]]
        name = "q"
        edge = { from = ["-1 um", "-3 um"], to = ["0.5 um", "-3 um"] }
        resistance = "100 ohm um"

        """ + ContactedBar.Wiring + """
        [drive]
        current = { from = "200 uA", to = "200 uA", steps = 1 }
        both_signs = true
        [mesh]
        error = 5e-4
        even_error = 1e-2
        [tolerance]
        growth = "20 nm"
        [tolerance.contacts]
        position = "20 nm"
        x = "20 nm"
        rotation = "1 deg"
        growth = "10 nm"
        resistance = "20 ohm um"
        [[tolerance.layer]]
        name = "gold"
        contacts = ["p", "q"]
        x = "20 nm"
        """;

    [Fact]
    public void Derivatives_agree_with_whole_runs_on_either_side()
    {
        SheetDevice device = ToleranceDevices.Read(Flake);
        ToleranceResult r = ToleranceDevices.Budget(device);
        (string Cause, string Target, double Step)[] cases =
        [
            ("growth", "", 0.1e-6), ("position", "q", 0.1e-6), ("rotation", "d", 0.05), ("layer_x", "gold", 0.1e-6),
        ];
        foreach ((string kind, string target, double step) in cases)
        {
            SheetCause cause = device.Tolerance!.Causes.Single(c => c.Kind.Key == kind && c.Target.Name == target);
            CurveRow plus = Row(cause, step), minus = Row(cause, -step);
            double sharpest = double.PositiveInfinity;
            foreach ((string pair, ReadingPart part) in new[] { ("along", ReadingPart.Odd), ("across", ReadingPart.Odd), ("across", ReadingPart.Even) })
            {
                double Value(CurveRow row) => part == ReadingPart.Odd ? row.Of(pair)!.Odd!.Value : row.Of(pair)!.Even!.Value;
                double Error(CurveRow row) => part == ReadingPart.Odd ? row.Of(pair)!.Error : row.Of(pair)!.EvenError!.Value;
                double difference = (Value(plus) - Value(minus)) / (2 * step), slope = r.Of(pair, part, kind, target).Slope;

                // The numerical errors of both runs, and the third derivative: steps are a few per cent of the lengths they change.
                double allowed = ((Error(plus) + Error(minus)) / (2 * step)) + (0.02 * Math.Abs(difference));
                Assert.True(Math.Abs(slope - difference) <= allowed, $"{kind} of {target}, {pair} {part}: {slope} against {difference} +- {allowed}");
                sharpest = Math.Min(sharpest, allowed / Math.Abs(difference));
            }

            Assert.True(sharpest < 0.05, $"{kind} of {target}: the runs are too coarse to test anything ({sharpest})");
        }

        CurveRow Row(SheetCause cause, double by) =>
            DriveRun.Execute(cause.Applied(device, by), new DriveOptions { Maps = MapChoice.None, ForPictures = false }, null, default).Rows[0];
    }

    [Fact]
    public void Symmetric_causes_leave_zeros_and_the_second_order_steps_in()
    {
        // Current along the crystal's mirror line in a long bar: the mirror allows d11, d12 and d26 only. Nothing symmetric makes an across voltage, and
        // along does not know the sign of the axis: second order there is the strip's, rho = rho_a cos² + rho_b sin² - (half the anisotropy's
        // transverse part, which the full ends no longer feel eight widths away).
        ToleranceResult r = ToleranceDevices.Budget(ToleranceDevices.Read(
            DeviceText.Bar(24e-6, 3e-6, DeviceText.Law("quadratic", 2e-3, 1e-3, 0, ("d11", 1e-9, "A m/V^2"), ("d12", 2e-9, "A m/V^2"), ("field_limit", 300e3, "V/m")))
                .Whole("in", "end", "left").Whole("out", "end", "right")
                .Tip("p", -1e-6, 1.5e-6).Tip("q", 1e-6, 1.5e-6).Tip("n", 0, 1.5e-6).Tip("m", 0, -1.5e-6)
                .Wiring("w", "in", "out", "p q", "n m").Drive(100e-6),
            "axis = \"1 deg\"\na = \"10 uS\"\nd12 = \"1e-10 A m/V^2\"\nd21 = \"1e-10 A m/V^2\"\ngrowth = \"10 nm\""));
        double along = r.Statistics.Single(s => s.Quantity is { Pair: "along", Part: ReadingPart.Odd }).Design;
        foreach (string cause in new[] { "a", "d12", "growth" })
        {
            Assert.True(Math.Abs(r.Of("across", ReadingPart.Odd, cause).Contribution) < 1e-7 * along, cause);
            Assert.True(Math.Abs(r.Of("across", ReadingPart.Even, cause).Contribution) < 1e-7 * along, cause);
        }

        // What breaks the mirror shows in first order: a turned crystal in the odd part, d21 in the even one.
        Assert.Equal(1, r.Of("across", ReadingPart.Odd, "axis").Order);
        Assert.Equal(1, r.Of("across", ReadingPart.Even, "d21").Order);
        double odd = r.Of("across", ReadingPart.Odd, "axis").Slope, even = r.Of("across", ReadingPart.Even, "d21").Slope;

        // Uniform strip: E_y = (rho_b - rho_a) K sin cos for a small angle, and E_y = -rho_b d21 E_x² (with the mirror's sign of y).
        double k = 100e-6 / 3e-6, ex = k / 2e-3;
        Assert.Equal(3e-6 * (1000 - 500) * k, Math.Abs(odd), 2e-3 * Math.Abs(odd));
        Assert.Equal(3e-6 * 1000 * ex * ex, Math.Abs(even), 0.02 * Math.Abs(even));

        BudgetEntry second = r.Of("along", ReadingPart.Odd, "axis");
        Assert.Equal(2, second.Order);
        double strip = 2 * (1000 - 500) * k * 2e-6;
        Assert.Equal(strip, second.Curvature!.Value, 0.02 * strip);
        Assert.Equal(second.Curvature.Value * Math.Pow(Math.PI / 180, 2) / 2, second.Contribution, 1e-9 * second.Contribution);
    }
}
