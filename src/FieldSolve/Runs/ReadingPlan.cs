using FieldSolve.Device;
using FieldSolve.Solving;

namespace FieldSolve.Runs;

/// <summary>What is read for one wiring: its pairs, then the source.</summary>
internal sealed class ReadingPlan
{
    public const string Source = "source";

    public ReadingPlan(Wiring wiring)
        : this(wiring, true, false)
    {
    }

    /// <param name="wiring">Source, drain and pairs.</param>
    /// <param name="withSource">The two-terminal voltage is read too.</param>
    /// <param name="allEven">The even part of every pair is wanted, not only along and across.</param>
    public ReadingPlan(Wiring wiring, bool withSource, bool allEven)
    {
        Wiring = wiring;
        Pairs = [.. wiring.Pairs, .. withSource ? [new Pair(Source, new(false, wiring.Source), new(false, wiring.Drain))] : Array.Empty<Pair>()];
        HasEven = [.. Pairs.Select(p => allEven || p == wiring.Along || p == wiring.Across)];
    }

    public Wiring Wiring { get; }

    public IReadOnlyList<Pair> Pairs { get; }

    /// <summary>Whether the even part of a pair is reported (along and across).</summary>
    public IReadOnlyList<bool> HasEven { get; }

    public int Count => Pairs.Count;

    /// <summary>The voltages of a solution, V.</summary>
    public double[] Read(FieldLevel level, ReadOnlySpan<double> u)
    {
        double[] v = new double[Count];
        for (int k = 0; k < v.Length; k++)
        {
            v[k] = u[level.Space.UnknownOf(Pairs[k].Plus)] - u[level.Space.UnknownOf(Pairs[k].Minus)];
        }

        return v;
    }

    /// <summary>The readings as vectors over the unknowns.</summary>
    public double[][] Vectors(FieldLevel level) => [.. Pairs.Select(p => level.ReadingVector(p.Plus, p.Minus))];
}
