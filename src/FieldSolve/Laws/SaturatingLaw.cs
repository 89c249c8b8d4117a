namespace FieldSolve.Laws;

/// <summary>
/// K_a = s_a E_a w(|E|/F_a) + s_h E_b, K_b = s_b E_b w(|E|/F_b) - s_h E_a with w(x) = 1 / (1 + x^m)^(1/m): along each axis the
/// current density saturates at s F. The form is that of carrier velocity: D. M. Caughey, R. E. Thomas, Proc. IEEE 55 (1967) 2192.
/// </summary>
/// <remarks>
/// The law as written; <see cref="LawCatalogue"/> makes it with its guard. When s_a F_a differs from s_b F_b the direction of the
/// saturated current turns against that of E and dK/dE loses definiteness at finite fields; equal products are necessary for
/// definiteness at every field but not sufficient when F_a and F_b are far apart, so the guard looks at the law itself.
/// </remarks>
public sealed class SaturatingLaw : IParametricLaw
{
    private readonly double a, b, hall, fieldA, fieldB, sharpness;

    /// <summary>Makes the law.</summary>
    /// <param name="a">Sheet conductance along crystal a at zero field, S, &gt; 0.</param>
    /// <param name="b">Sheet conductance along crystal b at zero field, S, &gt; 0.</param>
    /// <param name="hall">Hall sheet conductance, S, any sign; it does not saturate.</param>
    /// <param name="fieldA">F_a in V/m, &gt; 0.</param>
    /// <param name="fieldB">F_b in V/m, &gt; 0.</param>
    /// <param name="sharpness">m, finite and at least 1.</param>
    /// <exception cref="ArgumentOutOfRangeException">A value is out of range.</exception>
    public SaturatingLaw(double a, double b, double hall, double fieldA, double fieldB, double sharpness)
    {
        Expect.Ohmic(a, b, hall);
        Expect.Positive(fieldA, "V/m", "field_a");
        Expect.Positive(fieldB, "V/m", "field_b");
        Expect.AtLeastOne(sharpness, nameof(sharpness));
        (this.a, this.b, this.hall, this.fieldA, this.fieldB, this.sharpness) = (a, b, hall, fieldA, fieldB, sharpness);
        AtZeroField = new(a, hall, -hall, b);
    }

    /// <summary>How the device file makes it.</summary>
    public static LawKind Registration { get; } = new(
        "saturating",
        "the current density along each axis saturates with the field",
        [
            .. LawParameters.Ohmic,
            new("field_a", Quantities.Dimension.Field, true, 0, ParameterBound.Positive, "field at which K along a saturates"),
            new("field_b", Quantities.Dimension.Field, true, 0, ParameterBound.Positive, "field at which K along b saturates"),
            new("sharpness", Quantities.Dimension.None, true, 0, ParameterBound.AtLeastOne, "exponent m of the saturation"),
        ],
        v => GuardedLaw.Around(new SaturatingLaw(v["a"], v["b"], v["hall"], v["field_a"], v["field_b"], v["sharpness"])));

    /// <inheritdoc/>
    public string Kind => Registration.Name;

    /// <inheritdoc/>
    public bool IsLinear => false;

    /// <inheritdoc/>
    public bool HasPotential => hall == 0 && a == b && fieldA == fieldB;

    /// <inheritdoc/>
    public Tensor2 AtZeroField { get; }

    /// <summary>Null: this is the law as written.</summary>
    public FieldGuard? Guard => null;

    FieldScan ILawDetail.Scan
    {
        get
        {
            // With saturation currents that differ by a share δ, definiteness goes about where (F/|E|)^m has sunk to δ²/4.
            // Below δ = 1e-4 that happens within rounding: such products count as equal.
            double share = Math.Abs((a * fieldA) - (b * fieldB)) / ((a * fieldA) + (b * fieldB));
            double far = share < 1e-4 ? 1e3 : Math.Max(1e3, Math.Pow(100 / (share * share), 1 / sharpness));
            double near = 0.01 * Math.Sqrt(Math.Min(a, b) / Math.Max(a, b));
            return new(near * Math.Min(fieldA, fieldB), far * Math.Max(fieldA, fieldB)) { LossShare = 0 };
        }
    }

    string ILawDetail.Terms => LawSummary.OhmicTerms(AtZeroField)
        + LawSummary.Terms("V/m", ("field_a", fieldA), ("field_b", fieldB)) + $", sharpness = {LawSummary.Number(sharpness)}";

    /// <inheritdoc/>
    public void Evaluate(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        VectorLoop.RequireLength(ea.Length, eb.Length, ka.Length, kb.Length);
        for (int i = 0; i < ea.Length; i++)
        {
            double p = ea[i], q = eb[i], f = double.Hypot(p, q);
            ka[i] = (a * p * Saturation(f / fieldA, out _)) + (hall * q);
            kb[i] = (b * q * Saturation(f / fieldB, out _)) - (hall * p);
        }
    }

    /// <inheritdoc/>
    public void Evaluate(
        ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb,
        Span<double> daa, Span<double> dab, Span<double> dba, Span<double> dbb)
    {
        VectorLoop.RequireLength(ea.Length, eb.Length, ka.Length, kb.Length);
        VectorLoop.RequireLength(ea.Length, daa.Length, dab.Length, dba.Length);
        VectorLoop.RequireLength(ea.Length, dbb.Length, dbb.Length, dbb.Length);
        for (int i = 0; i < ea.Length; i++)
        {
            double p = ea[i], q = eb[i], f = double.Hypot(p, q);
            double wa = a * Saturation(f / fieldA, out double ra);
            double wb = b * Saturation(f / fieldB, out double rb);
            ka[i] = (wa * p) + (hall * q);
            kb[i] = (wb * q) - (hall * p);

            // |E| dw/d|E| = -w r, and at zero field r = 0, so the direction may be anything there.
            double c = f > 0 ? p / f : 0, s = f > 0 ? q / f : 0;
            daa[i] = wa * (1 - (ra * c * c));
            dab[i] = hall - (wa * ra * c * s);
            dba[i] = -hall - (wb * rb * c * s);
            dbb[i] = wb * (1 - (rb * s * s));
        }
    }

    LawKind IParametricLaw.Made => Registration;

    double IParametricLaw.ParameterValue(string key) => key switch
    {
        "field_a" => fieldA,
        "field_b" => fieldB,
        "sharpness" => sharpness,
        _ => AtZeroField.Parameter(key) ?? throw ParameterSlopes.Unknown(Kind, key),
    };

    // With w = (1 + x^m)^(-1/m), x = |E|/F and r = x^m / (1 + x^m): dw/dF = w r / F, d ln w/dm = ln(1 + x^m)/m² - r ln(x)/m.
    void IParametricLaw.ParameterSlope(string key, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        if (key == "hall")
        {
            ParameterSlopes.Ohmic(key, ea, eb, ka, kb);
            return;
        }

        for (int i = 0; i < ea.Length; i++)
        {
            double p = ea[i], q = eb[i], f = double.Hypot(p, q);
            double wa = Saturation(f / fieldA, out double ra), wb = Saturation(f / fieldB, out double rb);
            (ka[i], kb[i]) = key switch
            {
                "a" => (p * wa, 0),
                "b" => (0, q * wb),
                "field_a" => (a * p * wa * ra / fieldA, 0),
                "field_b" => (0, b * q * wb * rb / fieldB),
                "sharpness" => (a * p * wa * BySharpness(f / fieldA, ra), b * q * wb * BySharpness(f / fieldB, rb)),
                _ => throw ParameterSlopes.Unknown(Kind, key),
            };
        }
    }

    // From x^-m where x^m could overflow; zero at zero field, where x^m ln x is.
    private double BySharpness(double x, double r)
    {
        if (x == 0)
        {
            return 0;
        }

        double log = Math.Log(x);
        return x > 1
            ? (double.LogP1(Math.Pow(x, -sharpness)) / (sharpness * sharpness)) + ((1 - r) * log / sharpness)
            : (double.LogP1(Math.Pow(x, sharpness)) / (sharpness * sharpness)) - (r * log / sharpness);
    }

    /// <inheritdoc/>
    public void EvaluatePure(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb) =>
        Evaluate(ea, eb, ka, kb);

    /// <summary>w = (1 + x^m)^(-1/m) and r = x^m / (1 + x^m), from x^-m where x^m could overflow.</summary>
    private double Saturation(double x, out double r)
    {
        bool large = x > 1;
        double y = large ? 1 / x : x;
        double power = sharpness switch
        {
            1 => y,
            2 => y * y,
            _ => Math.Pow(y, sharpness),
        };
        double fade = sharpness switch
        {
            1 => 1 / (1 + power),
            2 => 1 / Math.Sqrt(1 + power),
            _ => Math.Pow(1 + power, -1 / sharpness),
        };
        r = (large ? 1 : power) / (1 + power);
        return large ? y * fade : fade;
    }
}
