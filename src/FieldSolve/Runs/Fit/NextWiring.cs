using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Solving;
using FieldSolve.Sparse;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;

namespace FieldSolve.Runs;

/// <summary>
/// The readings that would shrink the joint uncertainty of the parameters most: D-optimal choice one after the other among all source, drain and probe pairs that the
/// contacts allow (V. V. Fedorov, Theory of Optimal Experiments (1972)). One solve and one adjoint per contact serve all probe pairs of a source and drain.
/// </summary>
internal static class NextWiring
{
    private const int MostCircuits = 150;

    public static IReadOnlyList<NextReading> Of(
        FitModel model, FitProblem problem, double[] p, double[,] jacobian, double[] sigma, double[] weights, double[] scales, int count, CancellationToken cancel)
    {
        if (count == 0)
        {
            return [];
        }

        (SheetDevice device, FieldLevel level) = model.LevelAt(p, cancel);
        int m = p.Length, contacts = device.Contacts.Count;
        Matrix<double> information = Information(problem.Parameters, jacobian, sigma, weights, scales);
        double noise = sigma.Order().ElementAt(sigma.Length / 2), current = problem.LargestCurrent;
        (int S, int D)[] circuits = [.. Enumerable.Range(0, contacts).SelectMany(s => Enumerable.Range(s + 1, contacts - s - 1).Select(d => (s, d)))];
        if (circuits.Length > MostCircuits)
        {
            int step = (circuits.Length / MostCircuits) + 1;
            circuits = [.. circuits.Where((_, k) => k % step == 0)];
        }

        // Per circuit: derivatives of every contact's potential against the drain, in natural scales over the noise.
        double[]?[][] slopes = new double[]?[circuits.Length][];
        var fields = model.Fields(p);
        Parallel.For(0, circuits.Length, new ParallelOptions { CancellationToken = cancel, MaxDegreeOfParallelism = Environment.ProcessorCount }, k =>
            slopes[k] = Circuit(model, level, circuits[k], contacts, current, fields, m, scales, noise, cancel));

        var chosen = new List<NextReading>();
        var taken = new HashSet<(int, int, int)>();
        while (chosen.Count < count)
        {
            Matrix<double> inverse = information.Inverse();
            (double Gain, int K, int P, int Q, Vector<double>? G) best = (0, -1, -1, -1, null);
            for (int k = 0; k < circuits.Length; k++)
            {
                for (int a = 0; a < contacts; a++)
                {
                    for (int b = a + 1; b < contacts; b++)
                    {
                        if (slopes[k][a] is not { } ga || slopes[k][b] is not { } gb || taken.Contains((k, a, b))
                            || a == circuits[k].S || a == circuits[k].D || b == circuits[k].S || b == circuits[k].D)
                        {
                            continue;
                        }

                        var g = DenseVector.OfEnumerable(ga.Zip(gb, (x, y) => x - y));
                        double gain = g * (inverse * g);
                        if (gain > best.Gain * (1 + 1e-9))
                        {
                            best = (gain, k, a, b, g);
                        }
                    }
                }
            }

            if (best.G is not { } vector)
            {
                return chosen;
            }

            taken.Add((best.K, best.P, best.Q));
            information += vector.OuterProduct(vector);
            Matrix<double> after = information.Inverse();
            int helped = Enumerable.Range(0, m).MinBy(j => after[j, j] / inverse[j, j]);
            chosen.Add(new(
                device.Contacts[circuits[best.K].S].Name, device.Contacts[circuits[best.K].D].Name, device.Contacts[best.P].Name, device.Contacts[best.Q].Name,
                current, noise, Math.Sqrt(1 + best.Gain), problem.Parameters[helped].Label, Math.Sqrt(inverse[helped, helped]), Math.Sqrt(after[helped, helped])));
        }

        return chosen;
    }

    // Without data a parameter is known to one natural scale; otherwise nothing could be compared.
    private static DenseMatrix Information(IReadOnlyList<FitParameter> parameters, double[,] jacobian, double[] sigma, double[] weights, double[] scales)
    {
        int m = scales.Length;
        var information = DenseMatrix.CreateIdentity(m);
        for (int i = 0; i < sigma.Length; i++)
        {
            for (int a = 0; a < m; a++)
            {
                for (int b = 0; b < m; b++)
                {
                    information[a, b] += weights[i] * jacobian[i, a] * scales[a] * jacobian[i, b] * scales[b] / (sigma[i] * sigma[i]);
                }
            }
        }

        for (int j = 0; j < m; j++)
        {
            information[j, j] += parameters[j].PriorSigma is { } s ? scales[j] * scales[j] / (s * s) : 0;
        }

        return information;
    }

    private static double[]?[] Circuit(
        FitModel model, FieldLevel level, (int S, int D) circuit, int contacts, double current, Sensitivity.MotionField?[] fields, int m, double[] scales, double noise,
        CancellationToken cancel)
    {
        double[]?[] all = new double[contacts][];
        double[] u = new double[level.Equations.Length];
        try
        {
            if (!new DrivePath(level, circuit.S, circuit.D).Solve(current, u, null, cancel).Converged)
            {
                return all;
            }

            int[] probes = [.. Enumerable.Range(0, contacts).Where(c => c != circuit.S && c != circuit.D)];
            double[][] vectors = [.. probes.Select(c => level.ReadingVector(new(false, c), new(false, circuit.D)))];
            if (probes.Length == 0)
            {
                return all;
            }

            double[,] slopes = model.Slopes(model.Measure(level, u, vectors, cancel), [.. Enumerable.Range(0, probes.Length)], probes.Length, fields);
            for (int k = 0; k < probes.Length; k++)
            {
                all[probes[k]] = [.. Enumerable.Range(0, m).Select(j => slopes[k, j] * scales[j] / noise)];
            }
        }
        catch (Exception e) when (e is PivotException or LawRefusedException)
        {
            // The sheet cannot carry the current there: nothing to suggest.
        }

        return all;
    }
}
