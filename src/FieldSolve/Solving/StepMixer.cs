using System.Runtime.CompilerServices;
using System.Runtime.Intrinsics;

namespace FieldSolve.Solving;

/// <summary>
/// Speeds up a fixed-point iteration u + f(u) by combining its last few steps so that the predicted next step is least: D. G. Anderson, J. ACM 12,
/// 547 (1965); H. F. Walker, P. Ni, SIAM J. Numer. Anal. 49, 1715 (2011). The fixed point stays what it is.
/// </summary>
internal sealed class StepMixer(int length)
{
    private const int Depth = 4;

    // Relative size below which a direction of the small least-squares problem is taken as dependent on the others.
    private const double Dependent = 1e-8;

    private readonly double[][] stepChange = Rows(length);
    private readonly double[][] placeChange = Rows(length);
    private readonly double[] lastStep = new double[length];
    private readonly double[] lastPlace = new double[length];
    private readonly double[,] gram = new double[Depth, Depth];
    private int held;
    private int next;
    private bool begun;

    /// <summary>Forgets the past, for a new problem or a new factor.</summary>
    public void Reset() => (held, next, begun) = (0, 0, false);

    /// <summary>Replaces a plain step f at u by the combined one.</summary>
    public void Mix(ReadOnlySpan<double> u, Span<double> f)
    {
        if (begun)
        {
            for (int i = 0; i < f.Length; i++)
            {
                stepChange[next][i] = f[i] - lastStep[i];
                placeChange[next][i] = u[i] - lastPlace[i];
            }

            next = (next + 1) % Depth;
            held = Math.Min(held + 1, Depth);
        }

        f.CopyTo(lastStep);
        u[..f.Length].CopyTo(lastPlace);
        begun = true;
        Span<double> weight = stackalloc double[Depth];
        if (held == 0 || !LeastSquares(f, weight))
        {
            return;
        }

        for (int k = 0; k < held; k++)
        {
            double[] df = stepChange[k], du = placeChange[k];
            for (int i = 0; i < f.Length; i++)
            {
                f[i] -= weight[k] * (df[i] + du[i]);
            }
        }
    }

    // Normal equations with a Cholesky factor; a few columns at most, and digits do not matter: the iteration corrects itself.
    private bool LeastSquares(ReadOnlySpan<double> f, Span<double> weight)
    {
        for (int i = 0; i < held; i++)
        {
            weight[i] = Dot(stepChange[i], f);
            for (int j = 0; j <= i; j++)
            {
                gram[i, j] = Dot(stepChange[i], stepChange[j]);
            }
        }

        for (int i = 0; i < held; i++)
        {
            double own = gram[i, i];
            for (int j = 0; j <= i; j++)
            {
                double sum = gram[i, j];
                for (int k = 0; k < j; k++)
                {
                    sum -= gram[i, k] * gram[j, k];
                }

                if (i == j)
                {
                    if (!(sum > Dependent * own))
                    {
                        Reset();
                        return false;
                    }

                    gram[i, i] = Math.Sqrt(sum);
                }
                else
                {
                    gram[i, j] = sum / gram[j, j];
                }
            }
        }

        for (int i = 0; i < held; i++)
        {
            for (int k = 0; k < i; k++)
            {
                weight[i] -= gram[i, k] * weight[k];
            }

            weight[i] /= gram[i, i];
        }

        for (int i = held - 1; i >= 0; i--)
        {
            for (int k = i + 1; k < held; k++)
            {
                weight[i] -= gram[k, i] * weight[k];
            }

            weight[i] /= gram[i, i];
        }

        return true;
    }

    // Four lanes in a fixed order, whatever the processor: the same bits everywhere.
    [MethodImpl(MethodImplOptions.AggressiveOptimization)]
    private static double Dot(ReadOnlySpan<double> a, ReadOnlySpan<double> b)
    {
        Vector256<double> sum = default;
        int i = 0;
        for (; i <= a.Length - Vector256<double>.Count; i += Vector256<double>.Count)
        {
            sum += Vector256.Create(a.Slice(i, 4)) * Vector256.Create(b.Slice(i, 4));
        }

        double rest = 0;
        for (; i < a.Length; i++)
        {
            rest += a[i] * b[i];
        }

        return Vector256.Sum(sum) + rest;
    }

    private static double[][] Rows(int length) => [.. Enumerable.Range(0, Depth).Select(_ => new double[length])];
}
