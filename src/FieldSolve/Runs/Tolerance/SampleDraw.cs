using FieldSolve.Device;
using MathNet.Numerics.Distributions;

namespace FieldSolve.Runs;

/// <summary>
/// Values of all causes for a sample by its number alone. Samples come in Latin hypercubes of <see cref="Batch"/>: in each batch every cause takes each
/// of that many slices of equal probability once, in an order of its own (M. D. McKay, R. J. Beckman, W. J. Conover, Technometrics 21, 239 (1979)).
/// The order comes from the seed, the batch and the cause, so the samples are the same for any number of threads, machines and samples in all.
/// </summary>
internal sealed class SampleDraw(IReadOnlyList<SheetCause> causes, ulong seed)
{
    /// <summary>Samples per hypercube.</summary>
    public const int Batch = 64;

    /// <summary>Values in SI, one per cause.</summary>
    public double[] Of(int sample)
    {
        (int batch, int row) = (sample / Batch, sample % Batch);
        double[] x = new double[causes.Count];
        Span<int> slice = stackalloc int[Batch];
        Span<double> within = stackalloc double[Batch];
        for (int c = 0; c < x.Length; c++)
        {
            var random = new SplitMix(seed, (ulong)batch, (ulong)c);
            for (int i = 0; i < Batch; i++)
            {
                slice[i] = i;
                within[i] = random.NextOpen();
            }

            for (int i = Batch - 1; i > 0; i--)
            {
                int j = (int)(random.Next() % (ulong)(i + 1));
                (slice[i], slice[j]) = (slice[j], slice[i]);
            }

            double u = (slice[row] + within[row]) / Batch;
            x[c] = causes[c].Sigma * (causes[c].Shape == CauseShape.Normal ? Normal.InvCDF(0, 1, u) : Math.Sqrt(3) * ((2 * u) - 1));
        }

        return x;
    }

    // G. L. Steele, D. Lea, C. H. Flood, Fast splittable pseudorandom number generators, OOPSLA (2014), 453.
    private struct SplitMix
    {
        private ulong state;

        public SplitMix(ulong seed, ulong batch, ulong cause)
        {
            state = Mixed(seed + 0x9E3779B97F4A7C15);
            state = Mixed(state ^ Mixed(batch + 0xD1B54A32D192ED03));
            state = Mixed(state ^ Mixed(cause + 0x8CB92BA72F3D8DD7));
        }

        public ulong Next() => Mixed(state += 0x9E3779B97F4A7C15);

        /// <summary>Above 0 and below 1.</summary>
        public double NextOpen() => ((Next() >> 12) + 0.5) * Math.ScaleB(1, -52);

        private static ulong Mixed(ulong z)
        {
            z = (z ^ (z >> 30)) * 0xBF58476D1CE4E5B9;
            z = (z ^ (z >> 27)) * 0x94D049BB133111EB;
            return z ^ (z >> 31);
        }
    }
}
