namespace FieldSolve.Bands;

/// <summary>An integrand with several components.</summary>
/// <param name="x">Where.</param>
/// <param name="values">Takes the components; comes in as zeros.</param>
/// <param name="errors">Takes their own errors; comes in as zeros.</param>
internal delegate void Integrand(double x, Span<double> values, Span<double> errors);

/// <summary>Integrals of several components and their estimated errors.</summary>
/// <param name="Values">Integrals.</param>
/// <param name="Errors">Estimated errors: of the rule, plus the integral of the integrand's own errors.</param>
internal sealed record IntegralSet(double[] Values, double[] Errors)
{
    /// <summary>True when every error is within a share, given for each group, of the largest value of the group.</summary>
    public bool Meets(double[] shares, int[] groups)
    {
        double[] scale = Scales(Values, groups);
        return Enumerable.Range(0, groups.Length).All(c => Errors[c] <= shares[groups[c]] * scale[groups[c]]);
    }

    /// <summary>Largest size of each group.</summary>
    public static double[] Scales(double[] values, int[] groups)
    {
        double[] scale = new double[groups.Max() + 1];
        for (int c = 0; c < groups.Length; c++)
        {
            scale[groups[c]] = Math.Max(scale[groups[c]], Math.Abs(values[c]));
        }

        return scale;
    }
}

/// <summary>
/// Adaptive Gauss-Kronrod quadrature (7 and 15 points) of several components at once: the piece with the largest error is
/// halved until every component is within the wanted share of the largest one of its group. Rule and error estimate: R. Piessens
/// et al., QUADPACK, Springer 1983. Between two breaks the variable is x = from + (to - from)(3s² - 2s³), which makes square roots at
/// the breaks (band edges, ends of a contour) smooth in s.
/// </summary>
internal static class GaussKronrod
{
    private const int MostPieces = 300;
    private const double Rounding = 1e-15;

    /// <summary>Differences of the two rules up to this many times the integrand's own error are that error: halving does not help.</summary>
    private const double Noise = 5;

    private static readonly double[] Nodes =
    [
        0.991455371120812639206854697526329, 0.949107912342758524526189684047851, 0.864864423359769072789712788640926,
        0.741531185599394439863864773280788, 0.586087235467691130294144691693163, 0.405845151377397166906606412076961,
        0.207784955007898467600689403773245, 0.0,
    ];

    private static readonly double[] Kronrod =
    [
        0.022935322010529224963732008058970, 0.063092092629978553290700663189204, 0.104790010322250183839876322541518,
        0.140653259715525918745189590510238, 0.169004726639267902826583426598550, 0.190350578064785409913256402421014,
        0.204432940075298892414161999234649, 0.209482141084727828012999174891714,
    ];

    private static readonly double[] Gauss =
        [0.129484966168869693270611432679082, 0.279705391489276667901467771423780, 0.381830050505118944950369775488975, 0.417959183673469387755102040816327];

    private readonly record struct Stretch(double From, double To)
    {
        public double At(double s) => From + ((To - From) * s * s * (3 - (2 * s)));

        public double Slope(double s) => 6 * (To - From) * s * (1 - s);
    }

    private sealed record Piece(Stretch Of, double From, double To, double[] Values, double[] RuleErrors, double[] OwnErrors);

    /// <summary>Integrates over the pieces between neighbouring breaks.</summary>
    /// <param name="f">The integrand; it is not asked at the breaks.</param>
    /// <param name="breaks">Ascending; places where the integrand is not smooth belong to them.</param>
    /// <param name="groups">Group of each component, from 0 on.</param>
    /// <param name="shares">Wanted error of each group over its largest integral.</param>
    /// <param name="cancel">Stops between pieces.</param>
    public static IntegralSet Integrate(Integrand f, IReadOnlyList<double> breaks, int[] groups, double[] shares, CancellationToken cancel)
    {
        List<Piece> pieces = [];
        for (int k = 1; k < breaks.Count; k++)
        {
            if (breaks[k] > breaks[k - 1])
            {
                pieces.Add(Apply(f, new(breaks[k - 1], breaks[k]), 0, 1, groups.Length));
            }
        }

        while (true)
        {
            cancel.ThrowIfCancellationRequested();
            IntegralSet sum = Sum(pieces, groups.Length);
            (int worst, bool reached) = Worst(pieces, groups, IntegralSet.Scales(sum.Values, groups), shares);
            if (reached || pieces.Count >= MostPieces)
            {
                return sum;
            }

            Piece old = pieces[worst];
            double middle = 0.5 * (old.From + old.To);
            pieces[worst] = Apply(f, old.Of, old.From, middle, groups.Length);
            pieces.Insert(worst + 1, Apply(f, old.Of, middle, old.To, groups.Length));
        }
    }

    private static (int Piece, bool Reached) Worst(List<Piece> pieces, int[] groups, double[] scale, double[] shares)
    {
        double[] total = new double[groups.Length], allowed = new double[groups.Length];
        foreach (Piece p in pieces)
        {
            for (int c = 0; c < groups.Length; c++)
            {
                total[c] += p.RuleErrors[c];
                allowed[c] += Noise * p.OwnErrors[c];
            }
        }

        bool reached = true;
        for (int c = 0; c < groups.Length; c++)
        {
            allowed[c] = Math.Max(allowed[c], shares[groups[c]] * scale[groups[c]]);
            reached &= total[c] <= allowed[c];
        }

        int worst = 0;
        double most = -1;
        for (int p = 0; p < pieces.Count; p++)
        {
            double share = 0;
            for (int c = 0; c < groups.Length; c++)
            {
                share = total[c] > allowed[c] ? Math.Max(share, allowed[c] > 0 ? pieces[p].RuleErrors[c] / allowed[c] : pieces[p].RuleErrors[c] > 0 ? double.MaxValue : 0) : share;
            }

            (worst, most) = share > most ? (p, share) : (worst, most);
        }

        return (worst, reached);
    }

    private static IntegralSet Sum(List<Piece> pieces, int count)
    {
        double[] values = new double[count], errors = new double[count];
        foreach (Piece p in pieces)
        {
            for (int c = 0; c < count; c++)
            {
                values[c] += p.Values[c];
                errors[c] += p.RuleErrors[c] + p.OwnErrors[c] + (Rounding * Math.Abs(p.Values[c]));
            }
        }

        return new(values, errors);
    }

    private static Piece Apply(Integrand f, Stretch of, double from, double to, int count)
    {
        double middle = 0.5 * (from + to), half = 0.5 * (to - from);
        double[][] at = new double[15][];
        double[] kronrod = new double[count], gauss = new double[count], own = new double[count], spread = new double[count], errors = new double[count];
        for (int k = 0; k < 15; k++)
        {
            int node = k < 8 ? k : 14 - k;
            at[k] = new double[count];
            Array.Clear(errors);
            double s = middle + (half * (k < 7 ? -Nodes[node] : Nodes[node])), slope = of.Slope(s);
            f(of.At(s), at[k], errors);
            for (int c = 0; c < count; c++)
            {
                at[k][c] *= slope;
                kronrod[c] += half * Kronrod[node] * at[k][c];
                gauss[c] += node % 2 == 1 ? half * Gauss[node / 2] * at[k][c] : 0;
                own[c] += half * Kronrod[node] * slope * errors[c];
            }
        }

        double[] rule = new double[count];
        for (int c = 0; c < count; c++)
        {
            double mean = kronrod[c] / (2 * half);
            for (int k = 0; k < 15; k++)
            {
                spread[c] += half * Kronrod[k < 8 ? k : 14 - k] * Math.Abs(at[k][c] - mean);
            }

            double difference = Math.Abs(kronrod[c] - gauss[c]);
            rule[c] = spread[c] > 0 && difference > Noise * own[c] ? spread[c] * Math.Min(1, Math.Pow(200 * difference / spread[c], 1.5)) : difference;
        }

        return new(of, from, to, kronrod, rule, own);
    }
}
