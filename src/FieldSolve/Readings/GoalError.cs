using FieldSolve.Fields;

namespace FieldSolve.Readings;

/// <summary>
/// Where the difference of a reading between a mesh and its uniform split comes from: the residual of the coarse solution on the split mesh, weighted
/// with what the fine adjoint adds to its coarse interpolant, node by node. R. Becker, R. Rannacher, Acta Numerica 10, 1 (2001), section 3;
/// the sum by nodes follows T. Richter, T. Wick, J. Comput. Appl. Math. 279, 192 (2015).
/// </summary>
internal sealed class GoalError
{
    // Contributions of both signs cancel; a bar that trusted the cancellation fully would now and then be far too small.
    private const double Distrust = 0.1;

    private GoalError(double bar, double[] perTriangle)
    {
        Bar = bar;
        PerTriangle = perTriangle;
    }

    /// <summary>Estimated error on the fine mesh, V.</summary>
    public double Bar { get; }

    /// <summary>What remains on the fine mesh, in absolute value, by coarse triangle, V.</summary>
    public double[] PerTriangle { get; }

    /// <summary>The same for a larger or smaller drive of a linear sheet.</summary>
    public GoalError Times(double factor) => new(factor * Bar, [.. PerTriangle.Select(e => factor * e)]);

    /// <summary>Collects the contributions.</summary>
    /// <param name="between">Coarse and fine space.</param>
    /// <param name="remaining">Per coarse triangle: error left on the fine mesh, as a share of the difference.</param>
    /// <param name="allowance">Factor on all contributions, for what the known rates of convergence do not cover.</param>
    /// <param name="terms">Pairs of fine residual (A) of the coarse solution and adjoint detail (ohm), with a factor each.</param>
    public static GoalError Of(
        Prolongation between, double[] remaining, double allowance, ReadOnlySpan<(double Factor, double[] Residual, double[] Detail)> terms)
    {
        double smooth = 0, smoothSize = 0, singular = 0, singularSize = 0;
        double[] perTriangle = new double[remaining.Length];
        double usual = remaining.Length > 0 ? remaining.Min() : 0;
        for (int k = 0; k < between.Parent.Length; k++)
        {
            int unknown = between.UnknownOf(k);
            double eta = 0;
            foreach ((double factor, double[] residual, double[] detail) in terms)
            {
                eta -= factor * residual[unknown] * detail[k];
            }

            int first = between.Parent[k], second = between.Second[k];
            double share = second < 0 ? remaining[first] : Math.Max(remaining[first], remaining[second]);
            eta *= share * allowance;
            double size = Math.Abs(eta);
            if (share > usual)
            {
                singular += eta;
                singularSize += size;
            }
            else
            {
                smooth += eta;
                smoothSize += size;
            }

            perTriangle[first] += second < 0 ? size : size / 2;
            if (second >= 0)
            {
                perTriangle[second] += size / 2;
            }
        }

        // The two kinds converge at different rates, so their cancellation is not counted on.
        return new(Math.Abs(smooth) + Math.Abs(singular) + (Distrust * (smoothSize + singularSize)), perTriangle);
    }
}
