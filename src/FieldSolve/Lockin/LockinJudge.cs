using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Lockin;

/// <summary>One wiring at one current and frequency before it is judged. Peak values; arrays by reading, then harmonic.</summary>
internal sealed record CycleAnswer(
    ReadingPlan Plan, double CurrentRms, double? Frequency, double[][] Sine, double[][] Cosine, double[][] Error, double[][] Guard, LawExit? Exit,
    (double SheetCurrent, double Power) Peak, int Steps)
{
    /// <summary>False when there is no solution.</summary>
    public bool Converged => Sine.Length > 0;

    public static CycleAnswer None(ReadingPlan plan, double rms, double? frequency) => new(plan, rms, frequency, [], [], [], [], null, default, 0);
}

/// <summary>Turns answers into readings with a status each.</summary>
internal static class LockinJudge
{
    /// <summary>Judges one point.</summary>
    /// <param name="device">Wanted errors.</param>
    /// <param name="answer">The point.</param>
    /// <param name="along">Largest RMS first harmonic along of all wirings at this current and frequency, V.</param>
    public static LockinPoint Of(SheetDevice device, CycleAnswer answer, double along)
    {
        ReadingPlan plan = answer.Plan;
        if (!answer.Converged)
        {
            return new(plan.Wiring.Name, answer.CurrentRms, answer.Frequency, [], [], RowStatus.NotConverged, null, 0, 0, answer.Steps);
        }

        var readings = new List<HarmonicReading>();
        double miss = 0;
        double[][] size = [.. Enumerable.Range(0, plan.Count).Select(k => Enumerable.Range(0, PhaseNodes.HighestHarmonic + 1)
            .Select(h => Rms(h) * Math.Sqrt(Square(answer.Sine[k][h]) + Square(answer.Cosine[k][h]))).ToArray())];
        for (int k = 0; k < plan.Count; k++)
        {
            for (int h = 0; h <= PhaseNodes.HighestHarmonic; h++)
            {
                double x = Rms(h) * (h == 0 ? answer.Cosine[k][h] : answer.Sine[k][h]), y = h == 0 ? 0 : Rms(h) * answer.Cosine[k][h];
                double error = Rms(h) * answer.Error[k][h], guard = Rms(h) * answer.Guard[k][h];

                // The second harmonic, and without an offset the DC part, are the even part of the response as a lock-in reads it.
                bool even = plan.HasEven[k] && (h == 2 || (h == 0 && device.Drive!.Offset == 0)) && !device.Law.IsLinear;
                double wanted = even
                    ? MeshRefinement.WantedEven(device.Mesh, along, size.Where((_, i) => plan.HasEven[i]).Select(s => s[h]), size[k][h])
                    : MeshRefinement.Wanted(device.Mesh, along, size[k][h]);
                RowStatus status = answer.Exit is not null && Math.Abs(guard) > wanted ? RowStatus.OutsideLaw
                    : error > wanted && along > 0 ? RowStatus.ErrorAboveWanted
                    : RowStatus.Ok;
                miss = status == RowStatus.ErrorAboveWanted ? Math.Max(miss, error / wanted) : miss;
                readings.Add(new(plan.Pairs[k].Name, h, x, y, error, guard, status));
            }
        }

        RowStatus worst = new[] { RowStatus.OutsideLaw, RowStatus.ErrorAboveWanted }.Where(s => readings.Any(r => r.Status == s)).FirstOrDefault(RowStatus.Ok);
        return new(
            plan.Wiring.Name, answer.CurrentRms, answer.Frequency, readings,
            [.. plan.Pairs.Select((p, k) => new Waveform(p.Name, answer.Sine[k], answer.Cosine[k]))], worst, answer.Exit,
            answer.Peak.SheetCurrent, answer.Peak.Power, answer.Steps)
        {
            Miss = miss,
        };
    }

    /// <summary>Largest RMS first harmonic along (of any pair where nothing is read along), V; the DC part where only that is driven. No less than <see cref="VoltageScale"/> says.</summary>
    public static double AlongScale(SheetDevice device, double rms, IEnumerable<CycleAnswer> answers) => VoltageScale.Of(device, rms == 0 ? device.Drive!.Offset : rms, answers.Where(a => a.Converged).SelectMany(
        a => a.Plan.Pairs.Select((p, k) => (p == a.Plan.Wiring.Along, Math.Max(
            Math.Abs(a.Cosine[k][0]) * (a.CurrentRms == 0 ? 1 : 0), Rms(1) * Math.Sqrt(Square(a.Sine[k][1]) + Square(a.Cosine[k][1])))))));

    private static double Rms(int harmonic) => harmonic == 0 ? 1 : Math.Sqrt(0.5);

    private static double Square(double v) => v * v;
}
