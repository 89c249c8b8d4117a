using FieldSolve.Fields;

namespace FieldSolve.Readings;

/// <summary>
/// Where the difference of a reading between a mesh and its uniform split comes from: the residual of the coarse solution on the split mesh, weighted
/// with what the fine adjoint adds to its coarse interpolant, node by node. R. Becker, R. Rannacher, Acta Numerica 10, 1 (2001), section 3;
/// the sum by nodes follows T. Richter, T. Wick, J. Comput. Appl. Math. 279, 192 (2015).
/// </summary>
internal sealed class GoalError
{
    // A split divides the error of a smooth part by 2^4 (quadratic elements, functional), so 1/15 of the difference remains on the fine mesh;
    // allow for a rate that is not yet reached.
    private const double RegularShare = 1.0 / 10;

    // In the triangles at a contact end the error of a linear reading halves (potential ~ r^(1/2), adjoint alike): as much as the difference remains.
    private const double CoreShare = 1;

    // Contributions of both signs cancel; a bar that trusted the cancellation fully would now and then be far too small.
    private const double Distrust = 0.1;

    private GoalError(double core, double regular, double coreSum, double regularSum, double[] perTriangle)
    {
        Core = core;
        Regular = regular;
        CoreSum = coreSum;
        RegularSum = regularSum;
        PerTriangle = perTriangle;
    }

    /// <summary>Signed sum over nodes at singular points, V.</summary>
    public double Core { get; }

    /// <summary>Signed sum over all other nodes, V.</summary>
    public double Regular { get; }

    /// <summary>Sum of absolute values at singular points, V.</summary>
    public double CoreSum { get; }

    /// <summary>Sum of absolute values elsewhere, V.</summary>
    public double RegularSum { get; }

    /// <summary>What remains on the fine mesh, in absolute value, by coarse triangle, V.</summary>
    public double[] PerTriangle { get; }

    /// <summary>Estimated error on the fine mesh, V.</summary>
    public double Bar =>
        (CoreShare * (Math.Abs(Core) + (Distrust * CoreSum))) + (RegularShare * (Math.Abs(Regular) + (Distrust * RegularSum)));

    /// <summary>Collects the contributions.</summary>
    /// <param name="between">Coarse and fine space.</param>
    /// <param name="core">Per coarse triangle: whether it touches a singular point.</param>
    /// <param name="terms">Pairs of fine residual (A) of the coarse solution and adjoint detail (ohm), with a factor each.</param>
    public static GoalError Of(
        Prolongation between, bool[] core, ReadOnlySpan<(double Factor, double[] Residual, double[] Detail)> terms)
    {
        double coreSigned = 0, regularSigned = 0, coreSum = 0, regularSum = 0;
        double[] perTriangle = new double[core.Length];
        for (int k = 0; k < between.Parent.Length; k++)
        {
            int unknown = between.UnknownOf(k);
            double eta = 0;
            foreach ((double factor, double[] residual, double[] detail) in terms)
            {
                eta -= factor * residual[unknown] * detail[k];
            }

            int first = between.Parent[k], second = between.Second[k];
            double size = Math.Abs(eta);
            if (core[first] || (second >= 0 && core[second]))
            {
                coreSigned += eta;
                coreSum += size;
                size *= CoreShare;
            }
            else
            {
                regularSigned += eta;
                regularSum += size;
                size *= RegularShare;
            }

            perTriangle[first] += second < 0 ? size : size / 2;
            if (second >= 0)
            {
                perTriangle[second] += size / 2;
            }
        }

        return new(coreSigned, regularSigned, coreSum, regularSum, perTriangle);
    }
}
