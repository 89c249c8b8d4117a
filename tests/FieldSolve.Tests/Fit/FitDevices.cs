using System.Globalization;
using System.Text;
using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Measured;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;
using FieldSolve.Runs;
using FieldSolve.Solving;
using FieldSolve.Tests.PublishedTests;
using MathNet.Numerics.Distributions;

namespace FieldSolve.Tests.FitTests;

/// <summary>Devices with a [fit] and made-up measurements.</summary>
internal static class FitDevices
{
    public static SheetDevice Read(DeviceText text, string fit, string folder = "")
    {
        DeviceReading reading = DeviceFile.Parse($"{text}\n[fit]\n{fit}\n", "test.toml", folder);
        Assert.True(reading.Faults.Count == 0, string.Join('\n', reading.Faults));
        return reading.Device!;
    }

    /// <summary>Rows "source,drain,plus,minus,current_A,value_V,sigma_V".</summary>
    public static MeasuredVoltages Resistances(SheetDevice device, double current, double sigma, params (string Four, double Ohm)[] rows)
    {
        var text = new StringBuilder("source,drain,plus,minus,current_A,value_V,sigma_V\n");
        foreach ((string four, double ohm) in rows)
        {
            text.Append(CultureInfo.InvariantCulture, $"{four.Replace(' ', ',')},{current:R},{ohm * current:R},{sigma:R}\n");
        }

        return Table(device, text.ToString());
    }

    public static MeasuredVoltages Table(SheetDevice device, string text)
    {
        (MeasuredVoltages? data, IReadOnlyList<Fault> faults) = VoltageTable.Parse(text, "data.csv", device, null);
        Assert.True(faults.Count == 0, string.Join('\n', faults));
        return data!;
    }

    public static FitResult Fit(SheetDevice device, MeasuredVoltages data, FitOptions? options = null) => FitRun.Execute(device, data, options ?? new FitOptions { Starts = 1 }, null, default);

    public static FittedParameter Of(this FitResult result, string key) => result.Parameters.Single(p => p.Parameter.Key == key);

    /// <summary>The first mesh there is, or one of a size of triangles: coarse, but good for tests of derivatives and statistics.</summary>
    public static FieldLevel Coarse(FitProblem problem, double[] p, double size = 0)
    {
        SheetDevice there = problem.DeviceAt(p);
        ISizeField sizes = size > 0 ? new UniformSize(size) : MeshSizes.First(there);
        return FieldLevel.Build(there, Mesher.Generate(there.Domain, sizes), new LabLaw(there.Law, there.Axis), default);
    }

    /// <summary>
    /// What a device would read with normal noise: solved at every current on a mesh of its own, whose errors are a quarter of what a fit allows. A table without values says
    /// what is read and gives the standard deviations.
    /// </summary>
    public static MeasuredVoltages Measure(SheetDevice truth, MeasuredVoltages layout, int seed)
    {
        var bare = new FitProblem(truth, [], layout, layout.Data, FitProblem.MostNodes);
        double[] rough = new FitModel(bare, Coarse(bare, []), new double[layout.Data.Count]).Values([], default)!;
        var problem = new FitProblem(truth, [], layout, [.. layout.Data.Select((d, i) => d with { Value = rough[i] })], FitProblem.MostNodes);
        FitReference own = FitReference.Refine(problem, [], 0.05, _ => { }, new StageClock(), default);
        double[] values = new FitModel(problem, own.Meshes.Coarse, own.Missing).Values([], default)!;
        var random = new Random(seed);
        return layout with { Data = [.. layout.Data.Select((d, i) => d with { Value = values[i] + Normal.Sample(random, 0, d.Sigma) })] };
    }

    /// <summary>A fitted number lies within so many standard errors of the truth, and these are no larger than a share of it.</summary>
    public static void Near(this FitResult result, string key, double truth, double share, double scale = 0)
    {
        FittedParameter p = result.Of(key);
        Assert.True(p.Value is not null, key + " is not determined");
        double error = p.StandardError!.Value;
        string all = string.Join("; ", result.Parameters.Select(q => string.Create(CultureInfo.InvariantCulture, $"{q.Parameter.Key} {q.Value:G6} +- {q.StandardError:G2}, numerical {q.NumericalError:G2}")));
        Assert.True(Math.Abs(p.Value!.Value - truth) < 3 * error, $"{key}: truth {truth} of {all}");
        Assert.True(error < share * (scale > 0 ? scale : Math.Abs(truth)), $"{key}: {p.Value} +- {error}");
    }

    /// <summary>A disc with six contacts, three wirings; every second contact takes part in the next wiring.</summary>
    public static DeviceText SixArms(string law, double radius = 4e-6)
    {
        DeviceText text = DeviceText.Disc(radius, law);
        for (int k = 0; k < 6; k++)
        {
            text.Arc($"c{k + 1}", 60 * k, 5, radius);
        }

        return text.Wiring("0 deg", "c4", "c1", "c3 c2", "c3 c5").Wiring("60 deg", "c5", "c2", "c4 c3", "c4 c6").Wiring("120 deg", "c6", "c3", "c5 c4", "c5 c1").Drive(1e-4);
    }
}
