using FieldSolve.Device;
using FieldSolve.Laws;
using FieldSolve.Quantities;

namespace FieldSolve.Runs;

/// <summary>
/// Natural scales of parameters: a change by one scale changes the readings by about their own size. Positive numbers: their value (so that the scale is the
/// logarithm's); d and c: what makes second and third order as large as the first at the largest mean field; the axis: one radian; places: the contact's width.
/// </summary>
internal static class FitScales
{
    // A device is known to nothing better than this share of its size where no contact sets a length.
    private const double LengthShare = 0.1;

    public static double[] Of(SheetDevice device, IReadOnlyList<FitParameter> parameters, double[] p, double largestVoltage)
    {
        double field = Math.Max(largestVoltage, double.Epsilon) / device.Domain.Size;
        Tensor2 zero = device.Law.AtZeroField;
        double mean = Math.Sqrt(Math.Abs((zero.Aa * zero.Bb) - (zero.Ab * zero.Ba)));
        return [.. parameters.Select((q, j) =>
            q.IsPositive ? Math.Abs(p[j])
            : q.Kind.Dimension == Dimension.SheetConductance ? mean
            : q.Kind.Dimension == Dimension.QuadraticConductance ? mean / field
            : q.Kind.Dimension == Dimension.CubicConductance ? mean / (field * field)
            : q.Kind.Dimension == Dimension.Length ? (q.Target.Contacts.Count > 0 ? device.Contacts[q.Target.Contacts[0]].Width : LengthShare * device.Domain.Size)
            : 1)];
    }
}
