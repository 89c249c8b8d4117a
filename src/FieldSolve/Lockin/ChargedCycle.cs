using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Lockin;

/// <summary>What the gate's charge adds to the quasi-static harmonics of one wiring at one amplitude and frequency.</summary>
internal sealed class ChargedCycle
{
    // Below this shift of the source's first harmonic, relative to itself, the first order in the frequency is all: the second is its square.
    private const double FirstOrderIsEnough = 1e-5;

    // The phases may take this share of a wanted error.
    private const double PhaseShare = 0.2;
    private const double EvenFloor = 1e-8;

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
    /// <param name="wanted">How fine the phases must be.</param>
    /// <param name="cancel">Checked at every sweep.</param>
    public static ChargedCycle? Of(
        MeshPair meshes, ChargedSheet coarse, ChargedSheet fine, ReadingPlan plan, CycleMeasure measure, double frequency, MeshSpec wanted,
        CancellationToken cancel)
    {
        double omega = 2 * Math.PI * frequency;
        var result = new ChargedCycle(plan.Count);
        int source = plan.Count - 1;
        (double s1, double c1) = measure.Shift[source][1];
        double gauge = omega * Math.Sqrt((s1 * s1) + (c1 * c1)), size = Math.Abs(measure.Amplitude[source][1]);
        if (gauge <= FirstOrderIsEnough * size)
        {
            // tanh(x)/x = 1 - x²/3 + 2x⁴/15: the second order is 1.2 times the square of the first on a line.
            double second = size > 0 ? 2 * gauge * gauge / size : 0;
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
            return result.Balance(meshes, coarse, fine, plan, measure.Cycle, omega, wanted, cancel) ? result : null;
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
        MeshPair meshes, ChargedSheet coarse, ChargedSheet fine, ReadingPlan plan, CycleStates cycle, double omega, MeshSpec wanted, CancellationToken cancel)
    {
        PhaseNodes few = PhaseNodes.Base;
        double[][] onFine = [.. Enumerable.Range(0, few.Phases).Select(m => (double[])cycle.Base[few.NodeAt(m)].Fine.Clone())];
        double[][] u = [.. Enumerable.Range(0, few.Phases).Select(m => (double[])cycle.Base[few.NodeAt(m)].Coarse.Clone())];
        if (!Run(fine, plan, cycle, omega, onFine, cancel) || !Run(coarse, plan, cycle, omega, u, cancel))
        {
            return false;
        }

        Fine = onFine;
        double[][] fineQuiet = [.. cycle.Base.Select(s => s.FineValues)];
        (double Sine, double Cosine)[][] first = Added(meshes.Fine, plan, onFine, fineQuiet);
        (double Sine, double Cosine)[][] before = Added(meshes.Coarse, plan, u, cycle.CoarseValues[0]), coarseFirst = before, last = before;

        // The phases are doubled on the coarse mesh until that changes little enough.
        for (int doubling = 1; u.Length < 2 * CycleSolver.MostIntervals; doubling++)
        {
            u = Resampled(u);
            if (!Run(coarse, plan, cycle, omega, u, cancel))
            {
                return false;
            }

            (before, last) = (last, Added(meshes.Coarse, plan, u, cycle.CoarseValues[Math.Min(doubling, cycle.CoarseValues.Count - 1)]));
            if (IsFine(before, last, cycle, wanted))
            {
                break;
            }
        }

        for (int k = 0; k < plan.Count; k++)
        {
            for (int h = 0; h <= PhaseNodes.HighestHarmonic; h++)
            {
                Shift[k][h] = (first[k][h].Sine + last[k][h].Sine - coarseFirst[k][h].Sine, first[k][h].Cosine + last[k][h].Cosine - coarseFirst[k][h].Cosine);
                Error[k][h] = Distance(first[k][h], coarseFirst[k][h]) + Distance(last[k][h], before[k][h]);
            }
        }

        return true;
    }

    private bool Run(ChargedSheet sheet, ReadingPlan plan, CycleStates cycle, double omega, double[][] u, CancellationToken cancel)
    {
        double[] currents = [.. Enumerable.Range(0, u.Length).Select(m => cycle.Offset + (cycle.Amplitude * CycleTransform.At(1, m, u.Length).Sine))];
        var balance = new HarmonicBalance(sheet, plan.Wiring.Source, plan.Wiring.Drain, omega, u);
        bool done = balance.Solve(u, currents, cancel);
        Sweeps += balance.Sweeps;
        return done;
    }

    // Harmonics of the periodic state minus those of the quasi-static readings, from as many phases where these are known.
    private static (double Sine, double Cosine)[][] Added(FieldLevel level, ReadingPlan plan, double[][] u, double[][] quiet)
    {
        double[][] read = [.. u.Select(v => plan.Read(level, v))];
        var nodes = new PhaseNodes(quiet.Length - 1);
        return [.. Enumerable.Range(0, plan.Count).Select(k => Enumerable.Range(0, PhaseNodes.HighestHarmonic + 1).Select(h =>
        {
            (double sine, double cosine) = CycleTransform.Harmonic([.. read.Select(v => v[k])], h);
            (int s, int c) = PhaseNodes.Direction(h);
            double amplitude = nodes.Amplitude(h, [.. quiet.Select(v => v[k])]);
            return (sine - (s * amplitude), cosine - (c * amplitude));
        }).ToArray())];
    }

    private static bool IsFine((double Sine, double Cosine)[][] before, (double Sine, double Cosine)[][] last, CycleStates cycle, MeshSpec wanted)
    {
        var nodes = new PhaseNodes(cycle.CoarseValues[^1].Length - 1);
        for (int k = 0; k < last.Length; k++)
        {
            double[] values = [.. cycle.CoarseValues[^1].Select(v => v[k])];
            double first = wanted.Error * Math.Abs(nodes.Amplitude(1, values)), second = wanted.EvenError * Math.Abs(nodes.Amplitude(2, values));
            for (int h = 0; h <= PhaseNodes.HighestHarmonic; h++)
            {
                double may = h is 0 or 2 && second > EvenFloor * first ? Math.Min(first, second) : first;
                if (Distance(before[k][h], last[k][h]) > PhaseShare * may && may > 0)
                {
                    return false;
                }
            }
        }

        return true;
    }

    private static double Distance((double Sine, double Cosine) a, (double Sine, double Cosine) b) =>
        Math.Sqrt(((a.Sine - b.Sine) * (a.Sine - b.Sine)) + ((a.Cosine - b.Cosine) * (a.Cosine - b.Cosine)));
}
