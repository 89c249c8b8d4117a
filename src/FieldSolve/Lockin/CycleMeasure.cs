using FieldSolve.Readings;
using FieldSolve.Runs;

namespace FieldSolve.Lockin;

/// <summary>Harmonics of all readings of one wiring at one amplitude, quasi-static, with their errors. Arrays by reading, then harmonic 0 to 5.</summary>
internal sealed class CycleMeasure
{
    // By harmonic. What is not linear in the drive weighs the strong fields at contact ends more and converges more slowly there: the second harmonic as
    // the even part of a drive does; every further order adds a factor E to the integrand, and from the third on the difference of two meshes does not bound
    // what is left until the zone where the law fades is resolved. Chosen so that a coarse disc stays within its bars (tests, Lockin).
    private static readonly double[] Allowance = [1, 1, 1, 4, 8, 16];

    // Readings are differences of potentials; nothing below this share of the largest is resolved.
    private const double RoundingShare = 2e-13;

    private CycleMeasure(CycleStates cycle, int readings)
    {
        Cycle = cycle;
        Amplitude = Table(readings, PhaseNodes.Doubled.Intervals + 1);
        Error = Table(readings, PhaseNodes.HighestHarmonic + 1);
        Guard = Table(readings, PhaseNodes.HighestHarmonic + 1);
        Shift = new (double, double)[readings][];
    }

    public CycleStates Cycle { get; private set; }

    /// <summary>Peak amplitudes along cos(k (pi/2 - theta)), V; up to the highest order that the doubled phases give.</summary>
    public double[][] Amplitude { get; }

    /// <summary>Estimated error of the peak amplitude, V.</summary>
    public double[][] Error { get; }

    /// <summary>Influence of the law's guard on the peak amplitude, V.</summary>
    public double[][] Guard { get; }

    /// <summary>Parts along sin and cos, peak, that the gate's charge adds per radian per second, to first order; V s.</summary>
    public (double Sine, double Cosine)[][] Shift { get; }

    public static CycleMeasure Of(MeshPair meshes, ReadingPlan plan, CycleStates cycle, AdjointSet adjoints)
    {
        PhaseNodes few = PhaseNodes.Base, many = new(cycle.CoarseValues[^1].Length - 1), before = new(many.Intervals / 2);
        IReadOnlyList<PhaseState> states = cycle.Base;
        var measure = new CycleMeasure(cycle, plan.Count);
        ErrorShares evenShares = meshes.EvenShares(EvenRates.Exponents(meshes, states[^1].Coarse));
        double[][][] details = [.. states.Select(s => adjoints.Details(s.Current))];
        for (int k = 0; k < plan.Count; k++)
        {
            double[] fine = [.. states.Select(s => s.FineValues[k])];
            double[] coarse = Values(cycle, 0, k), last = Values(cycle, cycle.CoarseValues.Count - 2, k), doubled = Values(cycle, cycle.CoarseValues.Count - 1, k);

            // A left-over residual moves a reading by its share of the reading's own resistance, and no further than the source's voltage.
            double floor = (RoundingShare + cycle.LargestResidual) * states.Max(s => s.FineValues.Max(Math.Abs));
            for (int h = 0; h < measure.Amplitude[k].Length; h++)
            {
                double phases = many.Amplitude(h, doubled) - (h < few.Intervals ? few.Amplitude(h, coarse) : 0);
                measure.Amplitude[k][h] = (h < few.Intervals ? few.Amplitude(h, fine) : 0) + phases;
                if (h > PhaseNodes.HighestHarmonic)
                {
                    continue;
                }

                var terms = new (double, double[], double[])[states.Count];
                for (int j = 0; j < terms.Length; j++)
                {
                    terms[j] = (few.Weight(h, j), states[j].Residual, details[j][k]);
                    measure.Guard[k][h] += few.Weight(h, j) * states[j].GuardShare[k];
                }

                double difference = few.Amplitude(h, fine) - few.Amplitude(h, coarse);
                GoalError error = GoalError.Of(meshes.Between, h == 1 ? meshes.Shares : evenShares, difference, terms);
                error = meshes.Fine.Equations.Law.IsLinear ? error : error.Untried();
                measure.Amplitude[k][h] += error.Correction;
                measure.Error[k][h] = (Allowance[h] * error.Bar) + Math.Abs(many.Amplitude(h, doubled) - before.Amplitude(h, last)) + floor;
            }

            measure.Shift[k] = adjoints.HasLag ? Shifts(cycle, adjoints, k) : [];
        }

        return measure;
    }

    /// <summary>The same without the potentials.</summary>
    public CycleMeasure WithoutStates()
    {
        Cycle = Cycle with { States = [] };
        return this;
    }

    // V_1(theta) = lag(I(theta)) dI/dt: harmonics of the product over the whole cycle, by the trapezoidal rule.
    private static (double Sine, double Cosine)[] Shifts(CycleStates cycle, AdjointSet adjoints, int reading)
    {
        PhaseNodes few = PhaseNodes.Base;
        IReadOnlyList<PhaseState> states = cycle.Base;
        double[] rate = new double[few.Phases];
        for (int m = 0; m < rate.Length; m++)
        {
            rate[m] = adjoints.Lag(states[few.NodeAt(m)].Current, reading) * cycle.Amplitude * Math.Cos(2 * Math.PI * m / rate.Length);
        }

        return [.. Enumerable.Range(0, PhaseNodes.HighestHarmonic + 1).Select(h => CycleTransform.Harmonic(rate, h))];
    }

    private static double[] Values(CycleStates cycle, int level, int reading) => [.. cycle.CoarseValues[level].Select(v => v[reading])];

    private static double[][] Table(int rows, int columns) => [.. Enumerable.Range(0, rows).Select(_ => new double[columns])];
}
