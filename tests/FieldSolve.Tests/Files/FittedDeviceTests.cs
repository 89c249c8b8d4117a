using System.Text.Json.Nodes;
using FieldSolve.Device;
using FieldSolve.Files;
using FieldSolve.Runs;
using FieldSolve.Tests.EndToEndTests;
using FieldSolve.Tests.FitTests;
using FieldSolve.Tests.PublishedTests;

namespace FieldSolve.Tests.FilesTests;

/// <summary>What a fit leaves for others to read: the device file with its numbers, and fit.json. One fit, with numbers put in its place.</summary>
public sealed class FittedDeviceTests : IDisposable
{
    private const string Rest = """
        [[contact]]
        name = "l"
        edge = { end = "left" }
        resistance = "100 ohm um"
        [[contact]]
        name = "r"
        edge = { end = "right" }
        [[point]]
        name = "p"
        at = ["-2 um", "0 um"]
        [[point]]
        name = "q"
        at = ["2 um", "0 um"]
        [[wiring]]
        name = "x"
        source = "l"
        drain = "r"
        along = ["p", "q"]
        """;

    private const string Sheet = "[sheet]\nbar = { length = \"20 um\", width = \"6 um\" }\n";
    private const string Law = "[law]   # guessed\nkind = \"saturating\"\n  a = \"1 mS\" # old\nb = \"2 mS\"\nfield_a = \"100 kV/m\"\nfield_b = \"100 kV/m\"\nsharpness = 2\n";

    private static readonly string[] Blank = ["value", "standard_error", "numerical_error", "interval_95", "prior_mean", "prior_sigma"];
    private static readonly FitResult Fit = Fitted();
    private readonly TempFolder folder = new("fitted");

    public void Dispose() => folder.Dispose();

    private static FitResult Fitted()
    {
        SheetDevice device = Read(Sheet + Law + Rest + "\n[fit]\na = true\nb = true\naxis = { sigma = \"5 deg\" }\nsharpness = true\n[[fit.contact]]\nname = \"l\"\nresistance = true\n");
        SheetDevice one = FitDevices.Read(DeviceText.Bar(20e-6, 6e-6, DeviceText.Ohmic(1e-3, 1e-3)).Whole("l", "end", "left").Whole("r", "end", "right").Tip("p", -2e-6, 0).Tip("q", 2e-6, 0).Wiring("x", "l", "r", "p q").Drive(1e-5), "a = true");
        FitResult result = FitDevices.Fit(one, FitDevices.Table(one, "wiring,pair,current_A,value_V,sigma_V\nx,along,1e-5,0.00667,1e-5\n"));
        Dictionary<string, double> values = new() { ["a"] = 3e-3, ["axis"] = 0.25, ["sharpness"] = 3, ["l.resistance"] = 2e-4 };
        FittedParameter[] parameters = [.. device.Fit!.Parameters.Select(p => values.TryGetValue(p.Key, out double v)
            ? new FittedParameter(p, v, 0.1 * v, p.Key == "a" ? (2e-3, null) : null, false) { Ended = v, NumericalError = 1e-6 }
            : new(p, null, null, null, false) { Ended = 1, NumericalError = 1e-6 })];
        return result with { Device = device, Parameters = parameters, Correlation = new double[5, 5], Covariance = new double[5, 5] };
    }

    private static SheetDevice Read(string text)
    {
        DeviceReading reading = DeviceFile.Parse(text, "test.toml", "");
        Assert.True(reading.Faults.Count == 0, string.Join('\n', reading.Faults));
        return reading.Device!;
    }

    private static double Of(string key) => Fit.Parameters.Single(p => p.Parameter.Key == key).Value!.Value;

    [Fact]
    public void Lines_of_the_law_carry_what_was_fitted_and_all_else_stays()
    {
        (string text, bool whole) = FittedDevice.Text(Fit, "\uFEFF" + Sheet + Law + Rest, folder.Path);
        Assert.True(whole);
        SheetDevice device = Read(text);
        Assert.Equal((Of("a"), 2e-3, Of("sharpness")), (Laws.LawSensitivity.Value(device.Law, "a"), Laws.LawSensitivity.Value(device.Law, "b"), Laws.LawSensitivity.Value(device.Law, "sharpness")));
        Assert.Equal(Of("axis"), device.Axis, 1e-14);

        // The axis had no line and got one behind the header; what the data do not tell keeps what the file says; a resistance is for the user to take over.
        Assert.Contains("[law]   # guessed\naxis = \"", text, StringComparison.Ordinal);
        Assert.Contains("sharpness = 3.0\n", text, StringComparison.Ordinal);
        Assert.Contains("\nb = \"2 mS\"\n", text, StringComparison.Ordinal);
        Assert.Contains("# b = not determined by the data\n", text, StringComparison.Ordinal);
        Assert.Contains("# l.resistance = 0.0002 +- 2E-05 ohm m, not applied below\n", text, StringComparison.Ordinal);
        Assert.Contains("# a = 0.003 +- 0.0003 S\n", text, StringComparison.Ordinal);
        Assert.Contains("# sharpness = 3 +- 0.3\n", text, StringComparison.Ordinal);
        Assert.EndsWith(Rest, text, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("law = { kind = \"saturating\", a = \"1 mS\", b = \"2 mS\", field_a = \"100 kV/m\", field_b = \"100 kV/m\" }\n")]
    [InlineData("law.kind = \"saturating\"\nlaw.a = \"1 mS\"\nlaw.b = \"2 mS\"\nlaw.field_a = \"100 kV/m\"\nlaw.field_b = \"100 kV/m\"\n")]
    public void A_law_without_lines_of_its_own_is_written_alone(string law)
    {
        (string text, bool whole) = FittedDevice.Text(Fit, law + Sheet + Rest, folder.Path);
        Assert.False(whole);
        Assert.DoesNotContain("[sheet]", text, StringComparison.Ordinal);
        Assert.Contains("\n[law]\n", text, StringComparison.Ordinal);
        Assert.Contains("\na = \"0.003 S\"\n", text, StringComparison.Ordinal);
        Assert.Contains("sharpness = 3.0\n", text, StringComparison.Ordinal);
    }

    [Fact]
    public void Files_that_the_device_names_are_found_from_the_new_folder()
    {
        Directory.CreateDirectory(folder["out"]);
        folder.Write("sheet.geojson", """{"type":"Polygon","coordinates":[[[-10,-3],[10,-3],[10,3],[-10,3],[-10,-3]]]}""");
        string contacts = Rest.Replace("end = \"left\"", "from = [\"-10 um\", \"1 um\"], to = [\"-10 um\", \"-1 um\"]", StringComparison.Ordinal).Replace("end = \"right\"", "from = [\"10 um\", \"-1 um\"], to = [\"10 um\", \"1 um\"]", StringComparison.Ordinal);
        string original = "[sheet]\noutline = { file = \"sheet.geojson\", unit = \"um\" }\n" + Law + contacts;
        FitResult here = Fit with { Device = Fit.Device with { Path = folder["device.toml"] } };
        (string text, bool whole) = FittedDevice.Text(here, original, folder["out"]);
        Assert.True(whole, text);
        Assert.Contains("file = \"../sheet.geojson\"", text, StringComparison.Ordinal);
        string rooted = Path.GetFullPath(folder["sheet.geojson"]).Replace('\\', '/');
        Assert.Contains($"file = \"{rooted}\"", FittedDevice.Text(here, original.Replace("sheet.geojson", rooted, StringComparison.Ordinal), folder["out"]).Text, StringComparison.Ordinal);
    }

    [Fact]
    public void The_record_leaves_blank_what_is_not_known()
    {
        JsonArray parameters = FitRecord.Json(Fit with { Quality = Fit.Quality with { Freedom = 4, ChiSquared = 16 } })["parameters"]!.AsArray();
        JsonObject Named(string key) => parameters.Single(p => (string?)p!["key"] == key)!.AsObject();
        Assert.False((bool)Named("b")["determined"]!);
        Assert.All(Blank, key => Assert.Null(Named("b")[key]));
        Assert.Equal((3e-3, 1e-6), ((double)Named("a")["value"]!, (double)Named("a")["numerical_error"]!));

        // Chi squared is four times what it should be: errors as the residuals have them are twice as large. An interval may be open.
        Assert.Equal(2 * (double)Named("a")["standard_error"]!, (double)Named("a")["standard_error_scaled"]!, 1e-12);
        Assert.Equal(2e-3, (double)Named("a")["interval_95"]![0]!);
        Assert.Null(Named("a")["interval_95"]![1]);
        Assert.Equal(5, (double)Named("axis")["prior_sigma"]!, 1e-9);
        JsonObject good = FitRecord.Json(Fit with { Quality = Fit.Quality with { Freedom = 4, ChiSquared = 3 } })["parameters"]![0]!.AsObject();
        Assert.Equal((double)good["standard_error"]!, (double)good["standard_error_scaled"]!);
    }
}
