using System.Numerics;
using System.Runtime.CompilerServices;

namespace FieldSolve.Laws;

/// <summary>
/// The ohmic law plus a second-order part: K_a = s_a E_a + s_h E_b + (d11 E_a² + d12 E_b² + 2 d16 E_a E_b) l and
/// K_b = s_b E_b - s_h E_a + (d21 E_a² + d22 E_b² + 2 d26 E_a E_b) l, l = 1 / (1 + (|E|/F)²) with a field limit F, else 1.
/// Without a limit dK/dE loses definiteness at some field along some direction, since its second-order part is odd in E.
/// </summary>
/// <remarks>The law as written; <see cref="LawCatalogue"/> makes it with its guard.</remarks>
public sealed class QuadraticLaw : IParametricLaw
{
    private readonly Formula formula;

    /// <summary>Makes the law.</summary>
    /// <param name="a">Sheet conductance along crystal a, S, &gt; 0.</param>
    /// <param name="b">Sheet conductance along crystal b, S, &gt; 0.</param>
    /// <param name="hall">Hall sheet conductance, S, any sign.</param>
    /// <param name="second">Second-order sheet conductances, A m/V², finite.</param>
    /// <param name="fieldLimit">F in V/m, &gt; 0; infinite for none.</param>
    /// <exception cref="ArgumentOutOfRangeException">A value is out of range.</exception>
    public QuadraticLaw(double a, double b, double hall, SecondOrder second, double fieldLimit = double.PositiveInfinity)
    {
        Expect.Ohmic(a, b, hall);
        second.RequireFinite();
        formula = new(a, b, hall, second, new(fieldLimit));
        AtZeroField = new(a, hall, -hall, b);
    }

    /// <summary>How the device file makes it.</summary>
    public static LawKind Registration { get; } = new(
        "quadratic",
        "ohmic plus a second-order part d11 … d26",
        [.. LawParameters.Ohmic, .. LawParameters.Second, LawParameters.FieldLimit],
        v => GuardedLaw.Around(new QuadraticLaw(v["a"], v["b"], v["hall"], SecondOrder.From(v), v["field_limit"])));

    /// <inheritdoc/>
    public string Kind => Registration.Name;

    /// <inheritdoc/>
    public bool IsLinear => formula.Second == default;

    /// <inheritdoc/>
    public bool HasPotential => AtZeroField.Ab == AtZeroField.Ba && formula.Second.HasPotential && (IsLinear || double.IsInfinity(formula.Fade.Limit));

    /// <inheritdoc/>
    public Tensor2 AtZeroField { get; }

    /// <summary>Null: this is the law as written.</summary>
    public FieldGuard? Guard => null;

    FieldScan ILawDetail.Scan => formula.Fade.Scan(AtZeroField, formula.Second.Magnitudes, []);

    string ILawDetail.Terms => LawSummary.OhmicTerms(AtZeroField) + formula.Second.Terms + formula.Fade.Terms;

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
        : AtZeroField.Parameter(key) ?? formula.Second.Parameter(key) ?? throw ParameterSlopes.Unknown(Kind, key);

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

    private readonly struct Formula(double a, double b, double hall, SecondOrder second, FieldFade fade) : IVectorFormula
    {
        public SecondOrder Second => second;

        public FieldFade Fade => fade;

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public void Value(Vector<double> ea, Vector<double> eb, out Vector<double> ka, out Vector<double> kb)
        {
            second.Value(ea, eb, out ka, out kb);
            fade.Apply(ea, eb, ref ka, ref kb);
            ka += (a * ea) + (hall * eb);
            kb += (b * eb) - (hall * ea);
        }

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public void Slope(Vector<double> ea, Vector<double> eb, ref VectorSlope at)
        {
            second.Slope(ea, eb, ref at);
            fade.Apply(ea, eb, ref at);
            at.AddOhmic(ea, eb, a, b, hall);
        }
    }
}
