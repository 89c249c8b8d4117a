namespace FieldSolve.Laws;

/// <summary>
/// Finds where a law must be bent: the largest limit S for which the guarded law keeps the smallest eigenvalue of the symmetric part
/// of dK/dE at a tenth of its zero-field value at every field. A scan over directions and field sizes, deterministic.
/// </summary>
/// <remarks>
/// Beyond the start the guarded dK/dE is (1 - h) s + (h - g') (s + M tt') + g' K'(u), M = K'(u) - s, t across E: not merely a mean of
/// s and K', so the guarded law itself is scanned. Once g has reached S only h = g/F changes, and there the smallest
/// eigenvalue is a concave function of h: few samples serve.
/// </remarks>
internal sealed class GuardSearch
{
    /// <summary>Share of the zero-field eigenvalue that is kept.</summary>
    public const double Kept = 0.1;

    /// <summary>From / Limit.</summary>
    public const double FromShare = 0.7;

    // The scan asks a little more than is promised, for what lies between its samples.
    private const double Asked = 1.06 * Kept;
    private const double FieldRatio = 1.06;

    // Places beyond the start in units of the bend's width.
    private static readonly double[] Places =
    [
        .. Enumerable.Range(1, 36).Select(k => k / 12.0), 3.25, 3.5, 4, 4.5, 5, 6, 7, 8, 10, 15, 20, 40, 100, 1e3, 1e5,
    ];

    // A guard below this share of the lowest field looked at would leave nothing of the law but its ohmic part.
    private const double Hopeless = 1e-9;

    private readonly ILawDetail law;
    private readonly FieldScan scan;
    private readonly Tensor2 s;
    private readonly double smallest;
    private readonly double[] cos, sin, reach, ea, eb, ka, kb, aa, ab, ba, bb;

    private GuardSearch(ILawDetail law, FieldScan scan)
    {
        this.law = law;
        this.scan = scan;
        s = law.AtZeroField;
        smallest = s.SmallestSymmetricEigenvalue;
        int n = scan.Directions;
        (cos, sin, reach, ea, eb, ka) = (new double[n], new double[n], new double[n], new double[n], new double[n], new double[n]);
        (kb, aa, ab, ba, bb) = (new double[n], new double[n], new double[n], new double[n], new double[n]);
        for (int j = 0; j < n; j++)
        {
            (sin[j], cos[j]) = Math.SinCos(2 * Math.PI * j / n);
            reach[j] = scan.Reach(cos[j], sin[j]);
        }
    }

    /// <summary>The guard of a law as written; null when it keeps definiteness at every field.</summary>
    /// <exception cref="LawException">Definiteness is lost at once.</exception>
    public static FieldGuard? Find(ILawDetail law)
    {
        FieldScan scan = law.Scan;
        return scan.Highest > 0 ? new GuardSearch(law, scan).Find() : null;
    }

    private FieldGuard? Find()
    {
        if (FirstThin() is not { } range)
        {
            return null;
        }

        (double good, double bad) = range;
        for (int k = 0; k < 12; k++)
        {
            double middle = (good + bad) / 2;
            (good, bad) = PureHolds(middle, out _) ? (middle, bad) : (good, middle);
        }

        // N is of second order in E, so a small enough limit always holds.
        double high = good / FromShare, low = high;
        while (low > Hopeless * scan.Lowest && !GuardedHolds(low))
        {
            high = low;
            low /= 1.5;
        }

        if (!(low > Hopeless * scan.Lowest))
        {
            throw new LawException(
                "the symmetric part of dK/dE is not positive definite at any but vanishing fields, so a current would have no certain field; check signs, units and outliers of the law");
        }

        for (int k = 0; low < high && k < 10; k++)
        {
            double middle = (low + high) / 2;
            (low, high) = GuardedHolds(middle) ? (middle, high) : (low, middle);
        }

        return new(FromShare * low, low);
    }

    /// <summary>Fields between which the eigenvalue first falls below what is asked; null when definiteness is never lost.</summary>
    private (double Good, double Bad)? FirstThin()
    {
        (double Good, double Bad)? first = null;
        double before = 0;
        for (double f = scan.Lowest; ; f = Math.Min(f * FieldRatio, f + scan.LargestStep))
        {
            f = Math.Min(f, scan.Highest);
            if (!PureHolds(f, out bool lost))
            {
                first ??= (before, f);
            }

            if (lost)
            {
                return first;
            }

            if (f >= scan.Highest)
            {
                return null;
            }

            before = f;
        }
    }

    private bool PureHolds(double field, out bool lost)
    {
        Evaluate(field);
        bool holds = true;
        lost = false;
        for (int j = 0; j < cos.Length; j++)
        {
            double least = Least(new(aa[j], ab[j], ba[j], bb[j]), out double most);
            holds &= least >= Asked * smallest;

            // Rounding: that of the eigenvalue itself and that of a Hall part which cancels in the symmetric part.
            lost |= !(least >= (scan.LossShare * smallest) - (1e-12 * most) - (1e-15 * Math.Abs(s.Ab)));
        }

        return holds;
    }

    private bool GuardedHolds(double limit)
    {
        FieldGuard guard = new(FromShare * limit, limit);
        foreach (double place in Places)
        {
            double f = guard.From + (place * (guard.Limit - guard.From));
            GuardBend bend = new(guard, f);
            Evaluate(bend.Value);
            for (int j = 0; j < cos.Length; j++)
            {
                // Beyond its reach the law refuses, so nothing need hold there.
                if (f <= reach[j]
                    && !(Least(bend.Slope(s, new(aa[j], ab[j], ba[j], bb[j]), cos[j], sin[j]), out _) >= Asked * smallest))
                {
                    return false;
                }
            }
        }

        return true;
    }

    private void Evaluate(double field)
    {
        for (int j = 0; j < cos.Length; j++)
        {
            double f = Math.Min(field, reach[j]);
            ea[j] = f * cos[j];
            eb[j] = f * sin[j];
        }

        law.Evaluate(ea, eb, ka, kb, aa, ab, ba, bb);
    }

    // As det / larger eigenvalue, which keeps its digits when the two are far apart.
    private static double Least(Tensor2 d, out double most)
    {
        double mean = (d.Aa + d.Bb) / 2, half = (d.Aa - d.Bb) / 2, off = (d.Ab + d.Ba) / 2;
        double radius = Math.Sqrt((half * half) + (off * off));
        most = Math.Abs(mean) + radius;
        return mean > 0 ? ((d.Aa * d.Bb) - (off * off)) / most : mean - radius;
    }
}
