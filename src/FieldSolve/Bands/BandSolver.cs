using FieldSolve.Laws;

namespace FieldSolve.Bands;

/// <summary>
/// Response of cones with one constant relaxation time τ. Electrons have the charge -e, so that ħ dk/dt = -e E and the
/// distribution is f0 + (eτ/ħ) E·∂f0/∂k + (eτ/ħ)² E_j E_k ∂²f0/∂k_j∂k_k + …; K = -e ∫ v f with v = ∂E/ħ∂k + (e/ħ) E×Ω.
/// </summary>
/// <remarks>
/// First order: K_i = e²τ ∫ v_i v_j (-f0') E_j; N. W. Ashcroft, N. D. Mermin, Solid State Physics (1976), chapter 13. Second
/// order, once by parts: K_i = -e³τ² ∫ m⁻¹_ij v_k (-f0') E_j E_k. Berry curvature: K = (e³τ/ħ²) (E_b, -E_a) (D·E) with the
/// dipole D_l = ∫ f0 ∂Ω/∂k_l; I. Sodemann, L. Fu, Phys. Rev. Lett. 115, 216806 (2015). Ballistic: e²/h times the channels per
/// width; Yu. V. Sharvin, Sov. Phys. JETP 21, 655 (1965); C. W. J. Beenakker, H. van Houten, Solid State Phys. 44, 1 (1991).
/// </remarks>
public static class BandSolver
{
    private const double Charge = SiConstants.Charge, Hbar = SiConstants.ReducedPlanck;

    /// <summary>Computes the response.</summary>
    /// <param name="model">The bands.</param>
    /// <param name="cancel">Stops the quadrature.</param>
    /// <exception cref="BandException">There are no states to conduct, or a tilt equals the velocity.</exception>
    /// <exception cref="OperationCanceledException">Cancelled.</exception>
    public static BandResponse Solve(BandModel model, CancellationToken cancel)
    {
        ArgumentNullException.ThrowIfNull(model);
        BandException.Check(model);
        double tau = model.RelaxationTime;
        IntegralSet[] sets = new IntegralSet[model.Cones.Count];
        try
        {
            Parallel.For(0, sets.Length, new ParallelOptions { CancellationToken = cancel }, k => sets[k] = ConeIntegrals.Of(model, model.Cones[k], cancel));
        }
        catch (AggregateException e)
        {
            System.Runtime.ExceptionServices.ExceptionDispatchInfo.Throw(e.InnerExceptions[0]);
        }

        SheetSum sheet = new();
        SecondOrderSet drude = default, dipole = default;
        Estimate[] berry = new Estimate[2];
        Estimate? hall = new Estimate(0, 0);
        Estimate[] widths = new Estimate[model.Directions / 2];
        List<ConeShare> shares = [];
        double smallest = double.PositiveInfinity;
        for (int k = 0; k < sets.Length; k++)
        {
            Cone cone = model.Cones[k];
            IntegralSet m = sets[k];
            double g = cone.Degeneracy;
            Estimate Of(int at, double factor) => new(factor * m.Values[at], Math.Abs(factor) * m.Errors[at]);
            double linear = g * Charge * Charge * tau;
            SheetSum own = SheetSum.Turned(
                Of(Moment.Velocities, linear), Of(Moment.Velocities + 1, linear), Of(Moment.Velocities + 2, linear), -cone.Angle);
            sheet += own;

            Estimate[] d = [.. Enumerable.Range(Moment.Masses, 6).Select(at => Of(at, -g * Charge * Charge * Charge * tau * tau))];
            drude += Set(d).InFrame(-cone.Angle);

            double perDipole = g * Charge * Charge * Charge * tau / (Hbar * Hbar);
            Estimate pa = Of(Moment.Dipole, perDipole), pb = Of(Moment.Dipole + 1, perDipole);
            dipole += DipolePart(pa, pb).InFrame(-cone.Angle);
            (double sin, double cos) = Math.SinCos(cone.Angle);
            Estimate da = Of(Moment.Dipole, g), db = Of(Moment.Dipole + 1, g);
            berry[0] = new(berry[0].Value + (cos * da.Value) - (sin * db.Value), berry[0].Error + (Math.Abs(cos) * da.Error) + (Math.Abs(sin) * db.Error));
            berry[1] = new(berry[1].Value + (sin * da.Value) + (cos * db.Value), berry[1].Error + (Math.Abs(sin) * da.Error) + (Math.Abs(cos) * db.Error));

            hall = hall is { } sum && HallOf(model, cone, m) is { } part ? new(sum.Value + part.Value, sum.Error + part.Error) : null;
            for (int n = 0; n < widths.Length; n++)
            {
                // Half the variation of k across the direction, over 2π: the channels per width that run one way.
                Estimate channels = Of(Moment.Profile + n, g * SiConstants.ConductanceQuantum / (2 * Math.PI));
                widths[n] = new(widths[n].Value + channels.Value, widths[n].Error + channels.Error);
            }

            double states = m.Values[Moment.States], half = states > 0 ? m.Values[Moment.Width] / states : 0;
            double rms = states > 0 ? Math.Sqrt((m.Values[Moment.Velocities] + m.Values[Moment.Velocities + 2]) / states) : 0;
            shares.Add(new(cone.Name, g * states, own.Aa.Value, own.Ab.Value, own.Bb.Value, half, tau * rms));
            smallest = half > 0 ? Math.Min(smallest, half) : smallest;
        }

        double trace = sheet.Aa.Value + sheet.Bb.Value;
        if (!(trace > 0) || !double.IsFinite(trace) || !(smallest < double.PositiveInfinity))
        {
            throw new BandException("there are no states at the chemical potential, so that nothing conducts; change 'chemical_potential' or raise 'temperature'");
        }

        double rotation = sheet.PrincipalAngle;
        SheetSum principal = SheetSum.Turned(sheet.Aa, sheet.Ab, sheet.Bb, rotation);
        (double sr, double cr) = Math.SinCos(rotation);
        double axis = model.Axis + rotation;
        return new BandResponse
        {
            Rotation = rotation,
            Axis = axis,
            A = principal.Aa,
            B = principal.Bb,
            Ab = principal.Ab,
            Hall = hall,
            Drude = drude.InFrame(rotation),
            Dipole = dipole.InFrame(rotation),
            BerryDipole = (
                new((cr * berry[0].Value) + (sr * berry[1].Value), berry[0].Error + berry[1].Error),
                new((cr * berry[1].Value) - (sr * berry[0].Value), berry[0].Error + berry[1].Error)),
            FieldLimit = model.Shift * Hbar * smallest / (Charge * tau),
            Profile = Profile(model, widths, principal, axis),
            Shares = shares,
            Reached = sets.All(s => s.Meets(Moment.Shares(model.Error, model.CutOff is not null), Moment.Groups(widths.Length))),
        };
    }

    private static SecondOrderSet Set(Estimate[] d) => new(
        new(d[0].Value, d[1].Value, d[2].Value, d[3].Value, d[4].Value, d[5].Value),
        new(d[0].Error, d[1].Error, d[2].Error, d[3].Error, d[4].Error, d[5].Error));

    // K_a = (D·E) E_b and K_b = -(D·E) E_a, D with its factors.
    private static SecondOrderSet DipolePart(Estimate a, Estimate b) => new(
        new(0, b.Value, 0.5 * a.Value, -a.Value, 0, -0.5 * b.Value), new(0, b.Error, 0.5 * a.Error, a.Error, 0, 0.5 * b.Error));

    /// <summary>
    /// K_a = -(e²/ħ) E_b ∫ Ω f over both bands of a cone that is gapped and closed. The lower band, if full, gives half a quantum; the
    /// flux between node and contour is taken off, whichever band the contour is in.
    /// </summary>
    private static Estimate? HallOf(BandModel model, Cone cone, IntegralSet m)
    {
        if (cone.Gap == 0 && model.Thickness is null)
        {
            return new Estimate(0, 0);
        }

        if (model.Thickness is not null)
        {
            return cone.Gap > 0 ? new Estimate(0, 0) : null;
        }

        if (cone.Tilt >= 1 || model.CutOff is not null)
        {
            return null;
        }

        double factor = -cone.Degeneracy * Charge * Charge / (4 * Math.PI * Math.PI * Hbar);
        return new Estimate(
            factor * ((Math.PI * cone.Chirality) - m.Values[Moment.Flux]),
            Math.Abs(factor) * (m.Errors[Moment.Flux] + (4e-16 * Math.PI)));
    }

    private static List<ProfilePoint> Profile(BandModel model, Estimate[] widths, SheetSum principal, double axis)
    {
        List<ProfilePoint> points = [];
        for (int k = 0; k < model.Directions; k++)
        {
            double direction = 2 * Math.PI * k / model.Directions;
            points.Add(new(direction, widths[k % widths.Length], SheetSum.Turned(principal.Aa, principal.Ab, principal.Bb, direction - axis).Aa));
        }

        return points;
    }
}
