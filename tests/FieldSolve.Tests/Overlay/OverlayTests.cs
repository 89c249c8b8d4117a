using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Meshing;
using FieldSolve.Readings;
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

    private static FieldMap Map(SheetDevice device, string wiring, TriangleMesh? mesh = null) =>
        DriveRun.Execute(device, new DriveOptions { Maps = MapChoice.Last, ForPictures = false, Mesh = mesh }, null, default).Maps.Single(m => m.Wiring == wiring);

    // A field that stands for the true one: on a mesh split twice more than its potentials need, since fields are known less well than potentials.
    private static readonly Lazy<FieldMap> Truth = new(() =>
    {
        SheetDevice device = TestDrive.Device(Bar(1e-4));
        device = device with { Wirings = [device.Wirings[0]] };
        DriveResult first = DriveRun.Execute(device, new DriveOptions { Maps = MapChoice.None, ForPictures = false }, null, default);
        return Map(device, "x", UniformSplit.Split(UniformSplit.Split(first.Mesh)));
    });

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

    private const double Angle = 6 * Math.PI / 180, TrueGain = 1.7;
    private static readonly double[] True = [1.3e-6, -0.8e-6, Angle, TrueGain];

    // Typical of the map: largest potential, field in the middle.
    private static double Typical(MapQuantity quantity) => quantity == MapQuantity.Potential ? Truth.Value.Potential.Max() : 1e4;

    private static MeasuredMap Seen(MapQuantity quantity, double noise, int seed, double step = 0.6e-6) =>
        Measure(Truth.Value, quantity, step, True[0], True[1], Angle, TrueGain, 0.3 * Typical(quantity), noise * Typical(quantity), seed);

    [Theory]
    [InlineData(MapQuantity.Potential, 0.002)]
    [InlineData(MapQuantity.Field, 0.005)]
    public void A_map_of_another_mesh_is_registered_within_its_stated_uncertainty(MapQuantity quantity, double noise)
    {
        OverlayResult result = OverlayRun.Execute(TestDrive.Device(Bar(2e-3)), Seen(quantity, noise, 5, 0.7e-6), new OverlayOptions(), null, default);
        Assert.Equal("x", result.Map.Wiring);
        Assert.True(result.Converged);
        Within(True[0], result.ShiftX, 0.05e-6, "shift x");
        Within(True[1], result.ShiftY, 0.05e-6, "shift y");
        Within(Angle, result.Turn, 0.002, "turn");
        Within(TrueGain, result.Gain, 0.01, "gain");
        Assert.False(result.IsStructured, string.Join(' ', result.Warnings));
        Assert.Null(result.Patch);
        Assert.Empty(result.Places);
        Assert.True(result.Candidates[1].Misfit > 1.3 * result.Candidates[0].Misfit, $"{result.Candidates[1].Misfit} over {result.Candidates[0].Misfit}");
    }

    // Thirty draws of the noise: true errors over stated ones scatter like a normal variable of standard deviation one (from 0.75 to 1.15: five correlated numbers, and the share of the
    // computed map's error in the stated ones is on the safe side), and 95 % intervals hold the truth in at least 90 %.
    [Theory]
    [InlineData(MapQuantity.Potential, 0.002)]
    [InlineData(MapQuantity.Field, 0.005)]
    public void Stated_errors_cover_the_true_ones_over_thirty_draws(MapQuantity quantity, double noise)
    {
        SheetDevice device = TestDrive.Device(Bar(2e-3)) is var d ? d with { Wirings = [d.Wirings[0]] } : d;
        (OverlayResult first, Registration registration, ComputedMap computed) = OverlayRun.Registered(device, Seen(quantity, noise, 100, 0.9e-6), new OverlayOptions { Wiring = "x" }, null, default);
        double[] truth = [.. True[..3], 1, TrueGain, 0.3 * Typical(quantity)];
        var z = new List<double>();
        for (int seed = 101; seed <= 130; seed++)
        {
            Registration r = Registration.Run(computed, [.. Seen(quantity, noise, seed, 0.9e-6).Points], new OverlayOptions(), registration.End.P, default);
            z.AddRange(Enumerable.Range(0, OverlayFunction.Count).Where(k => r.Free[k]).Select(k => (r.End.P[k] - truth[k]) / r.Error(k)));
        }

        double rms = Math.Sqrt(z.Average(v => v * v)), inside = z.Count(v => Math.Abs(v) < 1.96) / (double)z.Count;
        string all = $"rms {rms:F3}, inside {inside:F3}; " + string.Join(", ", Enumerable.Range(0, 5).Select(k => $"{z.Where((_, i) => i % 5 == k).Average():F2} +- {Math.Sqrt(z.Where((_, i) => i % 5 == k).Average(v => v * v)):F2}"));
        Assert.True(rms is > 0.75 and < 1.15, all);
        Assert.True(inside >= 0.9, all);
        Assert.NotNull(first);
    }

    [Fact]
    public void A_hidden_dead_patch_shows_as_the_maximum_of_the_residual()
    {
        using var folder = new EndToEndTests.TempFolder();
        folder.Write("torn.wkt", "POLYGON ((-15e-6 -5e-6, 15e-6 -5e-6, 15e-6 5e-6, -15e-6 5e-6, -15e-6 -5e-6), (4e-6 0e-6, 4e-6 2.4e-6, 6.4e-6 2.4e-6, 6.4e-6 0e-6, 4e-6 0e-6))");
        FieldMap torn = Map(TestDrive.Device(Bar(1e-3, "torn.wkt"), folder.Path), "x");
        MeasuredMap measured = Measure(torn, MapQuantity.Potential, 0.5e-6, 0.6e-6, 0.4e-6, -0.05, 1.15, 0, 0.003 * torn.Potential.Max(), 11);
        OverlayResult result = OverlayRun.Execute(TestDrive.Device(Bar(1e-3)), measured, new OverlayOptions { Wiring = "x" }, null, default);
        OverlayPlace worst = result.Places[0];
        Assert.True(Point2.Distance(worst.Place, new(5.2e-6, 1.2e-6)) < 2.6e-6, $"{worst}");
        Assert.True(Math.Abs(worst.Significance) > 8);
        Assert.True(result.Rms > 1.3 * result.Noise);

        // Without the patch in the fit the gain is bent by 4 %. The hole is a square of 2.4 um: what a square adds beyond a dipole moves the gain by some errors of the noise, and the errors hold it.
        OverlayPatch patch = result.Patch!;
        Assert.True(Point2.Distance(new(patch.X.Value, patch.Y.Value), new(5.2e-6, 1.2e-6)) < 0.3e-6, $"{patch}");
        Assert.InRange(patch.Radius, 1.1e-6, 1.7e-6);
        Assert.True(Math.Abs(result.Gain.Value - 1.15) < 2 * result.Gain.StandardError && result.Gain.Weighting > result.Gain.Noise && result.Gain.StandardError < 0.01, $"{result.Gain}");
        Assert.True(Math.Abs(result.Turn.Value + 0.05) < 4 * result.Turn.StandardError && result.Turn.StandardError < 0.01, $"{result.Turn}");
        Assert.True(Math.Abs(result.ShiftX.Value - 0.6e-6) < 4 * result.ShiftX.StandardError && result.ShiftX.StandardError < 0.1e-6, $"{result.ShiftX}");
        Assert.True(Math.Abs(result.ShiftY.Value - 0.4e-6) < 4 * result.ShiftY.StandardError && result.ShiftY.StandardError < 0.1e-6, $"{result.ShiftY}");
    }

    [Fact]
    public void Noise_that_is_not_stated_follows_from_the_residuals()
    {
        FieldMap map = Map(TestDrive.Device(Bar(1e-3)), "x");
        double sigma = 0.004 * map.Potential.Max();
        MeasuredMap measured = Measure(map, MapQuantity.Potential, 0.9e-6, 0.5e-6, 0, 0.02, 1, 0, sigma, 3);
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
    [InlineData("x_um;y_um;value_V\n1;2;3,5\n", "map.csv:2:5: '3,5' is no finite number ('value'); write a decimal point")]
    [InlineData("x_um,y_um,value_V\n1,1,5\n1,2,5\n1,3,5\n1,4,5\n1,5,5\n1,6,5\n1,7,5\n1,8,5\n1,9,5\n1,10,5\n1,11,5\n1,12,5\n", "map.csv:1:1: all values of the map are the same")]
    public void A_fault_says_where_and_what(string text, string expected)
    {
        (MeasuredMap? map, IReadOnlyList<Fault> faults) = MapTable.Parse(text, "map.csv", MapQuantity.Potential, null);
        Assert.Null(map);
        Assert.StartsWith(expected, faults[0].ToString(), StringComparison.Ordinal);
    }

    [Theory]
    [InlineData(";", "map.csv:2:1: '0,5' is no finite number ('x'); write a decimal point, here and in the 39 other cells that have a decimal comma")]
    [InlineData(",", "map.csv:2:9: this row has 5 cells (and so have 19 more rows); the header in line 1 has 3; where commas part the cells a number takes a decimal point")]
    public void A_table_of_decimal_commas_has_one_fault(string separator, string expected)
    {
        string text = string.Join(separator, "x_um", "y_um", "value_V") + "\n" + string.Concat(Enumerable.Range(0, 20).Select(k => string.Join(separator, $"{k},5", "2", $"{k},1") + "\n"));
        (MeasuredMap? map, IReadOnlyList<Fault> faults) = MapTable.Parse(text, "map.csv", MapQuantity.Potential, null);
        Assert.Null(map);
        Assert.Equal(expected, Assert.Single(faults).ToString());
    }

    // As spreadsheets and instruments write them: semicolons or tabulators, capitals, the unit in brackets, nan where the tip met nothing.
    [Theory]
    [InlineData("x_um;y_um;value_mV", ";")]
    [InlineData("X (\u00b5m)\tY (\u00b5m)\tValue (mV)", "\t")]
    [InlineData("y_um,value_mV,x_um", ",")]
    public void Tables_of_other_programs_are_read(string header, string separator)
    {
        string[] names = header.Split(separator);
        string Row(string x, string y, string v) => string.Join(separator, names.Select(n => char.ToLowerInvariant(n[0]) switch { 'x' => x, 'y' => y, _ => v }));
        string text = header + "\r\n" + Row("7", "8", "nan") + "\r\n" + string.Concat(Enumerable.Range(0, 15).Select(k => Row($"{k}.5", "2", $"{k}") + "\r\n"));
        (MeasuredMap? map, IReadOnlyList<Fault> faults) = MapTable.Parse(text, "map.csv", MapQuantity.Potential, null);
        Assert.Empty(faults);
        Assert.Equal(15, map!.Points.Count);
        Assert.Equal(14.5e-6, map.Points[14].X, 1e-18);
        Assert.Equal(2e-6, map.Points[14].Y, 1e-18);
        Assert.Equal(14e-3, map.Points[14].Value, 1e-15);
        Assert.Equal(17, map.Points[14].Line);
    }

    [Fact]
    public void A_map_that_determines_nothing_is_refused()
    {
        // One place measured again and again, but for rounding.
        MeasuredMap still = new("map.csv", "", MapQuantity.Potential, [.. Enumerable.Range(0, 40).Select(k => new MapPoint(1e-6 + (k * 1e-20), 1e-6, 0.1 + (1e-3 * (k % 3)), 1e-3, k + 2))]);
        Assert.Contains("does not determine", Assert.Throws<FitException>(() => OverlayRun.Execute(TestDrive.Device(Bar(1e-2)), still, new OverlayOptions { Wiring = "x" }, null, default)).Message, StringComparison.Ordinal);
    }

    [Fact]
    public void Maps_whose_pose_and_probe_are_given_are_only_compared()
    {
        FieldMap map = Map(TestDrive.Device(Bar(1e-2)), "x");
        MeasuredMap measured = Measure(map, MapQuantity.Potential, 1.5e-6, 0, 0, 0, 1, 0, 0.003 * map.Potential.Max(), 7);
        OverlayResult result = OverlayRun.Execute(
            TestDrive.Device(Bar(1e-2)), measured, new OverlayOptions { Wiring = "x", MostShift = 0, MostTurn = 0, FixedGain = true, FixedOffset = true }, null, default);
        Assert.Equal((0, 0, 0, 1, 0), (result.ShiftX.Value, result.ShiftY.Value, result.Turn.Value, result.Gain.Value, result.Offset.Value));
        Assert.Equal(0, result.Gain.StandardError);
        Assert.InRange(result.Rms, 0.7 * result.Noise, 1.3 * result.Noise);
    }

    [Fact]
    public void A_map_of_the_hole_in_a_ring_is_refused()
    {
        SheetDevice ring = TestDrive.Device(DeviceText.Ring(3e-6, 4e-6, DeviceText.Ohmic(1e-3, 1e-3)).Arc("a", 0, 20, 4e-6).Arc("b", 180, 20, 4e-6).Wiring("x", "a", "b").Drive(1e-6).Wanted(5e-2));
        MeasuredMap hole = new("map.csv", "", MapQuantity.Potential, [.. Enumerable.Range(0, 40).Select(k => new MapPoint(1e-7 * (k % 7), 1e-7 * (k % 5), 1e-6 * k, 1e-6, k + 2))]);
        FitException refused = Assert.Throws<FitException>(() => OverlayRun.Execute(ring, hole, new OverlayOptions(), null, default));
        Assert.StartsWith("No point of the map ends on the sheet", refused.Message, StringComparison.Ordinal);
        Assert.True(refused.IsOfData);
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
