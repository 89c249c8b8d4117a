namespace FieldSolve.Solving;

/// <summary>
/// Vectors that depend on the current, known at a few currents and per ampere at zero current. v(I)/I is smooth: it is continued as a polynomial, by
/// Lagrange's formula.
/// </summary>
internal sealed class CurrentSeries
{
    private const int MostPast = 4;

    private readonly double[] unit;
    private readonly List<(double Current, double[] Value)> past = [];
    private readonly List<(double Current, double[] Value)> anchors = [];

    /// <param name="unit">The vector per ampere in the limit of small currents.</param>
    public CurrentSeries(double[] unit) => this.unit = unit;

    /// <summary>The current remembered last; 0 when there is none.</summary>
    public double LastCurrent => past.Count > 0 ? past[^1].Current : 0;

    /// <summary>Keeps the vector at a current for good.</summary>
    public void Anchor(double current, double[] value)
    {
        if (current != 0)
        {
            anchors.Add((current, value));
        }
    }

    /// <summary>Keeps a copy of the vector at a current; the oldest of many is forgotten.</summary>
    public void Remember(double current, ReadOnlySpan<double> value)
    {
        if (current == 0 || past.Concat(anchors).Any(p => p.Current == current))
        {
            return;
        }

        double[] copy = past.Count == MostPast ? past[0].Value : new double[value.Length];
        if (past.Count == MostPast)
        {
            past.RemoveAt(0);
        }

        value.CopyTo(copy);
        past.Add((current, copy));
    }

    /// <summary>Forgets what was remembered, but for anchors, at larger currents than this one.</summary>
    public void ForgetBeyond(double current) => past.RemoveAll(p => Math.Abs(p.Current) > Math.Abs(current));

    /// <summary>The polynomial at a current.</summary>
    public void Predict(double current, Span<double> value)
    {
        value.Clear();
        AddTerm(0, unit, current, value);
        foreach ((double at, double[] known) in past.Concat(anchors))
        {
            AddTerm(at, known, current, value);
        }
    }

    private void AddTerm(double at, double[] known, double current, Span<double> value)
    {
        double weight = at == 0 ? current : current / at * (current / at);
        foreach ((double other, _) in past.Concat(anchors))
        {
            weight *= other == at ? 1 : (current - other) / (at - other);
        }

        for (int i = 0; weight != 0 && i < value.Length; i++)
        {
            value[i] += weight * known[i];
        }
    }
}
