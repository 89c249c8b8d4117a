using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Factorization;

namespace FieldSolve.Turning;

/// <summary>
/// Linear least squares through the singular value decomposition: what the data do not determine stays zero. G. H. Golub, C. F. Van Loan, Matrix
/// Computations (1996), section 5.5.
/// </summary>
internal sealed class LeastSquares
{
    // Directions in the space of unknowns that move the data this little, relative to the best determined one, count as undetermined.
    private const double RankShare = 1e-7;

    private readonly double[][] inverse;  // unknown, datum
    private readonly double[] bars;

    private LeastSquares(double[] value, double[][] inverse, double[] bars, int rank, double misfit, double signal, bool exact)
    {
        (Value, this.inverse, this.bars, Rank, Misfit, Signal) = (value, inverse, bars, rank, misfit, signal);
        Exact = exact;
    }

    /// <summary>The unknowns.</summary>
    public double[] Value { get; }

    /// <summary>How many combinations of unknowns the data determine.</summary>
    public int Rank { get; }

    /// <summary>All unknowns are determined.</summary>
    public bool IsFull => Rank == Value.Length;

    /// <summary>Root of the mean squared difference between data and model.</summary>
    public double Misfit { get; }

    /// <summary>Root of the mean squared datum.</summary>
    public double Signal { get; }

    // As many data as unknowns: nothing is left to tell the scatter from.
    private bool Exact { get; }

    /// <summary>Solves for the unknowns.</summary>
    /// <param name="rows">One row of coefficients per datum.</param>
    /// <param name="data">The data.</param>
    /// <param name="bars">Numerical error of each.</param>
    /// <returns>Null when there are fewer data than unknowns, or all coefficients vanish.</returns>
    public static LeastSquares? Solve(IReadOnlyList<double[]> rows, IReadOnlyList<double> data, IReadOnlyList<double> bars)
    {
        int m = rows.Count, n = m == 0 ? 0 : rows[0].Length;
        if (m < n || n == 0)
        {
            return null;
        }

        double[] scale = [.. Enumerable.Range(0, n).Select(k => Math.Sqrt(rows.Sum(r => r[k] * r[k])))];
        Matrix<double> matrix = Matrix<double>.Build.Dense(m, n, (i, k) => scale[k] > 0 ? rows[i][k] / scale[k] : 0);
        Svd<double> svd = matrix.Svd();
        double largest = svd.S.Count > 0 ? svd.S[0] : 0;
        if (!(largest > 0))
        {
            return null;
        }

        int rank = svd.S.Count(s => s > RankShare * largest);
        double[][] inverse = [.. Enumerable.Range(0, n).Select(_ => new double[m])];
        for (int k = 0; k < n; k++)
        {
            for (int i = 0; i < m; i++)
            {
                double sum = 0;
                for (int r = 0; r < rank; r++)
                {
                    sum += svd.VT[r, k] * svd.U[i, r] / svd.S[r];
                }

                inverse[k][i] = scale[k] > 0 ? sum / scale[k] : 0;
            }
        }

        double[] value = [.. inverse.Select(row => row.Zip(data, (a, b) => a * b).Sum())];
        double rest = 0, all = 0;
        for (int i = 0; i < m; i++)
        {
            double model = rows[i].Zip(value, (a, b) => a * b).Sum();
            rest += (data[i] - model) * (data[i] - model);
            all += data[i] * data[i];
        }

        return new(value, inverse, [.. bars], rank, Math.Sqrt(rest / m), Math.Sqrt(all / m), m <= rank);
    }

    /// <summary>Error of a quantity: the scatter of the data about the model, and what their numerical errors can do at worst, added in squares.</summary>
    /// <param name="gradient">The quantity's derivative with respect to each unknown.</param>
    public double ErrorOf(IReadOnlyList<double> gradient)
    {
        int m = bars.Length;
        double scatter = 0, numerical = 0;
        for (int i = 0; i < m; i++)
        {
            double reach = 0;
            for (int k = 0; k < Value.Length; k++)
            {
                reach += gradient[k] * inverse[k][i];
            }

            scatter += reach * reach;
            numerical += Math.Abs(reach) * bars[i];
        }

        double variance = Exact ? 0 : Misfit * Misfit * m / (m - Rank);
        return Math.Sqrt((scatter * variance) + (numerical * numerical));
    }

    /// <summary>Error of one unknown.</summary>
    public double ErrorOf(int unknown) => ErrorOf([.. Value.Select((_, k) => k == unknown ? 1.0 : 0)]);
}
