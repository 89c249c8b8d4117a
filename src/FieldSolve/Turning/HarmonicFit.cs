namespace FieldSolve.Turning;

/// <summary>Fourier content of the curves over the angle of the current from the file's crystal a, by least squares, so that directions need not be evenly spaced.</summary>
internal static class HarmonicFit
{
    private const int MostOrders = 6;

    public static IReadOnlyList<AngleHarmonics> Of(IReadOnlyList<AngleDatum> data, double axis)
    {
        var list = new List<AngleHarmonics>();
        Add(list, "along_odd", "ohm", data, axis, d => d.Along is { } r ? new(r.Odd, r.OddError) : null);
        Add(list, "across_odd", "ohm", data, axis, d => d.Across is { } r ? new(r.Odd, r.OddError) : null);
        Add(list, "along_even", "ohm/A", data, axis, d => d.Along is { Even: { } e } r ? new(e, r.EvenError) : null);
        Add(list, "across_even", "ohm/A", data, axis, d => d.Across is { Even: { } e } r ? new(e, r.EvenError) : null);
        return list;
    }

    private static void Add(
        List<AngleHarmonics> list, string curve, string unit, IReadOnlyList<AngleDatum> data, double axis, Func<AngleDatum, Fitted?> of)
    {
        (double Angle, Fitted Value)[] points = [.. data.Select(d => (d.Seen - axis, of(d))).Where(p => p.Item2 is not null).Select(p => (p.Item1, p.Item2!.Value))];
        int distinct = points.Select(p => Degrees.Wrapped(p.Angle * 180 / Math.PI)).Distinct().Count();
        int orders = Math.Min(MostOrders, (distinct - 1) / 2);
        if (orders < 1)
        {
            return;
        }

        LeastSquares? fit = LeastSquares.Solve(
            [.. points.Select(p => Row(p.Angle, orders))], [.. points.Select(p => p.Value.Value)], [.. points.Select(p => p.Value.Error)]);
        if (fit is not { IsFull: true })
        {
            return;
        }

        Fitted At(int k) => new(fit.Value[k], fit.ErrorOf(k));
        list.Add(new(curve, unit, [(0, At(0), default), .. Enumerable.Range(1, orders).Select(n => (n, At((2 * n) - 1), At(2 * n)))]));
    }

    private static double[] Row(double angle, int orders)
    {
        double[] row = new double[1 + (2 * orders)];
        row[0] = 1;
        for (int n = 1; n <= orders; n++)
        {
            (row[2 * n], row[(2 * n) - 1]) = Math.SinCos(n * angle);
        }

        return row;
    }
}
