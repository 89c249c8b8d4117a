using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Lockin;

/// <summary>
/// Adjoints of the readings of one wiring along its current: solved at the base phases of one cycle, by polynomials of the current between
/// them. They weigh errors and give the first order of the gate's charge.
/// </summary>
internal sealed class AdjointSet
{
    private readonly double[] currents;
    private readonly double[][][] details;   // node, reading
    private readonly double[][] lags;

    /// <summary>Solves at the base phases of a cycle.</summary>
    /// <param name="meshes">Both meshes.</param>
    /// <param name="plan">Wiring and pairs.</param>
    /// <param name="cycle">The cycle with the largest currents that will be asked for.</param>
    /// <param name="charge">Values of the gate's charge matrix on the fine mesh; null without a gate.</param>
    /// <param name="cancel">Stops the factorisations.</param>
    public AdjointSet(MeshPair meshes, ReadingPlan plan, CycleStates cycle, double[]? charge, CancellationToken cancel)
    {
        IReadOnlyList<PhaseState> states = cycle.Base;
        currents = [.. states.Select(s => s.Current)];
        details = new double[states.Count][][];
        lags = new double[states.Count][];
        bool same = meshes.Fine.Equations.Law.IsLinear || cycle.Amplitude == 0;
        SparseLu? own = null;
        double[] jacobian = new double[same ? 0 : meshes.Fine.Space.Pattern.Count + 1];
        for (int j = 0; j < states.Count; j++)
        {
            if (same && j > 0)
            {
                (details[j], lags[j]) = (details[0], lags[0]);
                continue;
            }

            (details[j], lags[j]) = At(meshes, plan, FactorAt(meshes.Fine, states[j], jacobian, ref own, cancel), charge);
        }
    }

    /// <summary>True when the lags are known.</summary>
    public bool HasLag => lags[0].Length > 0;

    /// <summary>Per reading: what the fine adjoint adds to its coarse interpolant, ohm.</summary>
    public double[][] Details(double current)
    {
        double[] weight = PhaseNodes.Interpolation(currents, current);
        int readings = details[0].Length, length = details[0][0].Length;
        double[][] sum = new double[readings][];
        for (int k = 0; k < readings; k++)
        {
            int only = Array.IndexOf(weight, 1);
            if (only >= 0)
            {
                sum[k] = details[only][k];
                continue;
            }

            sum[k] = new double[length];
            for (int j = 0; j < weight.Length; j++)
            {
                double[] from = details[j][k], to = sum[k];
                for (int i = 0; i < length; i++)
                {
                    to[i] += weight[j] * from[i];
                }
            }
        }

        return sum;
    }

    /// <summary>Voltage per rate of change of the current that the gate's charge adds to a reading, ohm second.</summary>
    public double Lag(double current, int reading)
    {
        double[] weight = PhaseNodes.Interpolation(currents, current);
        double sum = 0;
        for (int j = 0; j < weight.Length; j++)
        {
            sum += weight[j] * lags[j][reading];
        }

        return sum;
    }

    // Where the Jacobian is not positive definite (beyond the law), the one at zero field has to do.
    private static SparseLu FactorAt(FieldLevel level, PhaseState state, double[] jacobian, ref SparseLu? own, CancellationToken cancel)
    {
        if (level.Equations.Law.IsLinear || state.Current == 0)
        {
            return level.AtZero;
        }

        own ??= new SparseLu(level.Analysis);
        level.Equations.Jacobian(state.Fine, jacobian);
        try
        {
            own.Factor(jacobian.AsSpan(0, jacobian.Length - 1), cancel);
            return own;
        }
        catch (PivotException)
        {
            return level.AtZero;
        }
    }

    private static (double[][] Details, double[] Lag) At(MeshPair meshes, ReadingPlan plan, SparseLu lu, double[]? charge)
    {
        int n = meshes.Fine.Space.Size;
        double[] charged = charge is null ? [] : Charged(meshes.Fine, plan, lu, charge);
        double[][] vectors = plan.Vectors(meshes.Fine), details = new double[plan.Count][];
        double[] lag = new double[charge is null ? 0 : plan.Count], z = new double[n + 1];
        for (int k = 0; k < plan.Count; k++)
        {
            lu.SolveTransposed(vectors[k].AsSpan(0, n), z.AsSpan(0, n));
            details[k] = new double[meshes.Between.Parent.Length];
            meshes.Between.Detail(z, details[k]);
            for (int i = 0; i < charged.Length; i++)
            {
                lag[k] -= z[i] * charged[i];
            }
        }

        return (details, lag);
    }

    // C du/dI: the charge that moves per ampere.
    private static double[] Charged(FieldLevel level, ReadingPlan plan, SparseLu lu, double[] charge)
    {
        int n = level.Space.Size;
        double[] fed = new double[n + 1], response = new double[n], product = new double[n];
        fed[level.Space.ContactUnknown[plan.Wiring.Source]] += 1;
        fed[level.Space.ContactUnknown[plan.Wiring.Drain]] -= 1;
        lu.Solve(fed.AsSpan(0, n), response);
        SparseProduct.Multiply(level.Space.Pattern, charge.AsSpan(0, level.Space.Pattern.Count), response, product);
        return product;
    }
}
