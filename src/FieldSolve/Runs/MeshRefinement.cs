using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Meshing.SizeFields;
using FieldSolve.Readings;
using FieldSolve.Solving;

namespace FieldSolve.Runs;

/// <summary>Meshes, measures and meshes again until every reading meets its wanted error or the limit of unknowns is reached.</summary>
internal sealed class MeshRefinement
{
    private const int MostLevels = 12;

    // Quadratic triangles have about two nodes each, and the split has four times as many triangles.
    internal const double UnknownsPerCoarseTriangle = 8.2;

    // A voltage beside which the along voltage is tiny (a source behind megaohms) is resolved to nine digits of itself, no further.
    private const double ResolvedShare = 1e-9;

    // The first mesh knows nothing of the solution, so its estimate is trusted only when it is well below what is wanted.
    private const double TrustOfFirst = 0.3;

    // A level that brings the worst reading down to no less than this share of what it was is a stall; two in a row end the refinement.
    private const double StallShare = 0.8;
    private const int MostStalls = 2;

    // Even parts below this share of the along voltage are zero for all purposes (often by symmetry); do not chase them.
    private const double EvenFloor = 1e-8;

    private MeshRefinement(MeshPair meshes, IReadOnlyList<GoalMeasure> goals, IReadOnlyList<RefinementLevel> levels, bool isMet)
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

    /// <summary>Wanted error of a reading, V.</summary>
    /// <param name="spec">What the device file asks for.</param>
    /// <param name="along">From <see cref="VoltageScale"/>, V.</param>
    /// <param name="value">The reading, V.</param>
    public static double Wanted(MeshSpec spec, double along, double value) =>
        Math.Max(spec.Error * along, ResolvedShare * Math.Abs(value));

    /// <summary>Wanted error of an even part, V.</summary>
    /// <param name="spec">What the device file asks for.</param>
    /// <param name="along">From <see cref="VoltageScale"/>, V.</param>
    /// <param name="evens">Even parts of the row, V.</param>
    /// <param name="even">The even part in question, V.</param>
    public static double WantedEven(MeshSpec spec, double along, IEnumerable<double> evens, double even) =>
        Math.Max(spec.EvenError * Math.Max(Math.Abs(even), 0.1 * evens.Max(Math.Abs)), EvenFloor * along);

    /// <summary>Runs the loop.</summary>
    /// <param name="device">Sheet, contacts and wanted errors.</param>
    /// <param name="law">Law of the meshes that come out.</param>
    /// <param name="plans">What is read.</param>
    /// <param name="largest">Largest current, A.</param>
    /// <param name="bothSigns">Measure the even parts too.</param>
    /// <param name="tell">Told about each level.</param>
    /// <param name="clock">Adds up the stages.</param>
    /// <param name="cancel">Checked between and within levels.</param>
    /// <param name="laws">The law of each plan, where they differ; null when all have <paramref name="law"/>.</param>
    /// <param name="start">Sizes of the first mesh, from earlier measures; null to start from the shape.</param>
    /// <param name="oneCurve">See <see cref="DriveOptions.OneCurve"/>.</param>
    /// <param name="given">A mesh to measure as it is, without refinement; null to make one.</param>
    public static MeshRefinement Run(
        SheetDevice device, LabLaw law, IReadOnlyList<ReadingPlan> plans, double largest, bool bothSigns, Action<string> tell,
        StageClock clock, CancellationToken cancel, IReadOnlyList<LabLaw>? laws = null, ISizeField? start = null,
        bool oneCurve = false, TriangleMesh? given = null)
    {
        ISizeField? size = start;
        var levels = new List<RefinementLevel>();
        MeshPair? best = null;
        IReadOnlyList<GoalMeasure> goals = [], before = [];

        // All currents zero: the errors are zero too, but one ampere tells whether the mesh is any good. A wiring that cannot carry the largest current
        // is measured at what it carried on the mesh before.
        double[] currents = [.. plans.Select(_ => largest == 0 ? 1 : largest)];
        double[] lower = [.. device.Drive!.Currents.Select(Math.Abs).Where(c => c > 0).Distinct().OrderDescending()];
        int mostTriangles = (int)(device.Mesh.MaxUnknowns / UnknownsPerCoarseTriangle);
        double worst = double.PositiveInfinity;
        int stalls = 0;
        for (int level = 0; ; level++)
        {
            TriangleMesh? mesh = clock.Time("mesh", () => given ?? (size is null ? FirstMesh.Make(device, cancel) : Mesh(device, size, best is null ? int.MaxValue : mostTriangles, cancel)));
            if (mesh is null)
            {
                return new(best!, goals, levels, false);
            }

            string stage = string.Create(System.Globalization.CultureInfo.InvariantCulture, $"refining, level {level}: {4 * mesh.TriangleCount} triangles");
            tell(stage);
            MeshPair meshes = clock.Time("factor", () => MeshPair.Build(device, mesh, law, cancel));
            List<GoalMeasure> measured = clock.Time("estimate", () => Measure(device, meshes, plans, laws, currents, lower, bothSigns, cancel, oneCurve, Solved(stage, tell)));
            measured = [.. measured.Select(g => g.AfterMove(before))];
            before = measured;

            // What is stated; the sizes of the next mesh follow what is expected.
            List<GoalMeasure> stated = level > 0 ? measured : [.. measured.Select(g => g.Untried())];
            levels.Add(new(level, 4 * mesh.TriangleCount, meshes.Fine.Space.Size, [.. stated.Select(g => new LevelEstimate(
                g.Plan.Wiring.Name, g.Plan.Pairs[g.Pair].Name, g.IsEven ? "even" : "value", g.Corrected, g.Error.Bar, g.Wanted)
            {
                Correction = g.Error.Correction,
            })]));
            double now = stated.Select(g => g.Error.Bar / g.Wanted).DefaultIfEmpty(0).Max();
            if (best is null || now <= worst)
            {
                (best, goals) = (meshes, stated);
            }

            stalls = now > StallShare * worst ? stalls + 1 : 0;
            worst = Math.Min(worst, now);
            if (given is not null || now <= (level == 0 && start is null ? TrustOfFirst : 1) || level == MostLevels - 1 || stalls == MostStalls)
            {
                return new(best, goals, levels, worst <= 1);
            }

            size = MeshSizes.Next(meshes, measured, level, (int)(0.95 * mostTriangles));
            meshes.ForgetIfLarge();
        }
    }

    /// <summary>
    /// Refines further until the readings at a smaller current meet their wanted errors as well, with some room. Even parts can be relatively less
    /// exact at a weak drive than at a strong one: where a law fades, the weak drive keeps more of the singular field at contact ends. The last level is not
    /// measured again; <see cref="Goals"/> are those of the mesh before.
    /// </summary>
    public MeshRefinement Extended(
        SheetDevice device, LabLaw law, IReadOnlyList<ReadingPlan> plans, double current, bool bothSigns, Action<string> tell,
        StageClock clock, CancellationToken cancel)
    {
        const double Room = 0.8;
        const int MostRounds = 1;   // the sizes aim well below what is wanted; what is still missed is marked in the rows
        MeshRefinement now = this;
        double[] currents = [.. plans.Select(_ => current)];
        for (int round = 0; round < MostRounds; round++)
        {
            MeshPair meshes = now.Meshes;
            List<GoalMeasure> measured = clock.Time("estimate", () => Measure(device, meshes, plans, null, currents, [], bothSigns, cancel));
            if (measured.All(g => g.Error.Bar <= Room * g.Wanted))
            {
                return now;
            }

            if (now.Finer(device, law, [.. now.Goals, .. measured.Select(g => g with { Wanted = Room * g.Wanted })], tell, clock, cancel) is not { } finer)
            {
                return now;
            }

            now = finer;
        }

        return now;
    }

    /// <summary>One more mesh, for a run whose own readings missed what is wanted of them; null where no larger one is allowed. <see cref="Goals"/> are those of the mesh before.</summary>
    /// <param name="device">Sheet and wanted errors.</param>
    /// <param name="law">Law of the mesh.</param>
    /// <param name="plans">What is read.</param>
    /// <param name="currents">To measure at, A; lowered where the sheet cannot carry one.</param>
    /// <param name="bothSigns">Measure the even parts too.</param>
    /// <param name="share">What to aim at, over the wanted error; over the errors as they stand where those are smaller.</param>
    /// <param name="tell">Told about the level.</param>
    /// <param name="clock">Adds up the stages.</param>
    /// <param name="cancel">Checked within.</param>
    public MeshRefinement? Tightened(
        SheetDevice device, LabLaw law, IReadOnlyList<ReadingPlan> plans, IReadOnlyList<double> currents, bool bothSigns, double share, Action<string> tell,
        StageClock clock, CancellationToken cancel)
    {
        double[] lower = [.. device.Drive!.Currents.Select(Math.Abs).Where(c => c > 0).Distinct().OrderDescending()];
        GoalMeasure[] goals = clock.Time("estimate", () => currents
            .SelectMany(i => Measure(device, Meshes, plans, null, [.. plans.Select(_ => i == 0 ? 1 : i)], lower, bothSigns, cancel)).ToArray());
        double scale = share * Math.Min(goals.Select(g => g.Error.Bar / g.Wanted).DefaultIfEmpty(1).Max(), 1);
        return Finer(device, law, [.. goals.Select(g => g with { Wanted = scale * g.Wanted })], tell, clock, cancel);
    }

    // On a mesh of more triangles, for goals on this one; null when there is none.
    private MeshRefinement? Finer(SheetDevice device, LabLaw law, IReadOnlyList<GoalMeasure> goals, Action<string> tell, StageClock clock, CancellationToken cancel)
    {
        int level = Levels.Count, mostTriangles = (int)(device.Mesh.MaxUnknowns / UnknownsPerCoarseTriangle);
        ISizeField size = MeshSizes.Next(Meshes, goals, 0, (int)(0.95 * mostTriangles));
        TriangleMesh? mesh = clock.Time("mesh", () => Mesh(device, size, mostTriangles, cancel));
        if (mesh is null || mesh.TriangleCount <= Meshes.Coarse.Space.Mesh.TriangleCount)
        {
            return null;
        }

        tell(string.Create(System.Globalization.CultureInfo.InvariantCulture, $"refining, level {level}: {4 * mesh.TriangleCount} triangles"));
        Meshes.ForgetIfLarge();
        MeshPair next = clock.Time("factor", () => MeshPair.Build(device, mesh, law, cancel));
        return new(next, Goals, [.. Levels, new(level, 4 * mesh.TriangleCount, next.Fine.Space.Size, [])], IsMet);
    }

    /// <summary>Sizes for the next mesh after measures of one's own.</summary>
    public static ISizeField NextSizes(SheetDevice device, MeshPair meshes, IReadOnlyList<GoalMeasure> goals, int level) =>
        MeshSizes.Next(meshes, goals, level, (int)(0.95 * device.Mesh.MaxUnknowns / UnknownsPerCoarseTriangle));

    // Tells of each state solved: on a large mesh one takes long.
    private static Action<int, int> Solved(string stage, Action<string> tell) =>
        (done, all) => tell(string.Create(System.Globalization.CultureInfo.InvariantCulture, $"{stage}, {done} of {all} states solved"));

    // A mesh within the limit: sizes that ask for more are stretched. Null when there is none.
    private static TriangleMesh? Mesh(SheetDevice device, ISizeField size, int mostTriangles, CancellationToken cancel)
    {
        double stretch = 1;
        for (int attempt = 0; attempt < 6; attempt++)
        {
            try
            {
                TriangleMesh mesh = Mesher.Generate(device.Domain, stretch == 1 ? size : new StretchedSize(size, stretch), null, cancel);
                if (mesh.TriangleCount <= mostTriangles && (mostTriangles == int.MaxValue || UnknownsOfSplit(mesh) <= device.Mesh.MaxUnknowns))
                {
                    return mesh;
                }

                stretch *= Math.Sqrt(1.1 * Math.Max(mesh.TriangleCount / (double)mostTriangles, UnknownsOfSplit(mesh) / device.Mesh.MaxUnknowns));
            }
            catch (MeshException) when (mostTriangles < int.MaxValue)
            {
                // The sizes ask for more triangles than any mesh may have.
                stretch *= 4;
            }
        }

        return null;
    }

    // Nodes of the quadratic triangles of the split, by Euler's formula, but for holes and metal.
    private static double UnknownsOfSplit(TriangleMesh mesh) => (4.0 * mesh.VertexCount) + (6.0 * mesh.TriangleCount);

    /// <summary>Errors of all readings on a pair of meshes, with what is wanted of each.</summary>
    /// <param name="device">For the wanted errors.</param>
    /// <param name="meshes">Under the law of the first plan.</param>
    /// <param name="plans">What is read.</param>
    /// <param name="laws">The law of each plan; null when all have that of the meshes.</param>
    /// <param name="currents">Current of each plan, A; lowered where the sheet cannot carry it.</param>
    /// <param name="lower">The drive's currents by size, the largest first.</param>
    /// <param name="bothSigns">Measure the even parts too.</param>
    /// <param name="cancel">Checked at every step.</param>
    /// <param name="oneCurve">See <see cref="DriveOptions.OneCurve"/>.</param>
    /// <param name="solved">Told how many states are solved, and of how many: each wiring at weak drive and at each sign of the current; one call at a time.</param>
    public static List<GoalMeasure> Measure(
        SheetDevice device, MeshPair meshes, IReadOnlyList<ReadingPlan> plans, IReadOnlyList<LabLaw>? laws, double[] currents, double[] lower, bool bothSigns,
        CancellationToken cancel, bool oneCurve = false, Action<int, int>? solved = null)
    {
        int states = plans.Count * (device.Law.IsLinear ? 1 : bothSigns ? 3 : 2), done = 0;
        var gate = new Lock();
        void Count()
        {
            lock (gate)
            {
                // A current that the sheet cannot carry is tried again, lower.
                solved?.Invoke(Math.Min(++done, states), states);
            }
        }

        var perPlan = new IReadOnlyList<GoalMeasure>[plans.Count];
        Parallel.For(
            0, plans.Count, new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = SharedCores.Jobs(meshes.Fine.Space.Size) },
            k => perPlan[k] = LevelMeasure.Of(
                laws is null ? meshes : meshes.WithLaw(laws[k], cancel), plans[k], currents[k], lower, bothSigns, cancel, Count));
        for (int k = 0; k < plans.Count; k++)
        {
            currents[k] = perPlan[k].Count > 0 ? perPlan[k][0].Current : currents[k];
        }

        double along = VoltageScale.Of(device, currents.Max(Math.Abs), perPlan.SelectMany(g => g).Where(g => !g.IsEven)
            .Select(g => (g.Plan.Pairs[g.Pair] == g.Plan.Wiring.Along, g.Value)));
        double[] curve = oneCurve ? [.. perPlan.SelectMany(g => g).Where(g => g.IsEven).Select(g => g.Value)] : [];
        var all = new List<GoalMeasure>();
        foreach (IReadOnlyList<GoalMeasure> goals in perPlan)
        {
            double[] evens = oneCurve ? curve : [.. goals.Where(g => g.IsEven).Select(g => g.Value)];
            all.AddRange(goals.Select(g => g with
            {
                Wanted = g.IsEven
                ? WantedEven(device.Mesh, along, evens, g.Value)
                : Wanted(device.Mesh, along, g.Value)
            }));
        }

        return all;
    }
}
