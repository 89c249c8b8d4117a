namespace FieldSolve.Bands;

/// <summary>Integrals of <see cref="Moment"/> over the contour of one slice at one energy.</summary>
internal sealed class LineMoments
{
    private const int FirstPoints = 32, MostPoints = 1 << 15;
    private const double Rounding = 4e-16, Stalled = 1e-5;

    private readonly (double A, double B)[] across;
    private readonly int[] groups;
    private readonly int inner;
    private readonly double[] shares;
    private readonly double error;
    private readonly double cutOff;
    private readonly CancellationToken cancel;

    /// <summary>Makes them.</summary>
    /// <param name="across">Unit vectors across the directions of the profile, in the cone's frame.</param>
    /// <param name="error">Wanted relative error.</param>
    /// <param name="cutOff">Largest |k| in the plane, 1/m.</param>
    /// <param name="cancel">Stops between pieces.</param>
    public LineMoments((double A, double B)[] across, double error, double cutOff, CancellationToken cancel)
    {
        (this.across, this.error, this.cutOff, this.cancel) = (across, error, cutOff, cancel);
        groups = Moment.Groups(across.Length);
        inner = Moment.Profile;
        shares = Moment.Shares(error, false);
    }

    /// <summary>Adds the moments of a contour.</summary>
    /// <param name="slice">The cone or its cut.</param>
    /// <param name="energy">From the node, J.</param>
    /// <param name="cut">Largest |k| in the plane, 1/m, if smaller than that given to the constructor.</param>
    /// <param name="factor">Multiplies all.</param>
    /// <param name="values">Take the moments.</param>
    /// <param name="errors">Take their errors.</param>
    public void Add(ConeSlice slice, double energy, double cut, double factor, Span<double> values, Span<double> errors)
    {
        foreach (FermiLine line in FermiLine.At(slice, energy, Math.Min(cut, cutOff)))
        {
            IntegralSet sums = line.IsClosed ? Closed(line, slice) : Open(line, slice);
            for (int c = 0; c < inner; c++)
            {
                values[c] += factor * sums.Values[c];
                errors[c] += Math.Abs(factor) * sums.Errors[c];
            }

            double width = line.HalfWidth() * factor * sums.Values[Moment.States];
            values[Moment.Width] += width;
            errors[Moment.Width] += Rounding * Math.Abs(width);
            for (int d = 0; d < across.Length; d++)
            {
                double half = 0.5 * factor * line.Variation(across[d]);
                values[Moment.Profile + d] += half;
                errors[Moment.Profile + d] += Rounding * Math.Abs(half);
            }
        }
    }

    // A smooth periodic integrand: equal steps converge faster than any power, and halving them reuses what is there.
    private IntegralSet Closed(FermiLine line, ConeSlice slice)
    {
        double last = double.PositiveInfinity;
        double[] sum = new double[inner], previous = new double[inner], at = new double[inner], errors = new double[inner];
        for (int points = FirstPoints; ; points *= 2)
        {
            bool first = points == FirstPoints;
            double step = 2 * Math.PI / points;
            for (int k = first ? 0 : 1; k < points; k += first ? 1 : 2)
            {
                Array.Clear(at);
                At(line, slice, k * step, at);
                for (int c = 0; c < inner; c++)
                {
                    sum[c] += at[c];
                }
            }

            double worst = 0;
            double[] now = [.. sum.Select(v => step * v)], scale = IntegralSet.Scales(now, groups[..inner]);
            for (int c = 0; c < inner; c++)
            {
                errors[c] = Math.Abs(now[c] - previous[c]) + (Rounding * scale[groups[c]]);
                worst = Math.Max(worst, scale[groups[c]] > 0 ? errors[c] / scale[groups[c]] : 0);
            }

            // Close to a band edge rounding is all that is left to see; more points would not help.
            bool stalled = worst < Stalled && worst > 0.5 * last;
            if (!first && (worst <= Math.Max(error, 4 * Rounding) || stalled || points >= MostPoints))
            {
                return new(now, errors);
            }

            (previous, last) = (now, first ? double.PositiveInfinity : worst);
        }
    }

    private IntegralSet Open(FermiLine line, ConeSlice slice) => GaussKronrod.Integrate(
        (u, values, _) => At(line, slice, u, values), [line.Start, 0.5 * (line.Start + line.End), line.End], groups[..inner], shares, cancel);

    private static void At(FermiLine line, ConeSlice s, double u, Span<double> m)
    {
        (double qa, double qb, double da, double db) = line.At(u);
        (double ha, double hb) = s.PerWaveNumber;
        double e = Math.Sqrt((qa * qa) + (qb * qb) + (s.Mass * s.Mass)), sign = line.Band;
        double w = line.Measure * e / (ha * hb * 4 * Math.PI * Math.PI);
        double na = qa / e, nb = qb / e;
        double va = s.VelocityA * (s.TiltA + (sign * na)), vb = s.VelocityB * (s.TiltB + (sign * nb));

        // ħ m⁻¹_ij = ∂v_i/∂k_j / … : v_i = V_i (t_i + s q_i / ε) gives ∂v_i/∂k_j = s ħ V_i V_j (δ_ij - n_i n_j) / ε.
        double per = sign / e;
        double maa = per * s.VelocityA * s.VelocityA * (1 - (na * na));
        double mbb = per * s.VelocityB * s.VelocityB * (1 - (nb * nb));
        double mab = -per * s.VelocityA * s.VelocityB * na * nb;
        double curvature = -sign * 0.5 * ha * hb * s.Berry / (e * e * e);
        double speed = Math.Sqrt((va * va) + (vb * vb));

        m[Moment.States] += w;
        m[Moment.Velocities] += w * va * va;
        m[Moment.Velocities + 1] += w * va * vb;
        m[Moment.Velocities + 2] += w * vb * vb;
        m[Moment.Masses] += w * maa * va;
        m[Moment.Masses + 1] += w * mab * vb;
        m[Moment.Masses + 2] += w * 0.5 * ((maa * vb) + (mab * va));
        m[Moment.Masses + 3] += w * mab * va;
        m[Moment.Masses + 4] += w * mbb * vb;
        m[Moment.Masses + 5] += w * 0.5 * ((mab * vb) + (mbb * va));
        m[Moment.Masses + 6] += w * Math.Abs(maa + mbb) * speed; // one sign, and smooth: |m_ab| is no larger
        m[Moment.Dipole] += w * curvature * SiConstants.ReducedPlanck * va;
        m[Moment.Dipole + 1] += w * curvature * SiConstants.ReducedPlanck * vb;
        m[Moment.Dipole + 2] += w * Math.Abs(curvature) * SiConstants.ReducedPlanck * speed;
        if (!s.IsCut && s.Berry != 0)
        {
            m[Moment.Flux] += 0.5 * Math.Sign(s.Berry) * ((qa * db) - (qb * da)) / (e * (e + s.Mass));
            m[Moment.Flux + 1] += 0.5;
        }
    }
}
