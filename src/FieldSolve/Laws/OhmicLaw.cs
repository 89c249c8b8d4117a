using System.Numerics;
using System.Runtime.CompilerServices;

namespace FieldSolve.Laws;

/// <summary>
/// K_a = s_a E_a + s_h E_b, K_b = s_b E_b - s_h E_a. The Hall part carries no power: K·E = s_a E_a² + s_b E_b².
/// </summary>
public sealed class OhmicLaw : IParametricLaw
{
    private readonly Formula formula;

    /// <summary>Makes the law.</summary>
    /// <param name="a">Sheet conductance along crystal a, S, &gt; 0.</param>
    /// <param name="b">Sheet conductance along crystal b, S, &gt; 0.</param>
    /// <param name="hall">Hall sheet conductance s_h, S, any sign.</param>
    public OhmicLaw(double a, double b, double hall = 0)
    {
        Expect.Ohmic(a, b, hall);
        formula = new(a, b, hall);
        AtZeroField = new(a, hall, -hall, b);
    }

    /// <summary>How the device file makes it.</summary>
    public static LawKind Registration { get; } = new(
        "ohmic",
        "K proportional to E, different along a and b, with a Hall part",
        LawParameters.Ohmic,
        v => new OhmicLaw(v["a"], v["b"], v["hall"]));

    /// <inheritdoc/>
    public string Kind => Registration.Name;

    /// <inheritdoc/>
    public bool IsLinear => true;

    /// <inheritdoc/>
    public bool HasPotential => AtZeroField.Ab == AtZeroField.Ba;

    /// <inheritdoc/>
    public Tensor2 AtZeroField { get; }

    /// <summary>Always null: dK/dE is the same at every field.</summary>
    public FieldGuard? Guard => null;

    FieldScan ILawDetail.Scan => FieldScan.None;

    string ILawDetail.Terms => LawSummary.OhmicTerms(AtZeroField);

    /// <inheritdoc/>
    public void Evaluate(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb) =>
        VectorLoop.Value(formula, ea, eb, ka, kb);

    /// <inheritdoc/>
    public void Evaluate(
        ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb,
        Span<double> daa, Span<double> dab, Span<double> dba, Span<double> dbb) =>
        VectorLoop.Slope(formula, ea, eb, ka, kb, daa, dab, dba, dbb);

    LawKind IParametricLaw.Made => Registration;

    double IParametricLaw.ParameterValue(string key) => AtZeroField.Parameter(key) ?? throw ParameterSlopes.Unknown(Kind, key);

    void IParametricLaw.ParameterSlope(string key, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        if (!ParameterSlopes.Ohmic(key, ea, eb, ka, kb))
        {
            throw ParameterSlopes.Unknown(Kind, key);
        }
    }

    /// <inheritdoc/>
    public void EvaluatePure(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb) =>
        Evaluate(ea, eb, ka, kb);

    private readonly struct Formula(double a, double b, double hall) : IVectorFormula
    {
        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public void Value(Vector<double> ea, Vector<double> eb, out Vector<double> ka, out Vector<double> kb)
        {
            ka = (a * ea) + (hall * eb);
            kb = (b * eb) - (hall * ea);
        }

        [MethodImpl(MethodImplOptions.AggressiveInlining)]
        public void Slope(Vector<double> ea, Vector<double> eb, ref VectorSlope at)
        {
            Value(ea, eb, out at.Ka, out at.Kb);
            at.Aa = new(a);
            at.Ab = new(hall);
            at.Ba = new(-hall);
            at.Bb = new(b);
        }
    }
}
