namespace FieldSolve.Bands;

/// <summary>Symmetric sheet conductance with errors, S.</summary>
/// <param name="Aa">σ_aa.</param>
/// <param name="Ab">σ_ab = σ_ba.</param>
/// <param name="Bb">σ_bb.</param>
internal readonly record struct SheetSum(Estimate Aa, Estimate Ab, Estimate Bb)
{
    // Rounding of a sum and a rotation.
    private const double Rounding = 1e-15;

    /// <summary>The sum of two; errors add.</summary>
    public static SheetSum operator +(SheetSum p, SheetSum q) => new(Sum(p.Aa, q.Aa), Sum(p.Ab, q.Ab), Sum(p.Bb, q.Bb));

    /// <summary>A tensor in a frame turned counter-clockwise by an angle.</summary>
    public static SheetSum Turned(Estimate aa, Estimate ab, Estimate bb, double angle)
    {
        (double s, double c) = Math.SinCos(2 * angle);
        double mean = 0.5 * (aa.Value + bb.Value), half = 0.5 * (aa.Value - bb.Value);
        double p = (c * half) + (s * ab.Value), q = (c * ab.Value) - (s * half);
        double spread = 0.5 * (aa.Error + bb.Error), extra = Rounding * Math.Abs(mean);
        double ep = spread + (Math.Abs(s) * ab.Error) + extra, eq = (Math.Abs(c) * ab.Error) + (Math.Abs(s) * spread) + extra;
        return new(new(mean + p, ep), new(q, eq), new(mean - p, ep));
    }

    /// <summary>
    /// Angle to the principal axis that lies nearest to the first one, rad, within ±45 degrees; exactly 0 where σ_ab is zero within
    /// its error, so that an isotropic sheet keeps its axes.
    /// </summary>
    public double PrincipalAngle
    {
        get
        {
            double half = 0.5 * (Aa.Value - Bb.Value), slack = Ab.Error + (4 * Rounding * (Aa.Value + Bb.Value));
            return Math.Abs(Ab.Value) <= slack ? 0
                : half == 0 ? Math.CopySign(Math.PI / 4, Ab.Value)
                : 0.5 * Math.Atan(Ab.Value / half);
        }
    }

    private static Estimate Sum(Estimate a, Estimate b) => new(a.Value + b.Value, a.Error + b.Error);
}
