using FieldSolve.Readings;

namespace FieldSolve.Turning;

/// <summary>
/// Readings in the limit of small drive, extrapolated from the smallest currents. The odd part over I is even in I. The even part over I² also has a
/// term in |I| where a law fades at a field limit: the zone about a contact's end in which it fades grows like I², and the integrand there like
/// its radius to the power -3/2.
/// </summary>
internal static class WeakLimit
{
    private const int MostCurrents = 3;

    /// <summary>The limit for one pair.</summary>
    /// <param name="rows">Rows of one direction.</param>
    /// <param name="pair">"along" or "across".</param>
    /// <param name="linear">The law is linear: any current will do, and there is no even part.</param>
    public static WeakReading? Of(IEnumerable<CurveRow> rows, string pair, bool linear)
    {
        (double Size, double Sign, Reading Reading)[] used =
        [
            .. rows.Where(r => r.Current != 0 && r.Status is RowStatus.Ok or RowStatus.ErrorAboveWanted && r.Of(pair) is not null)
                .DistinctBy(r => Math.Abs(r.Current)).OrderBy(r => Math.Abs(r.Current))
                .Take(linear ? 1 : MostCurrents).Select(r => (Math.Abs(r.Current), (double)Math.Sign(r.Current), r.Of(pair)!)),
        ];
        if (used.Length == 0)
        {
            return null;
        }

        bool both = used.All(u => u.Reading.Odd is not null);
        double[] size = [.. used.Select(u => u.Size)];

        // A single sign keeps the even part in the reading: it falls like I.
        (double odd, double oddError) = AtZero(
            both ? [.. size.Select(i => i * i)] : size,
            [.. used.Select(u => u.Sign * (u.Reading.Odd ?? u.Reading.Value) / u.Size)],
            [.. used.Select(u => u.Reading.Error / u.Size)]);
        if (!both || linear)
        {
            return new(odd, oddError, null, 0);
        }

        (double even, double evenError) = AtZero(
            size, [.. used.Select(u => u.Reading.Even!.Value / (u.Size * u.Size))], [.. used.Select(u => u.Reading.EvenError!.Value / (u.Size * u.Size))]);
        return new(odd, oddError, even, evenError);
    }

    // The polynomial through the points, at zero. All points stand on one mesh, so their numerical errors are alike and do not grow by the weights;
    // how far the extrapolation is from the smallest current's value is an error of its own, of which a tenth is kept.
    private static (double Value, double Error) AtZero(double[] x, double[] y, double[] error)
    {
        double sum = 0;
        for (int k = 0; k < x.Length; k++)
        {
            double weight = 1;
            for (int j = 0; j < x.Length; j++)
            {
                weight *= j == k ? 1 : x[j] / (x[j] - x[k]);
            }

            sum += weight * y[k];
        }

        return (sum, error[0] + (0.1 * Math.Abs(sum - y[0])));
    }
}
