namespace FieldSolve.Laws;

/// <summary>The guard's g at one field beyond its start: g(F) = From + W tanh((F - From)/W), W = Limit - From; twice continuously differentiable.</summary>
internal readonly struct GuardBend
{
    /// <param name="guard">The guard.</param>
    /// <param name="field">F in V/m, beyond the guard's start.</param>
    public GuardBend(FieldGuard guard, double field)
    {
        double width = guard.Limit - guard.From;
        double t = Math.Tanh((field - guard.From) / width);
        Value = guard.From + (width * t);
        Rate = 1 - (t * t);
        Ratio = Value / field;
    }

    /// <summary>g, V/m.</summary>
    public double Value { get; }

    /// <summary>dg/dF, from 1 at the start to 0.</summary>
    public double Rate { get; }

    /// <summary>g/F, from 1 at the start to 0.</summary>
    public double Ratio { get; }

    /// <summary>dK/dE of the guarded law: s + (K'(u) - s) du/dE with du/dE = g' along E and g/F across it.</summary>
    /// <param name="s">dK/dE at zero field.</param>
    /// <param name="pure">dK/dE of the law as written at u.</param>
    /// <param name="c">E_a/|E|.</param>
    /// <param name="n">E_b/|E|.</param>
    public Tensor2 Slope(Tensor2 s, Tensor2 pure, double c, double n)
    {
        double taa = (Rate * c * c) + (Ratio * n * n);
        double tbb = (Rate * n * n) + (Ratio * c * c);
        double tab = (Rate - Ratio) * c * n;
        double maa = pure.Aa - s.Aa, mab = pure.Ab - s.Ab, mba = pure.Ba - s.Ba, mbb = pure.Bb - s.Bb;
        return new(
            s.Aa + (maa * taa) + (mab * tab),
            s.Ab + (maa * tab) + (mab * tbb),
            s.Ba + (mba * taa) + (mbb * tab),
            s.Bb + (mba * tab) + (mbb * tbb));
    }
}
