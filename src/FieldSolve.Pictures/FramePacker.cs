namespace FieldSolve.Pictures;

/// <summary>A frame's potential as the page unpacks it.</summary>
/// <param name="Low">Smallest value, V.</param>
/// <param name="High">Largest, V.</param>
/// <param name="From">Frames of the map that foretell this one.</param>
/// <param name="By">Weight of each.</param>
/// <param name="Plus">Constant to add, V.</param>
/// <param name="Smooth">The rest is foretold from neighbours on the mesh too.</param>
/// <param name="Bytes">What is then left, in steps of the range over 2^32 - 1; null for a constant.</param>
internal sealed record PackedFrame(double Low, double High, int[] From, double[] By, double Plus, bool Smooth, byte[]? Bytes);

/// <summary>
/// Packs the potentials of a map. Values are whole steps of each frame's range over 2^32 - 1, finer than floats. The frames of a drive, a cycle or a turn are nearly linear
/// combinations of a few, so each is foretold from those before by least squares, the rest where it helps from the ends of each edge and the corners met before; what
/// is left is small and packed in few bits. The page repeats the same sums in the same order, so nothing is lost.
/// </summary>
internal static class FramePacker
{
    /// <summary>Steps of a frame's range.</summary>
    public const double Steps = uint.MaxValue;

    private const int MostBefore = 12;

    // A direction that is left of a frame below this share of it is noise of the solver and of the steps.
    private const double Negligible = 3e-9;

    /// <summary>Packs frames.</summary>
    /// <param name="mesh">Their mesh.</param>
    /// <param name="potentials">One per frame; values at the nodes of the run.</param>
    public static PackedFrame[] Pack(LiveMesh mesh, IReadOnlyList<double[]> potentials)
    {
        PackedFrame[] packed = new PackedFrame[potentials.Count];
        (double Low, double High)[] ends = [.. potentials.Select(p => p.Length == 0 ? (0.0, 0.0) : (p.Min(), p.Max()))];
        Basis basis = new(mesh.Count);

        // The strongest first: the others are then small multiples of it.
        foreach (int k in Enumerable.Range(0, potentials.Count).OrderByDescending(k => ends[k].High - ends[k].Low).ThenBy(k => k))
        {
            (double low, double high) = ends[k];
            if (!(high > low))
            {
                packed[k] = new(low, high, [], [], 0, false, null);
                continue;
            }

            double step = (high - low) / Steps;
            double[] values = mesh.InOrder(potentials[k]), shown = new double[values.Length];
            (int[] from, double[] by, double plus) = basis.Foretell(values);
            long[] rest = new long[values.Length];
            for (int i = 0; i < values.Length; i++)
            {
                double expected = plus;
                for (int j = 0; j < from.Length; j++)
                {
                    expected += by[j] * basis.Shown[j][i];
                }

                long steps = (long)Math.Clamp(Math.Round((values[i] - low) / step), 0, Steps);
                rest[i] = steps - (from.Length == 0 ? 0 : (long)Math.Floor(((expected - low) / step) + 0.5));
                shown[i] = low + (steps * step);
            }

            long[] smooth = mesh.AgainstNeighbours(rest);
            bool better = BitPacker.Cost(smooth) < BitPacker.Cost(rest);
            packed[k] = new(low, high, from, by, plus, better, BitPacker.Pack(better ? smooth : rest));
            basis.Add(k, shown);
        }

        return packed;
    }

    // Orthonormal directions of the constant and of the frames so far (modified Gram-Schmidt, twice), with the frames as combinations of them.
    private sealed class Basis
    {
        private readonly List<double[]> directions = [], rows = [];
        private readonly List<int> numbers = [];

        public Basis(int count)
        {
            double[] constant = new double[count];
            Array.Fill(constant, 1 / Math.Sqrt(Math.Max(1, count)));
            directions.Add(constant);
            rows.Add([Math.Sqrt(Math.Max(1, count))]);
        }

        public List<double[]> Shown { get; } = [];

        public (int[] From, double[] By, double Plus) Foretell(double[] values)
        {
            if (numbers.Count == 0)
            {
                return ([], [], 0);
            }

            // Back substitution: weights of the frames from those of the directions.
            double[] weights = Parts([.. values]);
            for (int j = weights.Length - 1; j >= 0; j--)
            {
                weights[j] /= rows[j][j];
                for (int i = 0; i < j; i++)
                {
                    weights[i] -= weights[j] * rows[j][i];
                }
            }

            return ([.. numbers], weights[1..], weights[0]);
        }

        public void Add(int number, double[] shown)
        {
            if (numbers.Count == MostBefore)
            {
                return;
            }

            double[] left = [.. shown];
            double[] first = Parts(left), second = Parts(left), row = [.. first.Zip(second, (a, b) => a + b)];
            double size = Norm(left);
            if (size > Negligible * Norm(shown))
            {
                for (int i = 0; i < left.Length; i++)
                {
                    left[i] /= size;
                }

                directions.Add(left);
                rows.Add([.. row, size]);
                numbers.Add(number);
                Shown.Add(shown);
            }
        }

        [System.Runtime.CompilerServices.MethodImpl(System.Runtime.CompilerServices.MethodImplOptions.AggressiveOptimization)]
        private double[] Parts(double[] values)
        {
            double[] parts = new double[directions.Count];
            for (int j = 0; j < parts.Length; j++)
            {
                double[] d = directions[j];

                // Four sums side by side: the processor need not wait for each, and their order is fixed.
                double a = 0, b = 0, c = 0, e = 0;
                int n = values.Length - (values.Length % 4);
                for (int i = 0; i < n; i += 4)
                {
                    a += d[i] * values[i];
                    b += d[i + 1] * values[i + 1];
                    c += d[i + 2] * values[i + 2];
                    e += d[i + 3] * values[i + 3];
                }

                double sum = a + b + (c + e);
                for (int i = n; i < values.Length; i++)
                {
                    sum += d[i] * values[i];
                }

                for (int i = 0; i < values.Length; i++)
                {
                    values[i] -= sum * d[i];
                }

                parts[j] = sum;
            }

            return parts;
        }

        private static double Norm(double[] values)
        {
            double sum = 0;
            foreach (double v in values)
            {
                sum += v * v;
            }

            return Math.Sqrt(sum);
        }
    }
}
