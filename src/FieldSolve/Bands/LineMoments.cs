namespace FieldSolve.Bands;

/// <summary>Integrals of <see cref="Moment"/> over the contour of one slice at one energy.</summary>
internal sealed class LineMoments
{
    private const int FirstPoints = 32, MostPoints = 1 << 16;
    private const double Rounding = 4e-16;

    private readonly (double A, double B)[] across;
    private readonly int[] groups;
    private readonly int inner;
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
    }

    /// <summary>False once a line has missed the wanted error.</summary>
    public bool Reached { get; private set; } = true;

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
            Reached &= sums.Reached;
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

            bool reached = !first;
            double[] scale = new double[groups.Max() + 1];
            for (int c = 0; c < inner; c++)
            {
                scale[groups[c]] = Math.Max(scale[groups[c]], Math.Abs(step * sum[c]));
            }

            for (int c = 0; c < inner; c++)
            {
                errors[c] = Math.Abs((step * sum[c]) - previous[c]) + (Rounding * scale[groups[c]]);
                reached &= errors[c] <= Math.Max(error, 4 * Rounding) * scale[groups[c]] || scale[groups[c]] == 0;
                previous[c] = step * sum[c];
            }

            if (reached || points >= MostPoints)
            {
                return new(previous, errors, reached);
            }
        }
    }

    private IntegralSet Open(FermiLine line, ConeSlice slice) => GaussKronrod.Integrate(
        (u, values, _) => At(line, slice, u, values), [line.Start, 0.5 * (line.Start + line.End), line.End], groups[..inner], error, cancel);

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
        m[Moment.Masses + 6] += w * (Math.Abs(maa) + Math.Abs(mab) + Math.Abs(mbb)) * speed;
        m[Moment.Dipole] += w * curvature * SiConstants.ReducedPlanck * va;
        m[Moment.Dipole + 1] += w * curvature * SiConstants.ReducedPlanck * vb;
        m[Moment.Dipole + 2] += w * Math.Abs(curvature) * SiConstants.ReducedPlanck * speed;
        m[Moment.Flux] += s.Berry == 0 ? 0 : 0.5 * Math.Sign(s.Berry) * ((qa * db) - (qb * da)) / (e * (e + s.Mass));
    }
}
