using System.Diagnostics;
using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;

namespace FieldSolve.Benchmarks;

/// <summary>Prints benchmarks/accuracy.md: true errors beside stated ones, and what refinement by estimate saves.</summary>
internal static class AccuracyTables
{
    public static void Print(TextWriter to)
    {
        to.WriteLine("# Accuracy\n");
        to.WriteLine("Printed by `dotnet run --project benchmarks/FieldSolve.Benchmarks -c Release -- accuracy`. Errors are relative to the exact value.");
        to.WriteLine("The sources of the exact values stand in benchmarks/FieldSolve.Benchmarks/ExactCases.cs.\n");
        Honesty(to);
        Wanted(to);
        Rates(to);
        to.WriteLine(LawEnds);
    }

    private static void Honesty(TextWriter to)
    {
        to.WriteLine("## True error against stated error\n");
        to.WriteLine("Every level of a run that asks for 1e-8 (even parts: 1e-5). \"Raw\" is the finer mesh's own error; \"estimated\" is what the program");
        to.WriteLine("expects of it and corrects; \"true\" is the error of the corrected reading and \"stated\" its bar.\n");
        to.WriteLine("| problem | level | unknowns | raw error | raw / estimated | true error | stated error | true / stated |");
        to.WriteLine("| --- | ---: | ---: | ---: | ---: | ---: | ---: | ---: |");
        List<double> ratios = [], raws = [];
        foreach (ExactCase c in ExactCases.All)
        {
            foreach (RefinementLevel level in Run(c, 1e-8, 1e-5).Levels)
            {
                LevelEstimate e = level.Estimates.First(e => e.Pair == c.Pair && e.Part == (c.IsEven ? "even" : "value"));
                double error = Math.Abs(e.Value - c.Exact), raw = Math.Abs(e.Value - e.Correction - c.Exact);
                double estimated = Math.Abs(e.Correction);

                // An even part is not corrected where its error comes from, at contact ends: there its bar is the estimate.
                if (c.IsEven)
                {
                    estimated = e.Error;
                }

                // The printed exact values have ten to thirteen digits.
                if (raw > 1e-9 * Math.Abs(c.Exact))
                {
                    ratios.Add(error / e.Error);
                    raws.Add(raw / estimated);
                }

                to.WriteLine(string.Create(
                    CultureInfo.InvariantCulture,
                    $"| {c.Name} | {level.Level} | {level.Unknowns} | {raw / Math.Abs(c.Exact):E1} | {raw / estimated:F2} | {error / Math.Abs(c.Exact):E1} | {e.Error / Math.Abs(c.Exact):E1} | {error / e.Error:F2} |"));
            }
        }

        ratios.Sort();
        raws.Sort();
        to.WriteLine(string.Create(
            CultureInfo.InvariantCulture,
            $"\n{raws.Count} readings with a raw error above 1e-9. Raw / estimated has the median {raws[raws.Count / 2]:F2} and lies between 0.3 and 3 for {Share(raws, r => r is >= 0.3 and <= 3):F0} %."));
        to.WriteLine(string.Create(
            CultureInfo.InvariantCulture,
            $"True / stated, after the correction, has the median {ratios[ratios.Count / 2]:F2}; it is above 1 for {Share(ratios, r => r > 1):F0} % and above 2 for {Share(ratios, r => r > 2):F0} %; the largest is {ratios[^1]:F2}.\n"));
    }

    private static TimeSpan Now()
    {
        using var self = Process.GetCurrentProcess();
        return self.TotalProcessorTime;
    }

    private static double Share(List<double> values, Func<double, bool> counts) => 100.0 * values.Count(counts) / values.Count;

    private static void Wanted(TextWriter to)
    {
        to.WriteLine("## What a wanted error costs\n");
        to.WriteLine("Arcs of half angle 5 deg. \"Cost\" is the processor time of the whole run over that of one mesh, factor and solve on its final mesh.\n");
        to.WriteLine("| wanted | levels | unknowns | true error | stated error | cost |");
        to.WriteLine("| ---: | ---: | ---: | ---: | ---: | ---: |");
        ExactCase arcs = ExactCases.All[1];
        foreach (double wanted in new[] { 1e-3, 1e-4, 1e-5, 1e-6, 1e-7, 1e-8 })
        {
            Run(arcs, wanted, 1e-3);
            TimeSpan start = Now();
            DriveResult r = Run(arcs, wanted, 1e-3);
            double whole = (Now() - start).TotalSeconds;
            start = Now();
            var law = new LabLaw(r.Device.Law, r.Device.Axis);
            FieldLevel once = FieldLevel.Build(r.Device, UniformSplit.Split(r.Mesh), law, default);
            once.UnitSolution(0, 1);
            double single = (Now() - start).TotalSeconds;
            Reading source = r.Rows[0].Of("source")!;
            to.WriteLine(string.Create(
                CultureInfo.InvariantCulture,
                $"| {wanted:E0} | {r.Levels.Count} | {r.Figures.Unknowns} | {Math.Abs(source.Value - arcs.Exact) / arcs.Exact:E1} | {source.Error / arcs.Exact:E1} | {whole / single:F1} |"));
        }

        to.WriteLine();
        to.WriteLine("The even part across of the second-order disc with 10 degree arcs:\n");
        to.WriteLine("| wanted of itself | levels | unknowns | true error | stated error |");
        to.WriteLine("| ---: | ---: | ---: | ---: | ---: |");
        ExactCase even = ExactCases.StrongerSecondOrder;
        foreach (double wanted in new[] { 1e-2, 1e-3, 1e-4 })
        {
            DriveResult r = Run(even, 1e-4, wanted);
            Reading across = r.Rows[0].Of("across")!;
            to.WriteLine(string.Create(
                CultureInfo.InvariantCulture,
                $"| {wanted:E0} | {r.Levels.Count} | {r.Figures.Unknowns} | {Math.Abs((across.Even!.Value / even.Exact) - 1):E1} | {across.EvenError!.Value / Math.Abs(even.Exact):E1} |"));
        }

        to.WriteLine();
    }

    private static void Rates(TextWriter to)
    {
        to.WriteLine("## Refinement by estimate against uniform refinement\n");
        to.WriteLine("True relative error of the two-terminal resistance; the last line is the slope of error against unknowns.\n");
        to.WriteLine("| problem | unknowns, by estimate | error | unknowns, uniform | error |");
        to.WriteLine("| --- | ---: | ---: | ---: | ---: |");
        foreach (ExactCase c in new[] { ExactCases.All[1], ExactCases.All[8], ExactCases.All[12] })
        {
            List<(double N, double Error)> estimate = [], uniform = [];
            foreach (double wanted in new[] { 1e-3, 1e-4, 1e-5, 1e-6, 1e-7 })
            {
                DriveResult r = Run(c, wanted, 1e-3);
                estimate.Add((r.Figures.Unknowns, Math.Abs((r.Rows[0].Of(c.Pair)!.Value / c.Exact) - 1)));
            }

            SheetDevice device = Device(c, 1e-3, 1e-3);
            foreach (double across in new[] { 12.0, 24, 48, 96, 192 })
            {
                TriangleMesh mesh = Mesher.Generate(device.Domain, new UniformSize(device.Domain.Size / across));
                FieldLevel level = FieldLevel.Build(device, mesh, new LabLaw(device.Law, device.Axis), default);
                double[] u = level.UnitSolution(0, 1);
                double value = u[level.Space.ContactUnknown[0]] - u[level.Space.ContactUnknown[1]];
                uniform.Add((level.Space.Size, Math.Abs((value / c.Exact) - 1)));
            }

            for (int k = 0; k < estimate.Count; k++)
            {
                to.WriteLine(string.Create(
                    CultureInfo.InvariantCulture,
                    $"| {c.Name} | {estimate[k].N} | {estimate[k].Error:E1} | {uniform[k].N} | {uniform[k].Error:E1} |"));
            }

            to.WriteLine(string.Create(CultureInfo.InvariantCulture, $"| slope | | {Slope(estimate):F1} | | {Slope(uniform):F1} |"));
        }
    }

    // Least squares in the logarithms.
    private static double Slope(List<(double N, double Error)> points)
    {
        (double intercept, double slope) = MathNet.Numerics.LinearRegression.SimpleRegression.Fit(
            [.. points.Select(p => Math.Log(p.N))], [.. points.Select(p => Math.Log(Math.Max(p.Error, 1e-12)))]);
        _ = intercept;
        return slope;
    }

    private static DriveResult Run(ExactCase c, double error, double even) =>
        DriveRun.Execute(Device(c, error, even), new DriveOptions { Maps = MapChoice.None, ForPictures = false }, null, default);

    private static SheetDevice Device(ExactCase c, double error, double even)
    {
        string mesh = string.Create(CultureInfo.InvariantCulture, $"[mesh]\nerror = {error:R}\neven_error = {even:R}\nmax_unknowns = 400000\n");
        DeviceReading read = DeviceFile.Parse(c.Toml + mesh, "case.toml", ".");
        return read.Device ?? throw new InvalidOperationException(string.Join('\n', read.Faults));
    }

    private const string LawEnds = """

        ## Where the law ends

        At the end of an ideal contact the field grows like r^(-1/2) (with a Hall part r^(-1/2 +- theta_H/pi)), so a quadratic or cubic law without a limit
        is left there at every drive, in a zone that shrinks with the drive. The program bends the law in that zone (see README) and reports, apart from the
        mesh's error, how far the bend moves each reading: the integral of (pure law - bent law) against the reading's adjoint over the zone. Refining the mesh
        does not make that share smaller, and the refinement does not chase it: it stops when the mesh's share meets the wanted error. When the zone's share is
        above the wanted error the row says outside-law. What helps: a `field_limit`, a contact `resistance`, or less drive.
        """;
}
