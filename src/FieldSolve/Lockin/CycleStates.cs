using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;

namespace FieldSolve.Lockin;

/// <summary>
/// The steady states of one wiring at the currents of all phases of a cycle; <see cref="States"/> by node of the doubled phases, and
/// <see cref="CoarseValues"/>, readings on the coarse mesh by node, for the base phases, their doubling, and further doublings where the response bends more.
/// </summary>
internal sealed record CycleStates(double CurrentRms, double Offset, PhaseState[] States, IReadOnlyList<double[][]> CoarseValues)
{
    /// <summary>The states at the base phases, which are solved on the fine mesh too.</summary>
    public IReadOnlyList<PhaseState> Base => [.. States.Where((_, j) => j % 2 == 0)];

    /// <summary>Potentials at a current inside the cycle, by a polynomial through its states, V.</summary>
    public double[] Guess(double current, bool fine)
    {
        PhaseState[] nodes = fine && States.Any(s => s.Fine.Length == 0) ? [.. Base] : States;
        double[] weight = PhaseNodes.Interpolation([.. nodes.Select(s => s.Current)], current);
        double[] sum = new double[(fine ? nodes[0].Fine : nodes[0].Coarse).Length];
        for (int j = 0; j < nodes.Length; j++)
        {
            double[] u = fine ? nodes[j].Fine : nodes[j].Coarse;
            for (int i = 0; i < sum.Length && weight[j] != 0; i++)
            {
                sum[i] += weight[j] * u[i];
            }
        }

        return sum;
    }

    /// <summary>Peak of the alternating part, A.</summary>
    public double Amplitude => Math.Sqrt(2) * CurrentRms;

    /// <summary>All steps together.</summary>
    public NewtonOutcome Outcome => States.Aggregate(default(NewtonOutcome), (sum, s) => sum.Then(s.Outcome));

    /// <summary>Worst residual of all states, relative to its current.</summary>
    public double LargestResidual => States.Max(s => s.Outcome.RelativeResidual);
}

/// <summary>Solves the states of the cycles of one wiring, one amplitude after the other.</summary>
internal sealed class CycleSolver
{
    // The phases may take this share of a wanted error, and are doubled at most so often.
    private const double PhaseShare = 0.2;
    private const double EvenFloor = 1e-8;
    public const int MostIntervals = 96;

    private readonly Lazy<PhasePath>[] paths;   // positive and negative currents
    private readonly bool linear;
    private readonly bool odd;
    private readonly double offset;
    private readonly MeshSpec wanted;

    public CycleSolver(Func<PhasePath> path, bool linear, bool odd, double offset, MeshSpec wanted)
    {
        paths = [new(path), new(path)];
        (this.linear, this.odd, this.offset, this.wanted) = (linear, odd, offset, wanted);
    }

    /// <summary>Why the law refused, when it did.</summary>
    public string? Refusal => paths.Where(p => p.IsValueCreated).Select(p => p.Value.Refusal).FirstOrDefault(r => r is not null);

    /// <summary>The states of a cycle; null when the sheet cannot carry one of the currents.</summary>
    /// <param name="rms">A.</param>
    /// <param name="maps">Solve every node on the fine mesh, for the frames.</param>
    /// <param name="near">A larger cycle to guess from; may be null.</param>
    /// <param name="cancel">Checked at every step.</param>
    public CycleStates? Solve(double rms, bool maps, CycleStates? near, CancellationToken cancel)
    {
        PhaseNodes nodes = PhaseNodes.Doubled;
        double[] currents = [.. nodes.Sine.Select(s => offset + (Math.Sqrt(2) * rms * s))];
        PhaseUse Use(int j) => j % 2 == 0 ? PhaseUse.Measure : maps ? PhaseUse.Map : PhaseUse.Coarse;
        var states = new PhaseState?[currents.Length];
        if (linear)
        {
            double largest = MeshRefinement.Largest(currents);
            if (paths[0].Value.Solve(largest == 0 ? 1 : largest, PhaseUse.Measure, null, cancel) is not { } one)
            {
                return null;
            }

            PhaseState per = one.Times(1 / one.Current);
            PhaseState[] scaled = [.. currents.Select((c, j) => j == 0 ? per.Times(c) with { Outcome = one.Outcome } : per.Times(c))];
            return new(rms, offset, scaled, Levels(scaled));
        }

        Fill(currents, states, Use, near, cancel);
        if (states.Any(s => s is null))
        {
            return null;
        }

        List<double[][]> values = Levels(states!);
        while (nodes.Intervals < MostIntervals && !IsFine(nodes, values))
        {
            // The nodes are nested: every second one is known.
            nodes = nodes.Doubling();
            double[] more = [.. nodes.Sine.Select(s => offset + (Math.Sqrt(2) * rms * s))];
            var between = new PhaseState?[nodes.Intervals / 2];
            Fill([.. more.Where((_, j) => j % 2 == 1)], between, _ => PhaseUse.Coarse, near, cancel);
            if (between.Any(s => s is null))
            {
                return null;
            }

            double[][] known = values[^1];
            values.Add([.. more.Select((_, j) => j % 2 == 0 ? known[j / 2] : between[j / 2]!.CoarseValues)]);
        }

        return new(rms, offset, states!, values);
    }

    private static List<double[][]> Levels(PhaseState[] states) =>
        [[.. states.Where((_, j) => j % 2 == 0).Select(s => s.CoarseValues)], [.. states.Select(s => s.CoarseValues)]];

    // Solves at currents that are symmetric about the offset, from the smallest on, with one path for each sign.
    private void Fill(double[] currents, PhaseState?[] states, Func<int, PhaseUse> use, CycleStates? near, CancellationToken cancel)
    {
        void Follow(bool negative)
        {
            foreach (int j in Enumerable.Range(0, currents.Length).Where(j => currents[j] < 0 == negative).OrderBy(j => Math.Abs(currents[j])))
            {
                states[j] = paths[negative ? 1 : 0].Value.Solve(currents[j], use(j), near, cancel);
                if (states[j] is null)
                {
                    return;
                }
            }
        }

        if (odd && offset == 0)
        {
            Follow(false);
            for (int j = 0; j < currents.Length; j++)
            {
                states[j] ??= states[currents.Length - 1 - j]?.Times(-1);
            }

            return;
        }

        try
        {
            Parallel.Invoke(new ParallelOptions { CancellationToken = cancel }, () => Follow(true), () => Follow(false));
        }
        catch (AggregateException e) when (e.InnerExceptions.All(x => x is OperationCanceledException))
        {
            throw new OperationCanceledException(cancel);
        }
    }

    // Whether the last doubling changed every reported harmonic by little enough.
    private bool IsFine(PhaseNodes nodes, List<double[][]> values)
    {
        var before = new PhaseNodes(nodes.Intervals / 2);
        int readings = values[^1][0].Length;
        double[][] last = [.. Enumerable.Range(0, readings).Select(k => values[^1].Select(v => v[k]).ToArray())];
        double along = last.Max(v => Math.Abs(nodes.Amplitude(1, v)));
        for (int k = 0; k < readings; k++)
        {
            double[] few = [.. values[^2].Select(v => v[k])];
            for (int h = 0; h <= PhaseNodes.HighestHarmonic; h++)
            {
                double now = nodes.Amplitude(h, last[k]), change = Math.Abs(now - before.Amplitude(h, few));
                double may = h is 0 or 2 ? Math.Max(wanted.EvenError * Math.Abs(now), EvenFloor * along) : wanted.Error * Math.Abs(nodes.Amplitude(1, last[k]));
                if (change > PhaseShare * Math.Max(may, 1e-3 * wanted.Error * along))
                {
                    return false;
                }
            }
        }

        return true;
    }
}
