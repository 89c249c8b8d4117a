using FieldSolve.Runs;
using FieldSolve.Solving;

namespace FieldSolve.Lockin;

/// <summary>The steady states of one wiring at the currents of all phases of a cycle; <see cref="States"/> by node of the doubled phases.</summary>
internal sealed record CycleStates(double CurrentRms, double Offset, PhaseState[] States)
{
    /// <summary>The states at the base phases, which are solved on the fine mesh too.</summary>
    public IReadOnlyList<PhaseState> Base => [.. States.Where((_, j) => j % 2 == 0)];

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
    private readonly Lazy<PhasePath>[] paths;   // positive and negative currents
    private readonly bool linear;
    private readonly bool odd;
    private readonly double offset;

    public CycleSolver(Func<PhasePath> path, bool linear, bool odd, double offset)
    {
        paths = [new(path), new(path)];
        (this.linear, this.odd, this.offset) = (linear, odd, offset);
    }

    /// <summary>Why the law refused, when it did.</summary>
    public string? Refusal => paths.Where(p => p.IsValueCreated).Select(p => p.Value.Refusal).FirstOrDefault(r => r is not null);

    /// <summary>The states of a cycle; null when the sheet cannot carry one of the currents.</summary>
    /// <param name="rms">A.</param>
    /// <param name="maps">Solve every node on the fine mesh, for the frames.</param>
    /// <param name="cancel">Checked at every step.</param>
    public CycleStates? Solve(double rms, bool maps, CancellationToken cancel)
    {
        PhaseNodes nodes = PhaseNodes.Doubled;
        double[] currents = [.. nodes.Sine.Select(s => offset + (Math.Sqrt(2) * rms * s))];
        PhaseUse Use(int j) => j % 2 == 0 ? PhaseUse.Measure : maps ? PhaseUse.Map : PhaseUse.Coarse;
        var states = new PhaseState?[currents.Length];
        if (linear)
        {
            double largest = MeshRefinement.Largest(currents);
            if (paths[0].Value.Solve(largest == 0 ? 1 : largest, PhaseUse.Measure, cancel) is not { } one)
            {
                return null;
            }

            PhaseState per = one.Times(1 / one.Current);
            return new(rms, offset, [.. currents.Select((c, j) => j == 0 ? per.Times(c) with { Outcome = one.Outcome } : per.Times(c))]);
        }

        bool mirrored = odd && offset == 0;
        void Follow(bool negative)
        {
            foreach (int j in Enumerable.Range(0, currents.Length).Where(j => currents[j] < 0 == negative).OrderBy(j => Math.Abs(currents[j])))
            {
                states[j] = paths[negative ? 1 : 0].Value.Solve(currents[j], Use(j), cancel);
                if (states[j] is null)
                {
                    return;
                }
            }
        }

        if (mirrored)
        {
            Follow(false);
            for (int j = 0; j < currents.Length; j++)
            {
                states[j] ??= states[currents.Length - 1 - j]?.Times(-1);
            }
        }
        else
        {
            try
            {
                Parallel.Invoke(new ParallelOptions { CancellationToken = cancel }, () => Follow(true), () => Follow(false));
            }
            catch (AggregateException e) when (e.InnerExceptions.All(x => x is OperationCanceledException))
            {
                throw new OperationCanceledException(cancel);
            }
        }

        return states.All(s => s is not null) ? new(rms, offset, states!) : null;
    }
}
