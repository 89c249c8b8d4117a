using System.Numerics;
using System.Runtime.CompilerServices;

namespace FieldSolve.Laws;

/// <summary>
/// The quadratic law plus a third-order part: K_a gets (c11 E_a³ + c12 E_a E_b²) l, K_b gets (c22 E_b³ + c21 E_b E_a²) l,
/// with the same l = 1 / (1 + (|E|/F)²) as the second order where there is a field limit F, else 1.
/// </summary>
/// <remarks>The law as written; <see cref="LawCatalogue"/> makes it with its guard.</remarks>
public sealed class CubicLaw : IParametricLaw
{
    private readonly Formula formula;

    /// <summary>Makes the law.</summary>
    /// <param name="a">Sheet conductance along crystal a, S, &gt; 0.</param>
    /// <param name="b">Sheet conductance along crystal b, S, &gt; 0.</param>
    /// <param name="hall">Hall sheet conductance, S, any sign.</param>
    /// <param name="second">Second-order sheet conductances, A m/V², finite.</param>
    /// <param name="third">Third-order sheet conductances, A m²/V³, finite.</param>
    /// <param name="fieldLimit">F in V/m, &gt; 0; infinite for none.</param>
    /// <exception cref="ArgumentOutOfRangeException">A value is out of range.</exception>
    public CubicLaw(double a, double b, double hall, SecondOrder second, ThirdOrder third, double fieldLimit = double.PositiveInfinity)
    {
        Expect.Ohmic(a, b, hall);
        second.RequireFinite();
        third.RequireFinite();
        formula = new(a, b, hall, second, third, new(fieldLimit));
        AtZeroField = new(a, hall, -hall, b);
    }

    /// <summary>How the device file makes it.</summary>
    public static LawKind Registration { get; } = new(
        "cubic",
        "ohmic plus a second-order part d11 … d26 and a third-order part c11 … c22",
        [.. LawParameters.Ohmic, .. LawParameters.Second, .. LawParameters.Third, LawParameters.FieldLimit],
        v => GuardedLaw.Around(new CubicLaw(
            v["a"], v["b"], v["hall"], SecondOrder.From(v), ThirdOrder.From(v), v["field_limit"])));

    /// <inheritdoc/>
    public string Kind => Registration.Name;

    /// <inheritdoc/>
    public bool IsLinear => formula.Second == default && formula.Third == default;

    /// <inheritdoc/>
    public bool HasPotential => AtZeroField.Ab == AtZeroField.Ba && formula.Second.HasPotential && formula.Third.HasPotential
        && (IsLinear || double.IsInfinity(formula.Fade.Limit));

    /// <inheritdoc/>
    public Tensor2 AtZeroField { get; }

    /// <summary>Null: this is the law as written.</summary>
    public FieldGuard? Guard => null;

    FieldScan ILawDetail.Scan => formula.Fade.Scan(AtZeroField, formula.Second.Magnitudes, formula.Third.Magnitudes);

    string ILawDetail.Terms =>
        LawSummary.OhmicTerms(AtZeroField) + formula.Second.Terms + formula.Third.Terms + formula.Fade.Terms;

    /// <inheritdoc/>
    public void Evaluate(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb) =>
        VectorLoop.Value(formula, ea, eb, ka, kb);

    /// <inheritdoc/>
    public void Evaluate(
        ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb,
        Span<double> daa, Span<double> dab, Span<double> dba, Span<double> dbb) =>
        VectorLoop.Slope(formula, ea, eb, ka, kb, daa, dab, dba, dbb);

    LawKind IParametricLaw.Made => Registration;

    double IParametricLaw.ParameterValue(string key) => key == "field_limit"
        ? formula.Fade.Limit
        : AtZeroField.Parameter(key) ?? formula.Second.Parameter(key) ?? formula.Third.Parameter(key) ?? throw ParameterSlopes.Unknown(Kind, key);

    void IParametricLaw.ParameterSlope(string key, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        if (key == "field_limit")
        {
            Evaluate(ea, eb, ka, kb);
            ParameterSlopes.BeyondOhmic(AtZeroField, ea, eb, ka, kb);
            ParameterSlopes.FieldLimit(formula.Fade.Limit, ea, eb, ka, kb);
        }
        else if (!ParameterSlopes.Ohmic(key, ea, eb, ka, kb) && !ParameterSlopes.Expansion(key, formula.Fade.Limit, ea, eb, ka, kb))
        {
            throw ParameterSlopes.Unknown(Kind, key);
        }
    }

    /// <inheritdoc/>
    public void EvaluatePure(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb) =>
        Evaluate(ea, eb, ka, kb);

    private readonly struct Formula(double a, double b, double hall, SecondOrder second, ThirdOrder third, FieldFade fade)
        : IVectorFormula
    {
        public SecondOrder Second => second;

        public ThirdOrder Third => third;

        public FieldFade Fade => fade;

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public void Value(Vector<double> ea, Vector<double> eb, out Vector<double> ka, out Vector<double> kb)
        {
            second.Value(ea, eb, out ka, out kb);
            third.AddValue(ea, eb, ref ka, ref kb);
            fade.Apply(ea, eb, ref ka, ref kb);
            ka += (a * ea) + (hall * eb);
            kb += (b * eb) - (hall * ea);
        }

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public void Slope(Vector<double> ea, Vector<double> eb, ref VectorSlope at)
        {
            second.Slope(ea, eb, ref at);
            third.AddSlope(ea, eb, ref at);
            fade.Apply(ea, eb, ref at);
            at.AddOhmic(ea, eb, a, b, hall);
        }
    }
}
