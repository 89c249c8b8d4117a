namespace FieldSolve.Readings;

/// <summary>
/// Phases at which a memoryless response to I(t) = I_dc + sqrt(2) I_rms sin(theta) is solved. Since sin(theta) = sin(pi - theta), the 2n equally
/// spaced phases of a cycle need only the n + 1 currents I_dc + sqrt(2) I_rms s_j with s_j = cos(j pi / n): Chebyshev points, nested under doubling.
/// The trapezoidal rule on them gives the harmonics of a signal exactly as long as its order plus the harmonic's stays below 2n, and converges
/// geometrically for analytic ones: L. N. Trefethen, J. A. C. Weideman, SIAM Review 56, 385 (2014).
/// </summary>
internal sealed class PhaseNodes
{
    /// <summary>Highest harmonic that is reported.</summary>
    public const int HighestHarmonic = 5;

    /// <summary>The fewest intervals with the highest harmonic exact (2n > 2 x 5) that are even, so that zero and both peaks are among the nodes.</summary>
    public static readonly PhaseNodes Base = new(6);

    /// <summary>Twice as many phases, for the error of the rule.</summary>
    public static readonly PhaseNodes Doubled = new(12);

    public PhaseNodes(int intervals)
    {
        Intervals = intervals;
        Sine = [.. Enumerable.Range(0, intervals + 1).Select(j => 2 * j == intervals ? 0 : Math.Cos(j * Math.PI / intervals))];
    }

    /// <summary>The same with twice as many phases.</summary>
    public PhaseNodes Doubling() => new(2 * Intervals);

    /// <summary>n.</summary>
    public int Intervals { get; }

    /// <summary>Equally spaced phases of a cycle, 2n.</summary>
    public int Phases => 2 * Intervals;

    /// <summary>s_j, from +1 to -1.</summary>
    public IReadOnlyList<double> Sine { get; }

    /// <summary>Weight of the value at node j in the amplitude of a harmonic.</summary>
    /// <remarks>The signal is the sum of amplitude_k cos(k (pi/2 - theta)).</remarks>
    public double Weight(int harmonic, int node)
    {
        double end = node == 0 || node == Intervals ? 0.5 : 1;
        double scale = harmonic == 0 || harmonic == Intervals ? 1 : 2;
        return scale * end / Intervals * Math.Cos(harmonic * node % (2 * Intervals) * Math.PI / Intervals);
    }

    /// <summary>The amplitude of a harmonic from the values at the nodes.</summary>
    public double Amplitude(int harmonic, IReadOnlyList<double> values)
    {
        double sum = 0;
        for (int j = 0; j <= Intervals; j++)
        {
            sum += Weight(harmonic, j) * values[j];
        }

        return sum;
    }

    /// <summary>The node at which the sine takes the value it has at phase 2 pi m / (2n).</summary>
    public int NodeAt(int phase)
    {
        int j = Math.Abs((Intervals / 2) - (phase % Phases));
        return j <= Intervals ? j : Phases - j;
    }

    /// <summary>
    /// Weights of the values at nodes in the polynomial through them, at another current: the barycentric formula on Chebyshev points, J.-P. Berrut,
    /// L. N. Trefethen, SIAM Review 46, 501 (2004). A node itself has weight 1 and the others none.
    /// </summary>
    /// <param name="currents">At the nodes, A.</param>
    /// <param name="current">A.</param>
    public static double[] Interpolation(double[] currents, double current)
    {
        double[] weight = new double[currents.Length];
        double near = 1e-12 * currents.Max(Math.Abs);
        int hit = Array.FindIndex(currents, c => Math.Abs(c - current) <= near);
        if (hit >= 0)
        {
            weight[hit] = 1;
            return weight;
        }

        double sum = 0;
        for (int j = 0; j < weight.Length; j++)
        {
            weight[j] = (j % 2 == 0 ? 1 : -1) * (j == 0 || j == weight.Length - 1 ? 0.5 : 1) / (current - currents[j]);
            sum += weight[j];
        }

        return [.. weight.Select(w => w / sum)];
    }

    /// <summary>Parts along sin(k theta) and cos(k theta) of cos(k (pi/2 - theta)).</summary>
    public static (int Sine, int Cosine) Direction(int harmonic) => (harmonic & 3) switch
    {
        0 => (0, 1),
        1 => (1, 0),
        2 => (0, -1),
        _ => (-1, 0),
    };
}
