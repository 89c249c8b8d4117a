namespace FieldSolve.Runs;

/// <summary>A number with its 95 % confidence interval.</summary>
/// <param name="Value">Estimate.</param>
/// <param name="Low">Lower end.</param>
/// <param name="High">Upper end.</param>
public readonly record struct SampleEstimate(double Value, double Low, double High);

/// <summary>
/// What samples say about one quantity. The intervals are those of independent samples, which Latin hypercubes beat as a rule; that of the standard
/// deviation uses the samples' own kurtosis, those of percentiles the ranks of a binomial count (W. J. Conover, Practical Nonparametric Statistics (1999),
/// section 3.2).
/// </summary>
/// <param name="Quantity">The quantity.</param>
/// <param name="Design">Value as designed.</param>
/// <param name="Count">Samples with a solution.</param>
/// <param name="Mean">Mean.</param>
/// <param name="Deviation">Standard deviation.</param>
/// <param name="Percentiles">5, 50 and 95 %.</param>
/// <param name="FirstOrder">Standard deviation that the first derivatives predict.</param>
/// <param name="NumericalError">Numerical error of the value as designed, which all samples share.</param>
/// <param name="SpreadError">Numerical error of the spread: what the finer mesh changes of the first derivatives, summed over the causes.</param>
public sealed record SampleStatistics(
    ToleranceQuantity Quantity, double Design, int Count, SampleEstimate Mean, SampleEstimate Deviation, IReadOnlyList<SampleEstimate> Percentiles, double FirstOrder,
    double NumericalError, double SpreadError)
{
    private const double Normal95 = 1.959963984540054;

    /// <summary>Half the interval of the standard deviation as a part of it; infinite without samples.</summary>
    public double RelativeUncertainty => Deviation.Value > 0 ? (Deviation.High - Deviation.Low) / 2 / Deviation.Value : Count > 1 ? 0 : double.PositiveInfinity;

    internal static SampleStatistics Of(ToleranceModel model, int q, IReadOnlyList<SampleResult> samples)
    {
        double[] sorted = [.. samples.Where(s => s.Values.Length > 0).Select(s => s.Values[q]).Order()];
        double first = 0, spread = 0;
        for (int c = 0; c < model.Causes.Count; c++)
        {
            double sigma = model.Causes[c].Sigma, slope = model.Slopes[q, c] * sigma, change = slope - (model.CoarseSlopes[q, c] * sigma);
            first += slope * slope;
            spread += change * change;
        }

        int n = sorted.Length;
        if (n == 0)
        {
            return new(
                model.Quantities[q], model.Values[q], 0, default, default, [default, default, default], Math.Sqrt(first), model.Errors[q], Math.Sqrt(spread));
        }

        // About the value as designed, so that digits do not cancel.
        double centre = model.Values[q], mean = sorted.Sum(v => v - centre) / n, square = 0, fourth = 0;
        foreach (double v in sorted)
        {
            double d = v - centre - mean;
            square += d * d;
            fourth += d * d * d * d;
        }

        double deviation = n > 1 ? Math.Sqrt(square / (n - 1)) : 0;
        double kurtosis = square > 0 ? n * fourth / (square * square) : 3;
        double ofMean = Normal95 * deviation / Math.Sqrt(n), ofDeviation = Normal95 * deviation * Math.Sqrt(Math.Max(kurtosis - 1, 0.1) / (4.0 * n));
        return new(
            model.Quantities[q], centre, n, new(centre + mean, centre + mean - ofMean, centre + mean + ofMean),
            new(deviation, Math.Max(0, deviation - ofDeviation), deviation + ofDeviation),
            [Percentile(sorted, 0.05), Percentile(sorted, 0.5), Percentile(sorted, 0.95)], Math.Sqrt(first), model.Errors[q], Math.Sqrt(spread));
    }

    private static SampleEstimate Percentile(double[] sorted, double p)
    {
        double at = p * (sorted.Length - 1), half = Normal95 * Math.Sqrt(sorted.Length * p * (1 - p));
        double At(double rank)
        {
            double r = Math.Clamp(rank, 0, sorted.Length - 1);
            int k = Math.Min((int)r, sorted.Length - 1), next = Math.Min(k + 1, sorted.Length - 1);
            return sorted[k] + ((r - k) * (sorted[next] - sorted[k]));
        }

        return new(At(at), At(Math.Floor(at - half)), At(Math.Ceiling(at + half)));
    }
}
