using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Runs;

namespace FieldSolve.Turning;

/// <summary>The linear response of all directions at other anisotropy ratios with the same sqrt(a b), axis and Hall part, on the same meshes.</summary>
internal static class RatioSweep
{
    public static IReadOnlyList<RatioCurve> Of(
        SheetDevice device, MeshPair meshes, IReadOnlyList<double> ratios, IReadOnlyList<TurnPlace> places, CancellationToken cancel)
    {
        var law = PrincipalSheet.Of(device.Law.AtZeroField.ToLab(device.Axis), device.Axis);
        double mean = Math.Sqrt(law.A * law.B);
        return [.. ratios.Select(ratio =>
        {
            double root = Math.Sqrt(ratio);
            PrincipalSheet sheet = law.A >= law.B ? law with { A = mean * root, B = mean / root } : law with { A = mean / root, B = mean * root };
            var points = new RatioPoint[places.Count];
            var options = new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount };
            (int Index, TurnPlace Place)[][] groups = [.. places.Select((p, k) => (k, p)).GroupBy(p => p.p.Turn).Select(g => g.ToArray())];
            Parallel.ForEach(groups, options, group =>
            {
                MeshPair pair = meshes.WithLaw(sheet.Law(group[0].Place.Turn), cancel);
                Parallel.ForEach(group, options, p => points[p.Index] = Point(device, pair, p.Place, cancel));
            });
            return new RatioCurve(ratio, points);
        })];
    }

    private static RatioPoint Point(SheetDevice device, MeshPair meshes, TurnPlace place, CancellationToken cancel)
    {
        var plan = new ReadingPlan(place.Wiring);
        IReadOnlyList<GoalMeasure> goals = LevelMeasure.Of(meshes, plan, 1, [], false, cancel);
        (double, double)? Of(Pair? pair)
        {
            GoalMeasure? goal = goals.FirstOrDefault(g => pair is not null && plan.Pairs[g.Pair] == pair);
            return goal is null ? null : (goal.Corrected, goal.Error.Bar);
        }

        return new(place.DirectionDegrees, place.AxisDegrees(device), place.Wiring.Name, Of(place.Wiring.Along), Of(place.Wiring.Across));
    }
}
