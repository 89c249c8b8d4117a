using System.Globalization;
using FieldSolve.Device;
using MathNet.Numerics.LinearAlgebra;
using MathNet.Numerics.LinearAlgebra.Double;
using MathNet.Numerics.LinearAlgebra.Factorization;

namespace FieldSolve.Runs;

/// <summary>Which combinations of parameters the data determine: singular values of the sensitivities over sigma, in natural scales, with the priors as further data.</summary>
internal static class Identifiability
{
    /// <summary>A deviation of more than this many natural scales is none that a number could be given with.</summary>
    public const double MostDeviation = 0.5;

    // Parts of a direction below this share of its largest are left out of the words.
    private const double Said = 0.15;

    // A change of one natural scale that moves all readings together by less than this, in standard deviations, is rounding.
    private const double Unseen = 1e-6;

    /// <summary>
    /// No number is taken to be off by more than so many natural scales: a direction without any information would else carry what the triangles' irregularity, some 1e-6 of a
    /// derivative, makes of the numbers that take no part in it.
    /// </summary>
    public const double NoInformation = 30;

    /// <summary>Directions, the best determined first.</summary>
    public static IReadOnlyList<FitDirection> Of(IReadOnlyList<FitParameter> parameters, double[,] jacobian, double[] sigma, double[] weights, double[] scales, double[] p)
    {
        (double[] values, double[][] directions) = Singular(parameters, jacobian, sigma, weights, scales);
        return [.. values.Select((s, k) =>
        {
            bool determined = s > 0 && 1 / s <= MostDeviation;
            return new FitDirection(s, directions[k], determined, determined ? "" : Words(parameters, directions[k], scales, p) + AlsoOpen(parameters, directions[k], s));
        })];
    }

    /// <summary>Covariance in SI from the same decomposition; directions without any information count as very wide.</summary>
    public static double[,] Covariance(IReadOnlyList<FitDirection> directions, double[] scales)
    {
        int m = scales.Length;
        double[,] c = new double[m, m];
        foreach (FitDirection d in directions)
        {
            double deviation = Deviation(d.SingularValue);
            for (int i = 0; i < m; i++)
            {
                for (int j = 0; j < m; j++)
                {
                    c[i, j] += deviation * deviation * d.Direction[i] * scales[i] * d.Direction[j] * scales[j];
                }
            }
        }

        return c;
    }

    private static double Deviation(double singular) => singular > 1 / NoInformation ? 1 / singular : NoInformation;

    // Numbers that take a small part in a direction nothing is known of have no value either.
    private static string AlsoOpen(IReadOnlyList<FitParameter> parameters, double[] v, double singular)
    {
        double most = v.Max(Math.Abs);
        string[] names = [.. parameters.Where((_, j) => Math.Abs(v[j]) < Said * most && Math.Abs(v[j]) * Deviation(singular) > MostDeviation).Select(q => q.Label)];
        return names.Length == 0 ? "" : $", and that leaves {List(names)} without a number too";
    }

    private static string List(string[] names) => names.Length == 1 ? names[0] : string.Join(", ", names.SkipLast(1)) + " and " + names[^1];

    private static (double[] Values, double[][] Directions) Singular(
        IReadOnlyList<FitParameter> parameters, double[,] jacobian, double[] sigma, double[] weights, double[] scales)
    {
        int n = sigma.Length, m = parameters.Count;
        var a = new DenseMatrix(n + m, m);
        for (int j = 0; j < m; j++)
        {
            for (int i = 0; i < n; i++)
            {
                a[i, j] = Math.Sqrt(weights[i]) * jacobian[i, j] * scales[j] / sigma[i];
            }

            a[n + j, j] = parameters[j].PriorSigma is { } prior ? scales[j] / prior : 0;
        }

        // A number that nothing depends on is a direction of its own: where another is open as well, the two would be mixed by rounding.
        int[] seen = [.. Enumerable.Range(0, m).Where(j => a.Column(j).L2Norm() > Unseen)], unseen = [.. Enumerable.Range(0, m).Except(seen)];
        if (seen.Length == 0)
        {
            return (new double[m], [.. unseen.Select(j => Along(m, [j], [1]))]);
        }

        // Of the small square factor: as many singular values, and no matrix of n by n.
        Svd<double> svd = DenseMatrix.OfColumnVectors(seen.Select(j => a.Column(j))).QR(QRMethod.Thin).R.Svd();
        return (
            [.. svd.S, .. unseen.Select(_ => 0.0)],
            [.. Enumerable.Range(0, seen.Length).Select(k => Along(m, seen, [.. svd.VT.Row(k)])), .. unseen.Select(j => Along(m, [j], [1]))]);
    }

    // A vector of all numbers with the largest part positive.
    private static double[] Along(int count, int[] at, double[] parts)
    {
        double[] v = new double[count];
        double sign = Math.Sign(parts.MaxBy(Math.Abs));
        for (int k = 0; k < at.Length; k++)
        {
            v[at[k]] = sign * parts[k];
        }

        return v;
    }

    private static string Words(IReadOnlyList<FitParameter> parameters, double[] v, double[] scales, double[] p)
    {
        double most = v.Max(Math.Abs);
        int[] part = [.. Enumerable.Range(0, v.Length).Where(j => Math.Abs(v[j]) >= Said * most).OrderByDescending(j => Math.Abs(v[j]))];
        string[] names = [.. part.Select(j => parameters[j].Label)];
        if (part.Length == 1)
        {
            return $"{names[0]} is not determined by these data";
        }

        string all = List(names);
        if (part.Length == 2)
        {
            int[] pair = [.. part.Order()];
            (int i, int j) = (pair[0], pair[1]);
            return $"{parameters[i].Label} and {parameters[j].Label} are not determined one by one: only {Kept(parameters, i, j, v, scales)} is determined by these data";
        }

        string together = string.Join(", ", part.Take(4).Select(j => $"{parameters[j].Label} by {Change(parameters[j], v[j] / most, scales[j])}"));
        return $"{all} are not determined one by one: changing {together}{(part.Length > 4 ? " and so on" : "")} together changes no reading by much more than its noise";
    }

    // With the direction (v_i, v_j) free, what stays is the product (logarithms) or the sum along (v_j, -v_i).
    private static string Kept(IReadOnlyList<FitParameter> parameters, int i, int j, double[] v, double[] scales)
    {
        (double wi, double wj) = (v[j], -v[i]);
        if (parameters[i].IsPositive && parameters[j].IsPositive)
        {
            double ratio = wj / wi;
            string a = parameters[i].Label, b = parameters[j].Label;
            return Math.Abs(ratio - 1) < 0.1 ? $"sqrt({a} {b})"
                : Math.Abs(ratio + 1) < 0.1 ? $"{a}/{b}"
                : $"{a} {b}^{ratio.ToString("0.##", CultureInfo.InvariantCulture)}";
        }

        double ci = wi / scales[i] * parameters[i].UnitSize, cj = wj / scales[j] * parameters[j].UnitSize;
        string factor = (cj / ci).ToString("G3", CultureInfo.InvariantCulture);
        return $"{parameters[i].Label} + ({factor}) {parameters[j].Label} (in {parameters[i].Unit} and {parameters[j].Unit})";
    }

    private static string Change(FitParameter q, double share, double scale) => q.IsPositive
        ? $"{(share > 0 ? "+" : "")}{(10 * share).ToString("0.#", CultureInfo.InvariantCulture)} %"
        : $"{(0.1 * share * scale / q.UnitSize).ToString("G2", CultureInfo.InvariantCulture)} {q.Unit}";
}
