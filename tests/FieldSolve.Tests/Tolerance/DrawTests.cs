using FieldSolve.Device;
using FieldSolve.Runs;

namespace FieldSolve.Tests.ToleranceTests;

/// <summary>The values that samples draw.</summary>
public class DrawTests
{
    private static readonly SheetCause[] Causes =
    [
        new(CauseCatalogue.Find("axis", CauseScope.Sheet)!, CauseTarget.Sheet, 0.02, CauseShape.Normal),
        new(CauseCatalogue.Find("growth", CauseScope.Sheet)!, CauseTarget.Sheet, 3e-9, CauseShape.Uniform),
    ];

    [Fact]
    public void Each_hypercube_takes_each_slice_once()
    {
        var draw = new SampleDraw(Causes, 5);
        for (int batch = 0; batch < 3; batch++)
        {
            int[] slices = [.. Enumerable.Range(batch * SampleDraw.Batch, SampleDraw.Batch)
                .Select(i => (int)(((draw.Of(i)[1] / (3e-9 * Math.Sqrt(3))) + 1) / 2 * SampleDraw.Batch))];
            Assert.Equal(Enumerable.Range(0, SampleDraw.Batch), slices.Order());
            Assert.NotEqual(Enumerable.Range(0, SampleDraw.Batch), slices);
        }
    }

    [Fact]
    public void Moments_and_independence()
    {
        var draw = new SampleDraw(Causes, 5);
        double[][] x = [.. Enumerable.Range(0, 6400).Select(draw.Of)];
        double[] normal = [.. x.Select(v => v[0] / 0.02)], uniform = [.. x.Select(v => v[1] / 3e-9)];
        Assert.Equal(0, normal.Average(), 0.01);
        Assert.Equal(1, normal.Average(v => v * v), 0.02);
        Assert.Equal(3, normal.Average(v => v * v * v * v), 0.15);
        Assert.Equal(0, uniform.Average(), 0.01);
        Assert.Equal(1, uniform.Average(v => v * v), 0.01);
        Assert.Equal(1.8, uniform.Average(v => v * v * v * v), 0.03);
        Assert.Equal(0, normal.Zip(uniform, (a, b) => a * b).Average(), 4 / Math.Sqrt(6400));
    }

    [Fact]
    public void The_number_and_the_seed_decide_alone()
    {
        double[] sample = new SampleDraw(Causes, 5).Of(130);
        Assert.Equal(sample, new SampleDraw(Causes, 5).Of(130));
        Assert.NotEqual(sample, new SampleDraw(Causes, 6).Of(130));
        Assert.Equal(sample[0], new SampleDraw([Causes[0]], 5).Of(130)[0]);
    }

    // Samples of a run whose layer held other contacts, or turned about another point, are those of another run.
    [Fact]
    public void What_a_layer_holds_and_turns_about_is_part_of_the_fingerprint()
    {
        string[] layers = ["contacts = [\"a\", \"b\"]", "contacts = [\"a\", \"c\"]", "contacts = [\"a\", \"b\"]\nabout = [\"1 um\", \"0 um\"]"];
        string[] designs = [.. layers.Select(layer =>
        {
            SheetDevice device = ToleranceDevices.Read($$"""
                [sheet]
                disc = { diameter = "2 um" }
                [law]
                kind = "ohmic"
                a = "1 mS"
                b = "1 mS"
                [[contact]]
                name = "a"
                edge = { at = "0 deg", width = "0.2 um" }
                [[contact]]
                name = "b"
                edge = { at = "90 deg", width = "0.2 um" }
                [[contact]]
                name = "c"
                edge = { at = "180 deg", width = "0.2 um" }
                [[wiring]]
                name = "w"
                source = "a"
                drain = "c"
                across = ["b", "c"]
                [drive]
                current = { from = "1 uA", to = "1 uA", steps = 1 }
                [mesh]
                error = 0.05
                [[tolerance.layer]]
                name = "gold"
                {{layer}}
                rotation = "1 deg"
                """);
            var store = new Designs();
            ToleranceRun.Execute(device, new ToleranceOptions { Samples = 1 }, store, null, default);
            return store.Design;
        })];
        Assert.Equal(3, designs.Distinct().Count());
    }

    private sealed class Designs : ISampleStore
    {
        public string Design { get; private set; } = "";

        public IReadOnlyDictionary<int, SampleResult> Known { get; } = new Dictionary<int, SampleResult>();

        public void Open(string design, int values) => Design = design;

        public void Add(SampleResult sample)
        {
        }
    }
}
