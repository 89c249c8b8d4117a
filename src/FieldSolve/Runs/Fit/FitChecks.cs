using MathNet.Numerics.Distributions;

namespace FieldSolve.Runs;

/// <summary>Tests of the residuals of a fit.</summary>
internal static class FitChecks
{
    private const int FewestForRuns = 10;

    public static FitQuality Of(IReadOnlyList<FittedVoltage> data, int free)
    {
        double chi = data.Sum(d => d.Residual * d.Residual);
        int freedom = data.Count - free;
        FittedVoltage largest = data.MaxBy(d => Math.Abs(d.Residual))!;
        double one = 2 * Normal.CDF(0, 1, -Math.Abs(largest.Residual));
        return new(
            chi, freedom, freedom > 0 ? 1 - ChiSquared.CDF(freedom, chi) : null, Runs(data),
            largest.Residual, one < 1e-9 ? Math.Min(1, data.Count * one) : 1 - Math.Pow(1 - one, data.Count), largest.Datum.Line);
    }

    // A. Wald, J. Wolfowitz, Ann. Math. Stat. 11, 147 (1940): runs of signs, for each pair in the order of its currents; sums over the pairs.
    private static double? Runs(IReadOnlyList<FittedVoltage> data)
    {
        double runs = 0, expected = 0, variance = 0;
        int used = 0;
        foreach (IGrouping<(int, int, int?), FittedVoltage> group in data.GroupBy(d => (d.Datum.Circuit, d.Datum.Pair, d.Datum.Harmonic)))
        {
            bool[] signs = [.. group.OrderBy(d => d.Datum.Current).ThenBy(d => d.Datum.Line).Select(d => d.Residual > 0)];
            double up = signs.Count(s => s), down = signs.Length - up, n = signs.Length;
            if (n < 3 || up == 0 || down == 0)
            {
                // All of one sign: one run where chance would make more.
                if (n >= 3)
                {
                    (runs, expected, variance, used) = (runs + 1, expected + ((n + 1) / 2), variance + ((n - 1) / 4), used + (int)n);
                }

                continue;
            }

            runs += 1 + Enumerable.Range(1, signs.Length - 1).Count(k => signs[k] != signs[k - 1]);
            expected += 1 + (2 * up * down / n);
            variance += 2 * up * down * ((2 * up * down) - n) / (n * n * (n - 1));
            used += signs.Length;
        }

        return used >= FewestForRuns && variance > 0 ? (runs - expected) / Math.Sqrt(variance) : null;
    }
}
