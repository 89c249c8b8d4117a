using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Runs;
using FieldSolve.Tests.PublishedTests;
using MathNet.Numerics.Distributions;

namespace FieldSolve.Tests.OverlayTests;

/// <summary>Maps made from another mesh, moved and turned by known amounts, with noise.</summary>
public class OverlayTests
{
    private const double Half = 15e-6, Width = 10e-6, Current = 1e-4;

    private static DeviceText Bar(double error, string shape = "")
    {
        const double w = 1e-6;
        string law = DeviceText.Ohmic(2e-3, 1e-3, 0, 25);
        DeviceText text = shape.Length == 0 ? DeviceText.Bar(2 * Half, Width, law) : DeviceText.Outline(shape, law);
        return text.Stretch("w", -Half, -w, -Half, w).Stretch("e", Half, -w, Half, w).Stretch("n", -w, Width / 2, w, Width / 2).Stretch("s", w, -Width / 2, -w, -Width / 2)
            .Wiring("x", "w", "e").Wiring("y", "n", "s").Drive(Current).Wanted(error);
    }

    private static FieldMap Map(SheetDevice device, string wiring) =>
        DriveRun.Execute(device, new DriveOptions { Maps = MapChoice.Last, ForPictures = false }, null, default).Maps.Single(m => m.Wiring == wiring);

    // A raster over the sheet as an instrument sees it: its frame is shifted and turned, its probe has a gain and an offset. Points off the sheet have no value.
    private static MeasuredMap Measure(FieldMap map, MapQuantity quantity, double step, double dx, double dy, double turn, double gain, double offset, double sigma, int seed)
    {
        var random = new Random(seed);
        var sampler = new MapSampler(map);
        double[] values = quantity == MapQuantity.Potential ? map.Potential : [.. map.Ex.Zip(map.Ey, (x, y) => Math.Sqrt((x * x) + (y * y)))];
        var points = new List<MapPoint>();
        (double s, double c) = Math.SinCos(turn);
        for (double x = -1.2 * Half; x <= 1.2 * Half; x += step)
        {
            for (double y = -1.4 * Width / 2; y <= 1.4 * Width / 2; y += step)
            {
                // A point p of the map lies at R(turn) p + shift on the sheet.
                if (sampler.Value(values, (c * x) - (s * y) + dx, (s * x) + (c * y) + dy) is { } v)
                {
                    points.Add(new(x, y, (gain * v) + offset + Normal.Sample(random, 0, sigma), sigma, points.Count + 2));
                }
            }
        }

        return new("map.csv", "", quantity, points);
    }

    private static void Within(double expected, Registered found, double largestError, string what)
    {
        Assert.True(found.StandardError > 0 && found.StandardError < largestError, $"{what}: standard error {found.StandardError}");
        Assert.True(Math.Abs(found.Value - expected) < 4 * found.StandardError, $"{what}: {found.Value} +- {found.StandardError}, {expected} is true");
    }

    [Theory]
    [InlineData(MapQuantity.Potential)]
    [InlineData(MapQuantity.Field)]
    public void A_map_of_another_mesh_is_registered_within_its_stated_uncertainty(MapQuantity quantity)
    {
        FieldMap map = Map(TestDrive.Device(Bar(1e-4)), "x");
        double typical = quantity == MapQuantity.Potential ? map.Potential.Max() : 1e4, sigma = (quantity == MapQuantity.Potential ? 0.005 : 0.05) * typical, turn = 6 * Math.PI / 180;
        MeasuredMap measured = Measure(map, quantity, 0.6e-6, 1.3e-6, -0.8e-6, turn, 1.7, 0.3 * typical, sigma, 5);
        OverlayResult result = OverlayRun.Execute(TestDrive.Device(Bar(2e-3)), measured, new OverlayOptions(), null, default);
        Assert.Equal("x", result.Map.Wiring);
        Assert.True(result.Converged);
        Within(1.3e-6, result.ShiftX, 0.2e-6, "shift x");
        Within(-0.8e-6, result.ShiftY, 0.2e-6, "shift y");
        Within(turn, result.Turn, 0.01, "turn");
        Within(1.7, result.Gain, 0.05, "gain");
        Assert.InRange(result.Rms / result.Noise, 0.9, 1.15);
        Assert.True(result.Candidates[1].Misfit > 1.3 * result.Candidates[0].Misfit, $"{result.Candidates[1].Misfit} over {result.Candidates[0].Misfit}");
        Assert.All(result.Places, p => Assert.True(Math.Abs(p.Significance) < 8, $"{p}"));
    }

    [Fact]
    public void A_hidden_dead_patch_shows_as_the_maximum_of_the_residual()
    {
        using var folder = new EndToEndTests.TempFolder();
        folder.Write("torn.wkt", "POLYGON ((-15e-6 -5e-6, 15e-6 -5e-6, 15e-6 5e-6, -15e-6 5e-6, -15e-6 -5e-6), (4e-6 0e-6, 4e-6 2.4e-6, 6.4e-6 2.4e-6, 6.4e-6 0e-6, 4e-6 0e-6))");
        FieldMap torn = Map(TestDrive.Device(Bar(1e-3, "torn.wkt"), folder.Path), "x");
        MeasuredMap measured = Measure(torn, MapQuantity.Potential, 0.5e-6, 0.6e-6, 0.4e-6, -0.05, 1, 0, 0.003 * torn.Potential.Max(), 11);
        OverlayResult result = OverlayRun.Execute(TestDrive.Device(Bar(1e-3)), measured, new OverlayOptions { Wiring = "x" }, null, default);
        OverlayPlace worst = result.Places[0];
        Assert.True(Point2.Distance(worst.Place, new(5.2e-6, 1.2e-6)) < 2.6e-6, $"{worst}");
        Assert.True(Math.Abs(worst.Significance) > 8);
        Assert.True(result.Rms > 1.3 * result.Noise);
    }

    [Fact]
    public void Noise_that_is_not_stated_follows_from_the_residuals()
    {
        FieldMap map = Map(TestDrive.Device(Bar(1e-3)), "x");
        double sigma = 0.004 * map.Potential.Max();
        MeasuredMap measured = Measure(map, MapQuantity.Potential, 0.7e-6, 0.5e-6, 0, 0.02, 1, 0, sigma, 3);
        measured = measured with { Points = [.. measured.Points.Select(p => p with { Sigma = null })] };
        OverlayResult result = OverlayRun.Execute(TestDrive.Device(Bar(2e-3)), measured, new OverlayOptions { Wiring = "x" }, null, default);
        Assert.True(result.NoiseIsEstimated);
        Assert.Equal(sigma, result.Noise, 0.1 * sigma);
    }

    [Fact]
    public void Refuses_a_map_in_the_wrong_unit()
    {
        MeasuredMap far = new("map.csv", "", MapQuantity.Potential, [.. Enumerable.Range(0, 50).Select(k => new MapPoint(k, k % 7, 0.1 * k, 0.1, k + 2))]);
        Assert.Contains("are its units right", Assert.Throws<FitException>(() => OverlayRun.Execute(TestDrive.Device(Bar(1e-2)), far, new OverlayOptions(), null, default)).Message, StringComparison.Ordinal);
    }

    [Theory]
    [InlineData("x_um,y_um,value_V\n1,2,q\n", "map.csv:2:5: 'q' is no finite number ('value')")]
    [InlineData("x_um,value_V\n1,2\n", "map.csv:1:1: the table needs the column 'y' with its unit, for example y_m")]
    [InlineData("x_um,y_um,value_V\n1,2,3\n", "map.csv:1:1: the map has 1 points; at least 12 are needed to register it")]
    [InlineData("x_um,y_um,value_V_per_m\n1,2,3\n", "map.csv:1:11: 'value_V_per_m': 'V_per_m' is the unit of a")]
    public void A_fault_says_where_and_what(string text, string expected)
    {
        (MeasuredMap? map, IReadOnlyList<Fault> faults) = MapTable.Parse(text, "map.csv", MapQuantity.Potential, null);
        Assert.Null(map);
        Assert.StartsWith(expected, faults[0].ToString(), StringComparison.Ordinal);
    }

    // Nodes of the map read back exactly, and a linear function everywhere, rim arcs included.
    [Fact]
    public void The_sampler_is_exact_on_linear_functions_and_knows_the_outside()
    {
        SheetDevice disc = TestDrive.Device(DeviceText.Disc(1e-6, DeviceText.Ohmic(1e-3, 1e-3)).Arc("a", 0, 20, 1e-6).Arc("b", 180, 20, 1e-6).Wiring("x", "a", "b").Drive(1e-6).Wanted(1e-2));
        FieldMap map = Map(disc, "x");
        var sampler = new MapSampler(map);
        double[] plane = [.. map.X.Zip(map.Y, (x, y) => (2 * x) - (3 * y))];
        for (int k = 0; k < 500; k++)
        {
            double r = 0.9999e-6 * Math.Sqrt(k / 499.0), t = 2.4 * k, x = r * Math.Cos(t), y = r * Math.Sin(t);
            Assert.Equal((2 * x) - (3 * y), sampler.Value(plane, x, y)!.Value, 1e-16);
        }

        Assert.Null(sampler.Value(plane, 1.01e-6, 0));
        Assert.Equal(0.5e-6, sampler.NearestRim(0, 1.5e-6).Distance, 2e-8);
    }
}
