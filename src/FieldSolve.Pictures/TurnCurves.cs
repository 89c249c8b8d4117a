using FieldSolve.Readings;
using FieldSolve.Turning;

namespace FieldSolve.Pictures;

/// <summary>One of the four angular curves of a turn.</summary>
/// <param name="Pair">"along" or "across".</param>
/// <param name="IsEven">The even part, else the odd one (the reading itself where one sign was solved).</param>
internal sealed record TurnQuantity(string Pair, bool IsEven)
{
    /// <summary>All four, those that a result has.</summary>
    public static IReadOnlyList<TurnQuantity> Of(TurnResult result) =>
        [.. new TurnQuantity[] { new("along", false), new("across", false), new("along", true), new("across", true) }.Where(q => q.Points(result, Largest(result)).Count > 0)];

    /// <summary>Name with the part that is meant.</summary>
    public string Name(TurnResult result) =>
        $"V_{Pair}" + (IsEven ? ", even part" : result.Drive.Device.Drive!.BothSigns && !result.Drive.Device.Law.IsLinear ? ", odd part" : "");

    /// <summary>The points at one current, by angle: degrees, volts, error, row.</summary>
    public IReadOnlyList<(double Angle, double Value, double Error, CurveRow Row)> Points(TurnResult result, double current)
    {
        var list = new List<(double, double, double, CurveRow)>();
        foreach (TurnRow row in result.Rows.Where(r => r.Row.Current == current))
        {
            if (row.Row.Of(Pair) is { } r && (!IsEven || (r.Even is not null && !result.Drive.Device.Law.IsLinear)))
            {
                list.Add((Angle(result, row), IsEven ? r.Even!.Value : r.Odd ?? r.Value, (IsEven ? r.EvenError : r.Error) ?? 0, row.Row));
            }
        }

        return [.. list.OrderBy(p => p.Item1)];
    }

    /// <summary>The strip formula for the same curve at an angle, V; null where it has none.</summary>
    public double? Formula(TurnResult result, double current, double angleDegrees)
    {
        if (result.Fit is not { StripCurve: { } strip } fit)
        {
            return null;
        }

        // Angles of the picture count from lab x, or from the file's crystal a where that is turned.
        double zero = result.Mode == TurnMode.Axis ? fit.Law.Axis : 0, angle = (angleDegrees * Math.PI / 180) + zero - strip.Sheet.Axis;
        if (!IsEven)
        {
            return current * (Pair == "along" ? strip.Along(angle) : strip.Across(angle));
        }

        if (fit.StripSecond is not { } second || second.Elements.Any(e => e is null))
        {
            return null;
        }

        return current * current * strip.Even(angle, Pair == "along").Zip(second.Elements, (a, e) => a * e!.Value.Value).Sum();
    }

    /// <summary>The drive's largest current by size.</summary>
    public static double Largest(TurnResult result) => result.Drive.Device.Drive!.Currents.MaxBy(Math.Abs);

    /// <summary>The angle that the pictures show.</summary>
    public static double Angle(TurnResult result, TurnRow row) => result.Mode == TurnMode.Axis ? row.AngleDegrees : row.DirectionDegrees;

    /// <summary>The same for a point of a ratio curve.</summary>
    public static double Angle(TurnResult result, RatioPoint point) => result.Mode == TurnMode.Axis ? point.AngleDegrees : point.DirectionDegrees;

    /// <summary>Name of that angle.</summary>
    public static string AngleName(TurnResult result) => result.Mode == TurnMode.Axis ? "current from crystal a (°)" : "direction of the current (°)";

    /// <summary>Where crystal a lies on that scale, degrees; null for an isotropic sheet.</summary>
    public static double? AxisA(TurnResult result) => result.Fit is { } fit && Math.Abs(fit.Law.A - fit.Law.B) < 1e-9 * fit.Law.A
        ? null
        : result.Mode == TurnMode.Axis ? 0 : Degrees.Wrapped(result.Drive.Device.Axis * 180 / Math.PI);
}
