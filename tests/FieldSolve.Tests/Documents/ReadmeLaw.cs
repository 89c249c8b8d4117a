using FieldSolve.Laws;

namespace FieldSolve.Tests.DocumentsTests;

// begin
/// <summary>K = s E (1 + |E|²/F²): a sheet that conducts better the stronger the field.</summary>
internal sealed class RisingLaw(double s, double f) : ISheetLaw
{
    public string Kind => "rising";
    public bool IsLinear => false;
    public bool HasPotential => true; // dK/dE is symmetric
    public Tensor2 AtZeroField => new(s, 0, 0, s);
    public FieldGuard? Guard => null; // dK/dE is positive definite at every field

    public void Evaluate(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        for (int i = 0; i < ea.Length; i++)
        {
            double g = s * (1 + (((ea[i] * ea[i]) + (eb[i] * eb[i])) / (f * f)));
            (ka[i], kb[i]) = (g * ea[i], g * eb[i]);
        }
    }

    public void Evaluate(
        ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb,
        Span<double> daa, Span<double> dab, Span<double> dba, Span<double> dbb)
    {
        Evaluate(ea, eb, ka, kb);
        for (int i = 0; i < ea.Length; i++)
        {
            double a = ea[i] / f, b = eb[i] / f;
            daa[i] = s * (1 + (3 * a * a) + (b * b));
            dab[i] = dba[i] = s * 2 * a * b;
            dbb[i] = s * (1 + (a * a) + (3 * b * b));
        }
    }

    public void EvaluatePure(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb) => Evaluate(ea, eb, ka, kb);
}

// end
