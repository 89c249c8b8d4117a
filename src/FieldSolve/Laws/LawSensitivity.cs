namespace FieldSolve.Laws;

/// <summary>How a law changes with its own parameters: their values, the exact dK/dp, and the law with other values.</summary>
public static class LawSensitivity
{
    private const int Chunk = 256;

    /// <summary>The numeric parameters that can be varied: those of the law's kind with a finite value. Empty for a table.</summary>
    public static IReadOnlyList<LawParameter> Parameters(ISheetLaw law) =>
        Written(law) is { } w ? [.. w.Made.Parameters.Where(p => !p.IsFile && double.IsFinite(w.ParameterValue(p.Key)))] : [];

    /// <summary>SI value of a parameter.</summary>
    /// <exception cref="ArgumentException">The law has no such parameter.</exception>
    public static double Value(ISheetLaw law, string key) => Required(law, key).ParameterValue(key);

    /// <summary>The law with some parameters changed, guarded anew where it needs it.</summary>
    /// <param name="law">A law of the catalogue.</param>
    /// <param name="values">SI values by key; parameters not named keep theirs.</param>
    /// <exception cref="ArgumentException">The law has no such parameter.</exception>
    /// <exception cref="LawException">A value is out of range.</exception>
    public static ISheetLaw With(ISheetLaw law, IReadOnlyDictionary<string, double> values)
    {
        ArgumentNullException.ThrowIfNull(values);
        if (values.Count == 0)
        {
            return law;
        }

        IParametricLaw written = Required(law, values.Keys.First());
        var numbers = new Dictionary<string, double>(StringComparer.Ordinal);
        foreach (LawParameter p in written.Made.Parameters)
        {
            double value = values.TryGetValue(p.Key, out double changed) ? changed : written.ParameterValue(p.Key);
            if (!double.IsPositiveInfinity(value))
            {
                numbers[p.Key] = value;
            }
        }

        foreach (string key in values.Keys)
        {
            _ = Required(law, key);
        }

        return written.Made.Build(new LawValues(written.Made, numbers));
    }

    /// <summary>
    /// dK/dp at each field, with the guard: A/m per SI unit of the parameter. K = sE + N(u) with the pulled-back field u gives
    /// ds/dp E + dN/dp(u). Where the guard begins is held fixed; what that neglects is of the size of what the guarded zone does to a reading.
    /// </summary>
    /// <param name="law">A law of the catalogue.</param>
    /// <param name="key">Key of a parameter.</param>
    /// <param name="ea">E along crystal a, V/m.</param>
    /// <param name="eb">E along crystal b, V/m.</param>
    /// <param name="ka">Takes dK_a/dp.</param>
    /// <param name="kb">Takes dK_b/dp.</param>
    /// <exception cref="ArgumentException">The law has no such parameter.</exception>
    public static void Slope(
        ISheetLaw law, string key, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        IParametricLaw written = Required(law, key);
        if (law is not GuardedLaw guarded)
        {
            written.ParameterSlope(key, ea, eb, ka, kb);
            return;
        }

        Span<double> ua = stackalloc double[Chunk], ub = stackalloc double[Chunk];
        Tensor2 s = ParameterSlopes.OhmicTensor(key);
        for (int start = 0; start < ea.Length; start += Chunk)
        {
            int n = Math.Min(Chunk, ea.Length - start);
            ReadOnlySpan<double> ea1 = ea.Slice(start, n), eb1 = eb.Slice(start, n);
            Span<double> ka1 = ka.Slice(start, n), kb1 = kb.Slice(start, n);
            guarded.Pull(ea1, eb1, ua, ub);
            written.ParameterSlope(key, ua[..n], ub[..n], ka1, kb1);
            for (int i = 0; i < n; i++)
            {
                double ra = ea1[i] - ua[i], rb = eb1[i] - ub[i];
                ka1[i] += (s.Aa * ra) + (s.Ab * rb);
                kb1[i] += (s.Ba * ra) + (s.Bb * rb);
            }
        }
    }

    private static IParametricLaw? Written(ISheetLaw law) => (law is GuardedLaw g ? g.AsWritten : law) as IParametricLaw;

    private static IParametricLaw Required(ISheetLaw law, string key)
    {
        ArgumentNullException.ThrowIfNull(law);
        return Written(law) is { } w && w.Made.Parameters.Any(p => p.Key == key && !p.IsFile)
            ? w
            : throw ParameterSlopes.Unknown(law.Kind, key);
    }
}
