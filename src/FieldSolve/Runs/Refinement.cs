using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>Meshes, measures and meshes again until every reading meets its wanted error or the limit of unknowns is reached.</summary>
internal sealed class Refinement
{
    private const int MostLevels = 12;

    // Quadratic triangles have about two nodes each, and the split has four times as many triangles.
    private const double UnknownsPerCoarseTriangle = 8.2;

    // Even parts below this share of the along voltage are zero for all purposes (often by symmetry); do not chase them.
    private const double EvenFloor = 1e-8;

    private Refinement(MeshPair meshes, IReadOnlyList<GoalMeasure> goals, IReadOnlyList<RefinementLevel> levels, bool isMet)
    {
        Meshes = meshes;
        Goals = goals;
        Levels = levels;
        IsMet = isMet;
    }

    /// <summary>The last pair of meshes.</summary>
    public MeshPair Meshes { get; }

    /// <summary>Errors at the largest current on them.</summary>
    public IReadOnlyList<GoalMeasure> Goals { get; }

    /// <summary>History.</summary>
    public IReadOnlyList<RefinementLevel> Levels { get; }

    /// <summary>All readings met their wanted errors.</summary>
    public bool IsMet { get; }

    /// <summary>Largest current of a list by size, with its sign.</summary>
    public static double Largest(IReadOnlyList<double> currents) => currents.MaxBy(Math.Abs);

    /// <summary>Wanted errors at one current.</summary>
    /// <param name="spec">What the device file asks for.</param>
    /// <param name="along">Largest |along voltage| of all wirings, V (or of the source where nothing is read along).</param>
    /// <param name="evens">Even parts of the row, V.</param>
    /// <param name="even">The even part in question, V; null for a reading itself.</param>
    public static double Wanted(MeshSpec spec, double along, IEnumerable<double> evens, double? even) => even is null
        ? spec.Error * along
        : Math.Max(spec.EvenError * Math.Max(Math.Abs(even.Value), 0.1 * evens.Max(Math.Abs)), EvenFloor * along);

    /// <summary>Runs the loop.</summary>
    public static Refinement Run(
        SheetDevice device, LabLaw law, IReadOnlyList<ReadingPlan> plans, double largest, bool bothSigns, Action<string> tell,
        StageClock clock, CancellationToken cancel)
    {
        ISizeField size = MeshSizes.First(device);
        var levels = new List<RefinementLevel>();
        MeshPair? best = null;
        IReadOnlyList<GoalMeasure> goals = [];
        for (int level = 0; ; level++)
        {
            TriangleMesh mesh = clock.Time("mesh", () => Mesher.Generate(device.Domain, size, null, cancel));
            if (best is not null && UnknownsPerCoarseTriangle * mesh.TriangleCount > device.Mesh.MaxUnknowns)
            {
                return new(best, goals, levels, false);
            }

            tell(string.Create(System.Globalization.CultureInfo.InvariantCulture, $"refining, level {level}: {4 * mesh.TriangleCount} triangles"));
            MeshPair meshes = clock.Time("factor", () => MeshPair.Build(device, mesh, law, cancel));
            List<GoalMeasure> measured = clock.Time("estimate", () => Measure(device, meshes, plans, largest, bothSigns, cancel));
            (best, goals) = (meshes, measured);
            levels.Add(new(level, 4 * mesh.TriangleCount, meshes.Fine.Space.Size, [.. measured.Select(g => new LevelEstimate(
                g.Plan.Wiring.Name, g.Plan.Pairs[g.Pair].Name, g.IsEven ? "even" : "value", g.Value, g.Error.Bar, g.Wanted))]));
            bool met = measured.All(g => g.Error.Bar <= g.Wanted);
            if (met || level == MostLevels - 1 || measured.Count == 0)
            {
                return new(best, goals, levels, met);
            }

            size = MeshSizes.Next(meshes, measured, level, (int)(device.Mesh.MaxUnknowns / UnknownsPerCoarseTriangle * 0.95));
        }
    }

    private static List<GoalMeasure> Measure(
        SheetDevice device, MeshPair meshes, IReadOnlyList<ReadingPlan> plans, double largest, bool bothSigns, CancellationToken cancel)
    {
        // All currents zero: the errors are zero too, but one ampere tells whether the mesh is any good.
        double current = largest == 0 ? 1 : largest;
        var perPlan = new IReadOnlyList<GoalMeasure>[plans.Count];
        Parallel.For(
            0, plans.Count, new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount },
            k => perPlan[k] = LevelMeasure.Of(meshes, plans[k], current, bothSigns, cancel));
        double along = AlongScale(perPlan.SelectMany(g => g).Where(g => !g.IsEven)
            .Select(g => (g.Plan.Pairs[g.Pair] == g.Plan.Wiring.Along, g.Value)));
        var all = new List<GoalMeasure>();
        foreach (IReadOnlyList<GoalMeasure> goals in perPlan)
        {
            double[] evens = [.. goals.Where(g => g.IsEven).Select(g => g.Value)];
            all.AddRange(goals.Select(g => g with { Wanted = Wanted(device.Mesh, along, evens, g.IsEven ? g.Value : null) }));
        }

        return all;
    }

    /// <summary>The largest |along voltage|; without any along pair, the largest of all readings.</summary>
    public static double AlongScale(IEnumerable<(bool IsAlong, double Value)> readings)
    {
        double along = 0, any = 0;
        foreach ((bool isAlong, double value) in readings)
        {
            any = Math.Max(any, Math.Abs(value));
            along = isAlong ? Math.Max(along, Math.Abs(value)) : along;
        }

        return along > 0 ? along : any;
    }
}
