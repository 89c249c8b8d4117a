using FieldSolve.Runs;
using FieldSolve.Sparse;

namespace FieldSolve.Lockin;

/// <summary>What the gate's charge adds to the quasi-static harmonics of one wiring at one amplitude and frequency.</summary>
internal sealed class ChargedCycle
{
    // Below this shift of the source's first harmonic, relative to itself, the first order in the frequency is all: the second is its square.
    private const double FirstOrderIsEnough = 1e-5;

    private ChargedCycle(int readings)
    {
        Shift = [.. Enumerable.Range(0, readings).Select(_ => new (double, double)[PhaseNodes.HighestHarmonic + 1])];
        Error = [.. Enumerable.Range(0, readings).Select(_ => new double[PhaseNodes.HighestHarmonic + 1])];
    }

    /// <summary>Added parts along sin and cos, peak, V: by reading, then harmonic 0 to 5.</summary>
    public (double Sine, double Cosine)[][] Shift { get; }

    /// <summary>Estimated error of the shift, V.</summary>
    public double[][] Error { get; }

    /// <summary>Sweeps of the harmonic balance; 0 where the first order was enough.</summary>
    public int Sweeps { get; private set; }

    /// <summary>Potentials on the fine mesh at the base phases; null where the first order was enough.</summary>
    public double[][]? Fine { get; private set; }

    /// <summary>The shift; null when the harmonic balance fails.</summary>
    /// <param name="meshes">Both meshes, the drain's metal at zero.</param>
    /// <param name="coarse">The coarse one with its charge.</param>
    /// <param name="fine">The fine one with its charge.</param>
    /// <param name="plan">Wiring and pairs.</param>
    /// <param name="measure">The quasi-static harmonics.</param>
    /// <param name="frequency">Hz.</param>
    /// <param name="cancel">Checked at every sweep.</param>
    public static ChargedCycle? Of(
        MeshPair meshes, ChargedSheet coarse, ChargedSheet fine, ReadingPlan plan, CycleMeasure measure, double frequency, CancellationToken cancel)
    {
        double omega = 2 * Math.PI * frequency;
        var result = new ChargedCycle(plan.Count);
        int source = plan.Count - 1;
        (double s1, double c1) = measure.Shift[source][1];
        double gauge = omega * Math.Sqrt((s1 * s1) + (c1 * c1)), size = Math.Abs(measure.Amplitude[source][1]);
        if (gauge <= FirstOrderIsEnough * size)
        {
            double second = size > 0 ? gauge * gauge / size : 0;
            for (int k = 0; k < plan.Count; k++)
            {
                for (int h = 0; h <= PhaseNodes.HighestHarmonic; h++)
                {
                    result.Shift[k][h] = (omega * measure.Shift[k][h].Sine, omega * measure.Shift[k][h].Cosine);
                    result.Error[k][h] = second;
                }
            }

            return result;
        }

        try
        {
            return result.Balance(meshes, coarse, fine, plan, measure.Cycle, omega, cancel) ? result : null;
        }
        catch (PivotException)
        {
            return null;
        }
    }

    /// <summary>The potentials at twice the base phases, by trigonometric interpolation.</summary>
    public static double[][] Resampled(double[][] u)
    {
        int few = u.Length, many = 2 * few;
        double[][] result = new double[many][];
        for (int m = 0; m < many; m++)
        {
            if (m % 2 == 0)
            {
                result[m] = u[m / 2];
                continue;
            }

            // Cardinal function of an even number of points (L. N. Trefethen, Spectral Methods in MATLAB, 2000, chapter 3).
            result[m] = new double[u[0].Length];
            for (int l = 0; l < few; l++)
            {
                double x = Math.PI * (m - (2 * l)) / few;
                double weight = Math.Sin(few * x / 2) / (few * Math.Tan(x / 2));
                for (int i = 0; i < result[m].Length; i++)
                {
                    result[m][i] += weight * u[l][i];
                }
            }
        }

        return result;
    }

    private bool Balance(
        MeshPair meshes, ChargedSheet coarse, ChargedSheet fine, ReadingPlan plan, CycleStates cycle, double omega, CancellationToken cancel)
    {
        PhaseNodes few = PhaseNodes.Base, many = PhaseNodes.Doubled;
        double[][][] readings = new double[3][][];
        for (int run = 0; run < 3; run++)
        {
            PhaseNodes nodes = run == 2 ? many : few;
            PhaseState[] states = [.. Enumerable.Range(0, nodes.Phases).Select(m => (run == 2 ? cycle.States : cycle.Base)[nodes.NodeAt(m)])];
            double[][] u = [.. states.Select(s => (double[])(run == 0 ? s.Fine : s.Coarse).Clone())];
            var balance = new HarmonicBalance(run == 0 ? fine : coarse, plan.Wiring.Source, plan.Wiring.Drain, omega, u);
            bool done = balance.Solve(u, [.. states.Select(s => s.Current)], cancel);
            Sweeps += balance.Sweeps;
            if (!done)
            {
                return false;
            }

            // Readings of the periodic state minus the quasi-static ones at the same phases.
            readings[run] = [.. u.Select((v, m) => plan.Read(run == 0 ? meshes.Fine : meshes.Coarse, v)
                .Zip(run == 0 ? states[m].FineValues : states[m].CoarseValues, (a, b) => a - b).ToArray())];
            Fine = run == 0 ? u : Fine;
        }

        for (int k = 0; k < plan.Count; k++)
        {
            for (int h = 0; h <= PhaseNodes.HighestHarmonic; h++)
            {
                (double Sine, double Cosine)[] part = [.. readings.Select(r => CycleTransform.Harmonic([.. r.Select(v => v[k])], h))];
                Shift[k][h] = (part[0].Sine + part[2].Sine - part[1].Sine, part[0].Cosine + part[2].Cosine - part[1].Cosine);
                Error[k][h] = Size(part[0].Sine - part[1].Sine, part[0].Cosine - part[1].Cosine)
                    + Size(part[2].Sine - part[1].Sine, part[2].Cosine - part[1].Cosine);
            }
        }

        return true;
    }

    private static double Size(double a, double b) => Math.Sqrt((a * a) + (b * b));
}
