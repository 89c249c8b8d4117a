namespace FieldSolve.Turning;

/// <summary>The six second-order elements from the even parts of both pairs: the even part over I² is linear in them.</summary>
internal static class SecondOrderFit
{
    private const int Elements = 6;

    // An element whose error is this many times the largest element is not determined by the curves.
    private const double Useless = 1;

    /// <summary>Fits the elements.</summary>
    /// <param name="data">One per direction.</param>
    /// <param name="response">Response of the along (true) or across pair of the datum with this index to each element, (ohm/A) / (A m/V²).</param>
    public static FittedSecondOrder? Solve(IReadOnlyList<AngleDatum> data, Func<int, bool, double[]> response)
    {
        var rows = new List<double[]>();
        var values = new List<double>();
        var bars = new List<double>();
        for (int k = 0; k < data.Count; k++)
        {
            foreach (bool along in new[] { true, false })
            {
                if ((along ? data[k].Along : data[k].Across) is { Even: { } even } reading)
                {
                    rows.Add(response(k, along));
                    values.Add(even);
                    bars.Add(reading.EvenError);
                }
            }
        }

        if (LeastSquares.Solve(rows, values, bars) is not { } fit)
        {
            return null;
        }

        double largest = fit.Value.Max(Math.Abs);
        return new(
            [.. Enumerable.Range(0, Elements).Select(k => fit.IsFull && fit.ErrorOf(k) <= Useless * Math.Max(largest, double.Epsilon)
                ? new Fitted(fit.Value[k], fit.ErrorOf(k))
                : (Fitted?)null)],
            fit.Misfit, fit.Signal);
    }
}
