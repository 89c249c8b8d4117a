using FieldSolve.Device;

namespace FieldSolve.Turning;

/// <summary>
/// The formulas for a strip with a uniform field, fitted to the curves of any device, as is done in the literature on angle-resolved transport:
/// V_along / I = (L/W) (rho_a cos² + rho_b sin²), V_across / I = (rho_a - rho_b) sin cos (J. Wu, A. T. Bollinger, X. He, I. Božović, Nature 547, 432
/// (2017); P. Walmsley, I. R. Fisher, Rev. Sci. Instrum. 88, 043901 (2017); both from their abstracts). Exact for a long strip with point probes, an approximation for any other shape.
/// </summary>
internal static class StripFit
{
    /// <summary>The tensor.</summary>
    /// <param name="device">Places of the probes, and the axis that labels a and b.</param>
    /// <param name="data">One per direction.</param>
    public static FittedTensor? Linear(SheetDevice device, IReadOnlyList<AngleDatum> data)
    {
        // Unknowns: mean resistivity, half the difference as a vector at twice the axis angle, Hall resistance.
        var rows = new List<double[]>();
        var values = new List<double>();
        var bars = new List<double>();
        foreach (AngleDatum d in data)
        {
            StripGeometry strip = StripGeometry.Of(device, d.Wiring, d.Direction);
            (double s, double c) = Math.SinCos(2 * d.Seen);
            if (d.Along is { } along)
            {
                double squares = strip.Length / strip.Width;
                rows.Add([squares, squares * c, squares * s, 0]);
                values.Add(along.Odd);
                bars.Add(along.OddError);
            }

            if (d.Across is { } across)
            {
                rows.Add([0, s, -c, -1]);
                values.Add(across.Odd);
                bars.Add(across.OddError);
            }
        }

        if (LeastSquares.Solve(rows, values, bars) is not { IsFull: true } fit)
        {
            return null;
        }

        return TensorErrors.Of(fit, fit.Value, device.Axis, p =>
            p[0] > Math.Sqrt((p[1] * p[1]) + (p[2] * p[2])) ? PrincipalSheet.OfResistivity(p[0], p[1], p[2], p[3], device.Axis) : null);
    }

    /// <summary>
    /// All six second-order elements at fixed current: E2 = -rho K2(rho K, rho K). From K = sigma E + K2(E, E); I. Sodemann, L. Fu, Phys. Rev. Lett. 115, 216806 (2015) for the law.
    /// </summary>
    public static FittedSecondOrder? Second(SheetDevice device, IReadOnlyList<AngleDatum> data, PrincipalSheet sheet)
    {
        return SecondOrderFit.Solve(data, (k, along) =>
        {
            AngleDatum d = data[k];
            StripGeometry strip = StripGeometry.Of(device, d.Wiring, d.Direction);
            return new StripFormula(sheet, strip.Length, strip.Width).Even(d.Seen - sheet.Axis, along);
        });
    }

    /// <summary>
    /// E_across / E_along² = rho_1 sin [d12 r² sin² + (d11 - 2 d26 r²) cos²] / (cos² + r sin²)² with one mirror line, angles from it (K. Kang, T. Li, E. Sohn, J. Shan,
    /// K. F. Mak, Nature Materials 18, 324 (2019); the formula from memory, derived again from the law).
    /// </summary>
    public static SingleMirror? Mirror(SheetDevice device, IReadOnlyList<AngleDatum> data, PrincipalSheet sheet)
    {
        SingleMirror? a = Mirror(device, data, sheet, true), b = Mirror(device, data, sheet, false);
        return a is null || (b is not null && b.Misfit < a.Misfit) ? b : a;
    }

    private static SingleMirror? Mirror(SheetDevice device, IReadOnlyList<AngleDatum> data, PrincipalSheet sheet, bool alongA)
    {
        double parallel = alongA ? sheet.RhoA : sheet.RhoB, r = alongA ? sheet.RhoB / sheet.RhoA : sheet.RhoA / sheet.RhoB;
        double line = sheet.Axis + (alongA ? 0 : Math.PI / 2);
        var rows = new List<double[]>();
        var values = new List<double>();
        var bars = new List<double>();
        foreach (AngleDatum d in data)
        {
            if (d.Along is not { } along || d.Across is not { Even: { } even } across || along.Odd == 0)
            {
                continue;
            }

            // E_across = -V_across / W, E_along = V_along / L.
            StripGeometry strip = StripGeometry.Of(device, d.Wiring, d.Direction);
            (double s, double c) = Math.SinCos(d.Seen - line);
            double scale = -parallel * strip.Width / (strip.Length * strip.Length), below = Math.Pow((c * c) + (r * s * s), 2);
            rows.Add([scale * s * r * r * s * s / below, scale * s * c * c / below]);
            values.Add(even / (along.Odd * along.Odd));
            bars.Add(across.EvenError / (along.Odd * along.Odd));
        }

        return LeastSquares.Solve(rows, values, bars) is { IsFull: true } fit
            ? new(alongA, new(fit.Value[0], fit.ErrorOf(0)), new(fit.Value[1], fit.ErrorOf(1)), r, fit.Misfit, fit.Signal)
            : null;
    }
}
