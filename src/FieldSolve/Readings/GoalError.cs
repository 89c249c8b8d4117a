using FieldSolve.Fields;

namespace FieldSolve.Readings;

/// <summary>
/// Where the difference of a reading between a mesh and its uniform split comes from: the residual of the coarse solution on the split mesh, weighted
/// with what the fine adjoint adds to its coarse interpolant, node by node. R. Becker, R. Rannacher, Acta Numerica 10, 1 (2001), section 3;
/// the sum by nodes follows T. Richter, T. Wick, J. Comput. Appl. Math. 279, 192 (2015). As the rate of convergence is known place by place, so is what
/// the fine mesh still lacks (L. F. Richardson's extrapolation, Phil. Trans. R. Soc. A 226, 299 (1927), applied locally): the reading is corrected by
/// it, and the bar covers what the correction may miss.
/// </summary>
internal sealed class GoalError
{
    // Contributions of both signs cancel; a bar that trusted the cancellation fully would now and then be far too small.
    private const double Distrust = 0.2;

    // Where singular rates mix nothing is corrected there, and the two signs may belong to different rates.
    private const double MixedDistrust = 0.25;

    // However badly the correction did on the mesh before, it is not worse than this.
    private const double MostDoubt = 10;

    // Two meshes of about the same size say little; their corrections count as differing by this share at least.
    private const double LeastStep = 0.25;

    // A current that squeezes through layers far thinner than the triangles changes by some 20 % a split: a geometric series with that ratio
    // still lacks four times its last step. Measured on a disc with an anisotropy of 10^4 and more.
    private const double Lacking = 5;

    private readonly double corrected;  // sum of the sizes of what the correction consists of
    private readonly double rest;       // part of the bar that does not depend on how good the correction is

    private readonly double least;      // least doubt
    private readonly double doubt;      // doubt in the bar

    private readonly double unresolved; // part of the bar of a mesh on which no rate is reached

    private GoalError(double correction, double corrected, double rest, double least, double doubt, double[] perTriangle, double unresolved = 0)
    {
        this.unresolved = unresolved;
        (this.least, this.doubt) = (least, doubt);
        Correction = correction;
        this.corrected = corrected;
        this.rest = rest;
        Bar = (doubt * corrected) + rest + unresolved;
        PerTriangle = perTriangle;
    }

    /// <summary>What the fine mesh lacks, to the best of our knowledge: exact minus fine, V.</summary>
    public double Correction { get; }

    /// <summary>Estimated error after the correction, V.</summary>
    public double Bar { get; }

    /// <summary>Share in the bar, in absolute value, by coarse triangle, V.</summary>
    public double[] PerTriangle { get; }

    /// <summary>The same for another drive of a linear sheet.</summary>
    public GoalError Times(double factor) =>
        new(
            factor * Correction, Math.Abs(factor) * corrected, Math.Abs(factor) * rest, least, least,
            [.. PerTriangle.Select(e => Math.Abs(factor) * e)], Math.Abs(factor) * unresolved);

    /// <summary>
    /// The same with a wider bar where the law bends the solution so much that the mesh lacks something else than it does in the limit of small drive:
    /// there the rates are reached later (measured on the ring with a saturating law of benchmarks/accuracy.md).
    /// </summary>
    /// <param name="weak">Error per ampere in the limit of small drive.</param>
    /// <param name="current">A.</param>
    public GoalError Beside(GoalError weak, double current)
    {
        double here = Correction / current;
        double change = here == 0 ? 0 : Math.Min(1, Math.Abs((here - weak.Correction) / here));
        return With(least + (change * (1 - least)), true);
    }

    /// <summary>The same with a bar for a mesh on which no rate is reached, as where the anisotropy is too large for it: it may lack several times what its split changed.</summary>
    /// <param name="difference">Fine minus coarse reading, in the unit of this error.</param>
    public GoalError Unresolved(double difference)
    {
        double more = Lacking * Math.Abs(difference), wider = Bar > 0 ? (Bar + more) / Bar : 1;
        return new(Correction, corrected, rest, least, least, [.. PerTriangle.Select(e => wider * e)], more);
    }

    /// <summary>The same with a bar that trusts the correction no further than to its sign: for a mesh that nothing can be compared with yet.</summary>
    public GoalError Untried() => With(1);

    /// <summary>The same with a bar that trusts the correction as far as that of the same reading did on these triangles before they were moved a little.</summary>
    /// <param name="before">Error of that reading.</param>
    public GoalError TriedAs(GoalError before) => With(Math.Max(least, before.doubt));

    /// <summary>
    /// The same with a wider bar when the corrected value moved by more than could be expected since the mesh before: the rates are not reached
    /// there, and perhaps not here.
    /// </summary>
    /// <param name="before">Error on the mesh before.</param>
    /// <param name="moved">Corrected value less the corrected value on the mesh before, V.</param>
    public GoalError AfterMove(GoalError before, double moved)
    {
        // If both corrections miss the same share k of themselves, the corrected value moves by k times their difference.
        double missed = Math.Abs(moved) - before.rest, step = Math.Max(before.corrected - corrected, LeastStep * before.corrected);
        return With(missed > 0 && step > 0 ? Math.Clamp(missed / step, least, MostDoubt) : least);
    }

    private GoalError With(double doubt, bool forGood = false)
    {
        double wider = Bar > 0 ? ((doubt * corrected) + rest + unresolved) / Bar : 1;
        return new(Correction, corrected, rest, forGood ? doubt : least, doubt, [.. PerTriangle.Select(e => wider * e)], unresolved);
    }

    /// <summary>Collects the contributions.</summary>
    /// <param name="between">Coarse and fine space.</param>
    /// <param name="shares">Rates of convergence.</param>
    /// <param name="difference">Fine minus coarse reading, V.</param>
    /// <param name="terms">Pairs of fine residual (A) of the coarse solution and adjoint detail (ohm), with a factor each.</param>
    public static GoalError Of(
        Prolongation between, ErrorShares shares, double difference, ReadOnlySpan<(double Factor, double[] Residual, double[] Detail)> terms)
    {
        double singular = 0, singularLeft = 0, blunt = 0, size = 0;
        double[] perTriangle = new double[shares.Remaining.Length];
        for (int k = 0; k < between.Parent.Length; k++)
        {
            int unknown = between.UnknownOf(k);
            double eta = 0;
            foreach ((double factor, double[] residual, double[] detail) in terms)
            {
                eta -= factor * residual[unknown] * detail[k];
            }

            int first = between.Parent[k], second = between.Second[k];
            int leading = second >= 0 && shares.Remaining[second] > shares.Remaining[first] ? second : first;
            double left = eta * shares.Remaining[leading], doubt = shares.Doubt + Distrust;
            switch (shares.Kinds[leading])
            {
                case Falloff.Singular:
                    singular += eta;
                    singularLeft += left;
                    size += (shares.SingularIsKnown ? Distrust : MixedDistrust) * Math.Abs(left);
                    doubt = shares.SingularIsKnown ? doubt : 1 + MixedDistrust;
                    break;
                case Falloff.Blunt:
                    blunt += left;
                    size += Distrust * Math.Abs(left);
                    doubt = 1 + Distrust;
                    break;
                default:
                    size += Distrust * Math.Abs(left);
                    break;
            }

            double share = doubt * Math.Abs(left);
            perTriangle[first] += second < 0 ? share : share / 2;
            if (second >= 0)
            {
                perTriangle[second] += share / 2;
            }
        }

        // The sum over the nodes misses what the true arc moves between the two meshes; the difference has it, and it goes like h^4 too.
        double smooth = ErrorShares.Smooth * (difference - singular);
        double correction = smooth + (shares.SingularIsKnown ? singularLeft : 0);

        // The kinds converge at different rates, so their cancellation is not counted on.
        double rest = Math.Abs(blunt) + size, corrected = Math.Abs(smooth);
        (corrected, rest) = shares.SingularIsKnown ? (corrected + Math.Abs(singularLeft), rest) : (corrected, rest + Math.Abs(singularLeft));
        return new(correction, corrected, rest, shares.Doubt, shares.Doubt, perTriangle);
    }
}
