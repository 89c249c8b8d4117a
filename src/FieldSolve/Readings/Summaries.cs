using FieldSolve.Device;
using FieldSolve.Geometry;
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
        Point2 direction = Centre(device.Contacts[wiring.Drain]) - Centre(device.Contacts[wiring.Source]);

        // Places are known to rounding only: 360.0000000000001 degrees is 0.
        double degrees = Math.Round(Math.Atan2(direction.Y, direction.X) * 180 / Math.PI, 9);
        degrees = degrees < 0 ? degrees + 360 : degrees == 0 ? 0 : degrees;
        List<double> left = [.. solved.Where(r => r.Status == RowStatus.OutsideLaw).Select(r => Math.Abs(r.Current))];
        return new(
            wiring.Name, degrees,
            Resistance("source"), Resistance("along"), Resistance("across"),
            device.Law.IsLinear ? null : Line(solved),
            left.Count > 0 ? left[0] : null, solved.Count > 0 ? Math.Abs(solved[^1].Current) : 0);
    }

    // A rim that is all metal has no side: its middle is that of the whole loop.
    private static Point2 Centre(Contact contact)
    {
        bool closed = contact.Kind == ContactKind.Edge && contact.Shape[0].Start == contact.Shape[^1].End;
        return closed ? (1.0 / contact.Shape.Count) * contact.Shape.Aggregate(default(Point2), (sum, c) => sum + c.At(0.5)) : contact.Middle;
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
        if (points.Count < 2)
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
