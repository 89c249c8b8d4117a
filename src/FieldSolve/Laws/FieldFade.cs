using System.Numerics;
using System.Runtime.CompilerServices;

namespace FieldSolve.Laws;

/// <summary>
/// The optional field limit F of the expansions: their higher orders are multiplied by l = 1 / (1 + (|E|/F)²).
/// </summary>
internal readonly struct FieldFade
{
    private readonly double inverseSquare;

    /// <param name="limit">F in V/m; infinite for none.</param>
    public FieldFade(double limit)
    {
        Expect.PositiveOrInfinite(limit, "V/m", "field_limit");
        Limit = limit;
        inverseSquare = 1 / limit / limit;
    }

    public double Limit { get; }

    public string Terms => LawSummary.Terms("V/m", ("field_limit", Limit));

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void Apply(Vector<double> ea, Vector<double> eb, ref Vector<double> ka, ref Vector<double> kb)
    {
        if (inverseSquare == 0)
        {
            return;
        }

        Vector<double> l = Vector<double>.One / (Vector<double>.One + (inverseSquare * ((ea * ea) + (eb * eb))));
        ka *= l;
        kb *= l;
    }

    // d(l N)/dE = l dN/dE + N dl/dE, dl/dE = -2 l² E / F².
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void Apply(Vector<double> ea, Vector<double> eb, ref VectorSlope at)
    {
        if (inverseSquare == 0)
        {
            return;
        }

        Vector<double> l = Vector<double>.One / (Vector<double>.One + (inverseSquare * ((ea * ea) + (eb * eb))));
        at.Ka *= l;
        at.Kb *= l;
        Vector<double> twice = -2 * inverseSquare * l, ta = twice * ea, tb = twice * eb;
        at.Aa = (l * at.Aa) + (at.Ka * ta);
        at.Ab = (l * at.Ab) + (at.Ka * tb);
        at.Ba = (l * at.Ba) + (at.Kb * ta);
        at.Bb = (l * at.Bb) + (at.Kb * tb);
    }

    /// <summary>The fields at which an expansion can lose definiteness, from the sizes of its coefficients.</summary>
    /// <param name="s">dK/dE at zero field.</param>
    /// <param name="second">Sizes of the second-order coefficients, A m/V².</param>
    /// <param name="third">Sizes of the third-order coefficients, A m²/V³.</param>
    public FieldScan Scan(Tensor2 s, double[] second, double[] third)
    {
        double d = second.Sum(), c = third.Sum();
        if (d == 0 && c == 0)
        {
            return FieldScan.None;
        }

        // Up to here |dN/dE| is a small part of the smaller eigenvalue, whatever the direction.
        double smaller = s.SmallestSymmetricEigenvalue, trace = s.Aa + s.Bb;
        double low = Math.Min(0.02 * smaller / d, Math.Sqrt(0.02 * smaller / c));

        // From here each coefficient rules over all of lower order; 1 000 000 covers those that nearly cancel.
        double high = d > 0 ? 1e6 * trace / d : 0;
        foreach (double each in third.Where(each => each > 0))
        {
            high = Math.Max(high, 1e3 * Math.Max(Math.Sqrt(trace / each), d / each));
        }

        // Beyond 1000 F the second order is constant and the third linear, to a part in a million.
        return new(low, Math.Max(low, Math.Min(high, 1e3 * Limit)));
    }
}
