namespace FieldSolve.Laws;

/// <summary>dK/dp for the parameters that several laws share.</summary>
internal static class ParameterSlopes
{
    /// <summary>ds/dp of the ohmic tensor s; zero for every other parameter.</summary>
    public static Tensor2 OhmicTensor(string key) => key switch
    {
        "a" => new(1, 0, 0, 0),
        "b" => new(0, 0, 0, 1),
        "hall" => new(0, 1, -1, 0),
        _ => default,
    };

    /// <summary>a, b, hall. False for another parameter.</summary>
    public static bool Ohmic(string key, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        Tensor2 s = OhmicTensor(key);
        if (s == default)
        {
            return false;
        }

        for (int i = 0; i < ea.Length; i++)
        {
            double p = ea[i], q = eb[i];
            ka[i] = (s.Aa * p) + (s.Ab * q);
            kb[i] = (s.Ba * p) + (s.Bb * q);
        }

        return true;
    }

    /// <summary>The monomial that a coefficient d11 … d26, c11 … c22 stands before, times the fade l = 1 / (1 + (|E|/F)²).</summary>
    /// <returns>False for another parameter.</returns>
    public static bool Expansion(
        string key, double fieldLimit, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        // Which component, the powers of E_a and E_b, and the factor.
        (bool IsA, int A, int B, double Factor)? term = key switch
        {
            "d11" => (true, 2, 0, 1),
            "d12" => (true, 0, 2, 1),
            "d16" => (true, 1, 1, 2),
            "d21" => (false, 2, 0, 1),
            "d22" => (false, 0, 2, 1),
            "d26" => (false, 1, 1, 2),
            "c11" => (true, 3, 0, 1),
            "c12" => (true, 1, 2, 1),
            "c21" => (false, 2, 1, 1),
            "c22" => (false, 0, 3, 1),
            _ => null,
        };
        if (term is not { } t)
        {
            return false;
        }

        Span<double> own = t.IsA ? ka : kb, other = t.IsA ? kb : ka;
        double inverseSquare = 1 / fieldLimit / fieldLimit;
        other[..ea.Length].Clear();
        for (int i = 0; i < ea.Length; i++)
        {
            double p = ea[i], q = eb[i];
            own[i] = t.Factor * Power(p, t.A) * Power(q, t.B) / (1 + (inverseSquare * ((p * p) + (q * q))));
        }

        return true;
    }

    /// <summary>
    /// dK/dF of K = sE + l N with l = 1 / (1 + (|E|/F)²): dl/dF = 2 l² |E|²/F³.
    /// </summary>
    /// <param name="fieldLimit">F, V/m.</param>
    /// <param name="ea">E along a.</param>
    /// <param name="eb">E along b.</param>
    /// <param name="ka">In: the part l N of K; out: its slope.</param>
    /// <param name="kb">The same along b.</param>
    public static void FieldLimit(double fieldLimit, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        for (int i = 0; i < ea.Length; i++)
        {
            double x = ea[i] / fieldLimit, y = eb[i] / fieldLimit, square = (x * x) + (y * y);
            double factor = double.IsInfinity(fieldLimit) ? 0 : 2 * square / (1 + square) / fieldLimit;
            ka[i] *= factor;
            kb[i] *= factor;
        }
    }

    /// <summary>An expansion's part beyond the ohmic one: K - sE.</summary>
    public static void BeyondOhmic(Tensor2 s, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        for (int i = 0; i < ea.Length; i++)
        {
            ka[i] -= (s.Aa * ea[i]) + (s.Ab * eb[i]);
            kb[i] -= (s.Ba * ea[i]) + (s.Bb * eb[i]);
        }
    }

    public static ArgumentException Unknown(string kind, string key) =>
        new($"The law '{kind}' has no numeric parameter '{key}'.", nameof(key));

    private static double Power(double x, int n) => n switch
    {
        0 => 1,
        1 => x,
        2 => x * x,
        _ => x * x * x,
    };
}
