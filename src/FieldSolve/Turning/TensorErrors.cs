namespace FieldSolve.Turning;

/// <summary>Ratio, axis and resistances of a fitted tensor with their errors, by the derivative of each with respect to the unknowns of the fit.</summary>
internal static class TensorErrors
{
    // A difference of the principal resistivities below so many of its errors leaves the axis undetermined.
    private const double Significant = 2;

    /// <summary>Condenses a fit. A sheet that is isotropic within its errors gets the file's axis.</summary>
    /// <param name="fit">For the errors.</param>
    /// <param name="at">Values of the unknowns.</param>
    /// <param name="near">The file's axis, radians.</param>
    /// <param name="sheet">The tensor that belongs to unknowns; null when there is none.</param>
    public static FittedTensor Of(LeastSquares fit, double[] at, double near, Func<double[], PrincipalSheet?> sheet)
    {
        if (sheet(at) is not { } found)
        {
            return new(null, null, null, null, null, null, fit.Misfit, fit.Signal);
        }

        Fitted? Quantity(Func<PrincipalSheet, double> of, double unit = 1)
        {
            double[] gradient = new double[at.Length];
            double typical = at.Max(Math.Abs);
            for (int k = 0; k < at.Length; k++)
            {
                double step = 1e-6 * typical;
                double[] up = [.. at], down = [.. at];
                up[k] += step;
                down[k] -= step;
                if (sheet(up) is not { } above || sheet(down) is not { } below)
                {
                    return null;
                }

                gradient[k] = unit * (of(above) - of(below)) / (2 * step);
            }

            return new(unit * of(found), fit.ErrorOf(gradient));
        }

        double ratio = Math.Max(found.A, found.B) / Math.Min(found.A, found.B);
        Fitted? byLabel = Quantity(p => p.A / p.B);
        Fitted? axis = Quantity(p => Math.IEEERemainder(p.Axis - near, Math.PI), 180 / Math.PI);
        Fitted? plain = byLabel is { } f ? new(ratio, found.A >= found.B ? f.Error : f.Error * ratio * ratio) : null;
        bool isotropic = plain is not { } r || r.Value - 1 <= Significant * Math.Max(r.Error, 1e-9);

        // A direction that is only noise must not become the frame of the second-order elements: the file's axis is.
        double mean = Math.Sqrt(found.A * found.B);
        return new(
            isotropic ? new(mean, mean, near, found.Hall) : found, plain, byLabel, isotropic || axis is not { } x ? null : new(Degrees.Wrapped((near * 180 / Math.PI) + x.Value), x.Error),
            Quantity(p => p.SheetResistance), Quantity(p => p.HallResistance), fit.Misfit, fit.Signal);
    }
}
