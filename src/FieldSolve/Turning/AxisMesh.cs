using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Meshing;
using FieldSolve.Runs;

namespace FieldSolve.Turning;

/// <summary>
/// One mesh for all turns of the crystal axis: refined for a few of them, then measured for all that are solved, and refined further for all where one of them misses its
/// wanted error.
/// </summary>
/// <param name="Meshes">The last pair of meshes, under the law of the first axis.</param>
/// <param name="Plans">One per axis that is to be solved.</param>
/// <param name="Goals">Errors of all of them at the largest current.</param>
/// <param name="Levels">History.</param>
internal sealed record AxisMesh(
    MeshPair Meshes, IReadOnlyList<ReadingPlan> Plans, IReadOnlyList<GoalMeasure> Goals, IReadOnlyList<Readings.RefinementLevel> Levels)
{
    private const int FirstAxes = 6;

    /// <summary>Makes it.</summary>
    public static AxisMesh Make(
        SheetDevice device, IReadOnlyList<TurnPlace> places, TriangleMesh? given, Action<string> tell, StageClock clock, CancellationToken cancel)
    {
        DriveSpec drive = device.Drive!;

        // A turn by 180 degrees needs no solve of its own, see AxisWork.
        int solved = places.Count % 2 == 0 && (drive.BothSigns || device.Law.IsLinear) ? places.Count / 2 : places.Count;
        ReadingPlan[] plans = [.. places.Take(solved).Select(p => new ReadingPlan(p.Wiring))];
        LabLaw[] laws = [.. places.Take(solved).Select(p => new LabLaw(device.Law, device.Axis + p.Turn))];
        int few = Math.Min(FirstAxes, solved);
        int[] chosen = [.. Enumerable.Range(0, few).Select(k => k * solved / few)];
        double largest = MeshRefinement.Largest(drive.Currents);
        MeshRefinement first = MeshRefinement.Run(
            device, laws[0], [.. chosen.Select(k => plans[k])], largest, drive.BothSigns, tell, clock, cancel, [.. chosen.Select(k => laws[k])],
            oneCurve: true, given: given);
        if (few == solved)
        {
            return new(first.Meshes, plans, first.Goals, first.Levels);
        }

        double[] lower = [.. drive.Currents.Select(Math.Abs).Where(c => c > 0).Distinct().OrderDescending()];
        tell("estimating the errors of all axes");
        IReadOnlyList<GoalMeasure> goals = clock.Time("estimate", () => MeshRefinement.Measure(
            device, first.Meshes, plans, laws, [.. plans.Select(_ => largest == 0 ? 1 : largest)], lower, drive.BothSigns, cancel, oneCurve: true));
        if (given is not null || !first.IsMet || goals.All(g => g.Error.Bar <= g.Wanted))
        {
            return new(first.Meshes, plans, goals, first.Levels);
        }

        MeshRefinement second = MeshRefinement.Run(
            device, laws[0], plans, largest, drive.BothSigns, tell, clock, cancel, laws, MeshRefinement.NextSizes(device, first.Meshes, goals, 1),
            oneCurve: true);
        return new(second.Meshes, plans, second.Goals, [.. first.Levels, .. second.Levels.Select(l => l with { Level = first.Levels.Count + l.Level })]);
    }
}
