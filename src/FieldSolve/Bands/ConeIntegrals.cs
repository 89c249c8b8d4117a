namespace FieldSolve.Bands;

/// <summary>
/// Integrals of <see cref="Moment"/> of one cone weighted with -df/dE at the model's temperature. For a three-dimensional cone
/// they are those of all cuts at fixed k_c, times the thickness: of a film thick against its wavelengths.
/// </summary>
internal sealed class ConeIntegrals
{
    /// <summary>-df/dE is below 1e-17 of its peak beyond this many kT.</summary>
    public const double Tail = 40;

    private readonly BandModel model;
    private readonly Cone cone;
    private readonly LineMoments lines;
    private readonly int[] groups;
    private readonly CancellationToken cancel;

    private ConeIntegrals(BandModel model, Cone cone, CancellationToken cancel)
    {
        (this.model, this.cone, this.cancel) = (model, cone, cancel);
        (double, double)[] across = [.. Enumerable.Range(0, model.Directions / 2).Select(k =>
        {
            (double sin, double cos) = Math.SinCos((2 * Math.PI * k / model.Directions) - model.Axis - cone.Angle);
            return (-sin, cos);
        })];
        // What is inside has to be better than what is outside, whose rule would take its error for structure.
        lines = new(across, 0.02 * model.Error, model.CutOff ?? double.PositiveInfinity, cancel);
        groups = Moment.Groups(across.Length);
    }

    /// <summary>The integrals, in the cone's frame, for one of its <see cref="Cone.Degeneracy"/> copies.</summary>
    /// <param name="model">Filling and temperature.</param>
    /// <param name="cone">One of its cones.</param>
    /// <param name="cancel">Stops the quadrature.</param>
    public static IntegralSet Of(BandModel model, Cone cone, CancellationToken cancel)
    {
        return new ConeIntegrals(model, cone, cancel).OverEnergy();
    }

    private IntegralSet OverEnergy()
    {
        double level = model.ChemicalPotential - cone.Offset, kT = SiConstants.Boltzmann * model.Temperature;
        if (kT == 0)
        {
            double[] values = new double[groups.Length], errors = new double[groups.Length];
            AtEnergy(level, 1, values, errors);
            return new(values, errors);
        }

        // In x = (E - µ) / kT the weight is 1 / (4 cosh²(x/2)). Band edges and the node are where the integrand is not smooth.
        double[] places = [0, cone.BandEdge, -cone.BandEdge, 0.5 * cone.Gap, -0.5 * cone.Gap];
        double[] breaks =
        [
            .. new[] { -Tail, -20, -10, -4, 0, 4, 10, 20, Tail }
                .Concat(places.Select(e => (e - level) / kT).Where(x => Math.Abs(x) < Tail)).Distinct().Order(),
        ];
        return GaussKronrod.Integrate(
            (x, values, errors) =>
            {
                double cosh = Math.Cosh(0.5 * x);
                AtEnergy(level + (kT * x), 0.25 / (cosh * cosh), values, errors);
            },
            breaks, groups, Moment.Shares(0.5 * model.Error, model.CutOff is not null), cancel);
    }

    private void AtEnergy(double energy, double factor, Span<double> values, Span<double> errors)
    {
        if (model.Thickness is not { } thickness)
        {
            lines.Add(ConeSlice.Of(cone), energy, double.PositiveInfinity, factor, values, errors);
            return;
        }

        double hc = SiConstants.ReducedPlanck * cone.VelocityC, tc = cone.TiltC / cone.VelocityC;
        double[] breaks = CutRange(energy, tc, hc);
        if (breaks.Length < 2)
        {
            return;
        }

        double cutOff = model.CutOff ?? double.PositiveInfinity;
        IntegralSet cuts = GaussKronrod.Integrate(
            (kappa, v, e) =>
            {
                double kc = kappa / hc, inPlane = double.IsPositiveInfinity(cutOff) ? cutOff : Math.Sqrt(Math.Max(0, (cutOff - kc) * (cutOff + kc)));
                lines.Add(ConeSlice.At(cone, kappa), energy - (tc * kappa), inPlane, thickness / (2 * Math.PI * hc), v, e);
            },
            breaks, groups, Moment.Shares(0.1 * model.Error, model.CutOff is not null), cancel);
        for (int c = 0; c < values.Length; c++)
        {
            values[c] += factor * cuts.Values[c];
            errors[c] += factor * cuts.Errors[c];
        }
    }

    /// <summary>Breaks of κ = ħ v_c k_c: the range in which cuts have states, cut off, with the places where a piece begins or ends.</summary>
    private double[] CutRange(double energy, double tc, double hc)
    {
        // (E - t_c κ)² = u² (gap²/4 + κ²), u² = 1 - t_a² - t_b²: where a cut's ellipse shrinks to a point.
        double t = cone.TiltInPlane, square = (1 - t) * (1 + t), mass = 0.5 * cone.Gap;
        double lead = square - (tc * tc), inside = square * ((energy * energy) - (lead * mass * mass));
        List<double> ends = [];
        if (square > 0 && inside > 0)
        {
            double root = Math.Sqrt(inside);
            ends.Add(((-energy * tc) - root) / lead);
            ends.Add(((-energy * tc) + root) / lead);
        }

        if (model.CutOff is not { } cutOff)
        {
            // A Weyl cone's curvature changes its sign at κ = 0.
            return ends.Count > 0 && ends.Min() < 0 && ends.Max() > 0 ? [.. ends.Append(0).Order()] : [.. ends.Order()];
        }

        double limit = cutOff * hc;
        if (cone.Tilt < 1)
        {
            double[] cut = [.. ends.Select(k => Math.Clamp(k, -limit, limit))];
            return cut.Length == 0 ? [] : [.. cut.Append(0).Where(k => k >= cut.Min() && k <= cut.Max()).Distinct().Order()];
        }

        return [.. ends.Append(0).Where(k => Math.Abs(k) < limit).Append(-limit).Append(limit).Distinct().Order()];
    }
}
