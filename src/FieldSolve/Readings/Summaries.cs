using FieldSolve.Device;
using MathNet.Numerics;
using MathNet.Numerics.LinearRegression;

namespace FieldSolve.Readings;

/// <summary>Condenses the rows of a drive to a few figures per wiring.</summary>
public static class Summaries
{
    /// <summary>One summary per wiring, in the device's order.</summary>
    public static IReadOnlyList<WiringSummary> Of(SheetDevice device, IReadOnlyList<CurveRow> rows)
    {
        ArgumentNullException.ThrowIfNull(device);
        return [.. device.Wirings.Select(w => Of(device, w, [.. rows.Where(r => r.Wiring == w.Name)]))];
    }

    private static WiringSummary Of(SheetDevice device, Wiring wiring, List<CurveRow> rows)
    {
        List<CurveRow> solved = [.. rows.Where(r => r.Current != 0 && r.Status != RowStatus.NotConverged).OrderBy(r => Math.Abs(r.Current))];
        CurveRow? smallest = solved.FirstOrDefault();
        double? Resistance(string pair) => smallest?.Of(pair) is { } r ? (r.Odd ?? r.Value) / smallest.Current : null;
        List<double> left = [.. solved.Where(r => r.Status == RowStatus.OutsideLaw).Select(r => Math.Abs(r.Current))];
        return new(
            wiring.Name, CurrentDirection.Degrees(device, wiring),
            Resistance("source"), Resistance("along"), Resistance("across"),
            device.Law.IsLinear ? null : Line(solved),
            left.Count > 0 ? left[0] : null, solved.Count > 0 ? Math.Abs(solved[^1].Current) : 0)
        {
            HasDirection = CurrentDirection.Vector(device, wiring) != default,
        };
    }

    // Straight line through V_across_even against V_along_odd², ordinary least squares.
    private static EvenSlope? Line(List<CurveRow> rows)
    {
        var points = rows
            .Where(r => r.Status is RowStatus.Ok or RowStatus.ErrorAboveWanted && r.Of("along")?.Odd is not null && r.Of("across")?.Even is not null)
            .DistinctBy(r => Math.Abs(r.Current))
            .Select(r => (X: r.Of("along")!.Odd!.Value * r.Of("along")!.Odd!.Value, Y: r.Of("across")!.Even!.Value))
            .DistinctBy(p => p.X)
            .ToList();
        if (points.Count < 2 || points.All(p => p.Y == 0)) // an odd law: nothing is even
        {
            return null;
        }

        double[] x = [.. points.Select(p => p.X)], y = [.. points.Select(p => p.Y)];
        (double intercept, double slope) = SimpleRegression.Fit(x, y);
        double meanX = x.Average(), spread = x.Sum(v => (v - meanX) * (v - meanX));
        double rest = x.Zip(y, (a, b) => b - intercept - (slope * a)).Sum(d => d * d);
        double error = x.Length > 2 && spread > 0 ? Math.Sqrt(rest / (x.Length - 2) / spread) : 0;
        double quality = y.All(v => v == y[0]) ? 1 : GoodnessOfFit.CoefficientOfDetermination(x.Select(v => intercept + (slope * v)), y);
        return new(slope, error, intercept, quality, x.Length);
    }
}
