using FieldSolve.Device;
using FieldSolve.Readings;
using MathNet.Numerics;
using MathNet.Numerics.LinearRegression;

namespace FieldSolve.Lockin;

/// <summary>Condenses the points of an AC run: how harmonics grow with the current, and the second harmonic against the first.</summary>
internal static class LockinSummaries
{
    private const int HighestSlope = 3;
    private const double Clear = 10;

    /// <summary>Slopes of log r against log I for the first three harmonics of every pair.</summary>
    public static IReadOnlyList<HarmonicSlope> Slopes(IReadOnlyList<LockinPoint> points)
    {
        var list = new List<HarmonicSlope>();
        foreach (IGrouping<(string Wiring, double? Frequency), LockinPoint> g in points.GroupBy(p => (p.Wiring, p.Frequency)))
        {
            foreach (string pair in g.SelectMany(p => p.Waves.Select(w => w.Pair)).Distinct(StringComparer.Ordinal))
            {
                for (int h = 1; h <= HighestSlope; h++)
                {
                    (double X, double Y)[] clear =
                    [
                        .. g.Where(p => p.CurrentRms > 0).Select(p => (p.CurrentRms, Reading: p.Of(pair, h)))
                            .Where(p => p.Reading is { } r && r.Status != RowStatus.OutsideLaw && r.R > Clear * r.Error)
                            .Select(p => (Math.Log(p.CurrentRms), Math.Log(p.Reading!.R))).DistinctBy(p => p.Item1),
                    ];
                    if (clear.Length > 1)
                    {
                        (_, double slope) = SimpleRegression.Fit([.. clear.Select(p => p.X)], [.. clear.Select(p => p.Y)]);
                        list.Add(new(g.Key.Wiring, pair, h, g.Key.Frequency, slope, clear.Length));
                    }
                }
            }
        }

        return list;
    }

    /// <summary>Lines through the second harmonic across against the squared first harmonic along; none for a linear law.</summary>
    public static IReadOnlyList<SecondHarmonicLine> Lines(SheetDevice device, IReadOnlyList<LockinPoint> points)
    {
        var list = new List<SecondHarmonicLine>();
        foreach (IGrouping<(string Wiring, double? Frequency), LockinPoint> g in points.GroupBy(p => (p.Wiring, p.Frequency)))
        {
            (double X, double Y)[] pairs =
            [
                .. g.Select(p => (Along: p.Of("along", 1), Across: p.Of("across", 2)))
                    .Where(p => p.Along is not null && p.Across is not null && p.Across.Status != RowStatus.OutsideLaw)
                    .Select(p => (p.Along!.R * p.Along.R, p.Across!.Y)).DistinctBy(p => p.Item1),
            ];
            if (device.Law.IsLinear || pairs.Length < 2)
            {
                continue;
            }

            double[] x = [.. pairs.Select(p => p.X)], y = [.. pairs.Select(p => p.Y)];
            (double intercept, double slope) = SimpleRegression.Fit(x, y);
            double mean = x.Average(), spread = x.Sum(v => (v - mean) * (v - mean));
            double rest = x.Zip(y, (a, b) => b - intercept - (slope * a)).Sum(d => d * d);
            double error = x.Length > 2 && spread > 0 ? Math.Sqrt(rest / (x.Length - 2) / spread) : 0;
            double quality = y.All(v => v == y[0]) ? 1 : GoodnessOfFit.CoefficientOfDetermination(x.Select(v => intercept + (slope * v)), y);
            list.Add(new(g.Key.Wiring, g.Key.Frequency, new(slope, error, intercept, quality, x.Length)));
        }

        return list;
    }
}
