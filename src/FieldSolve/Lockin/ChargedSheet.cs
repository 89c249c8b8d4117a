using FieldSolve.Fields;
using FieldSolve.Solving;
using FieldSolve.Sparse;

namespace FieldSolve.Lockin;

/// <summary>
/// One mesh of a sheet over a gate, with its charge matrix C and the structure of the complex equations (J + i w C) x = b, written as real ones
/// with real and imaginary parts interleaved. The drain's metal is the zero of the potential. Safe for several threads at once.
/// </summary>
internal sealed class ChargedSheet
{
    private readonly Lazy<SparseAnalysis> complex;

    public ChargedSheet(FieldLevel level, double capacitance)
    {
        Level = level;
        Charge = GateCharge.Values(level.Space, capacitance);
        complex = new(Analyse);
    }

    public FieldLevel Level { get; }

    /// <summary>C by place of the pattern, F.</summary>
    public double[] Charge { get; }

    /// <summary>Ordering and structure of the interleaved equations.</summary>
    public SparseAnalysis Complex => complex.Value;

    /// <summary>Adds factor times C u.</summary>
    public void AddCharge(double factor, ReadOnlySpan<double> u, Span<double> to, Span<double> scratch)
    {
        int n = Level.Space.Size;
        SparseProduct.Multiply(Level.Space.Pattern, Charge.AsSpan(0, Level.Space.Pattern.Count), u[..n], scratch[..n]);
        for (int i = 0; i < n; i++)
        {
            to[i] += factor * scratch[i];
        }
    }

    /// <summary>Values of J + i w C in the interleaved pattern.</summary>
    public double[] Interleaved(ReadOnlySpan<double> jacobian, double omega)
    {
        int[] start = Level.Space.Pattern.Start;
        double[] values = new double[Complex.Pattern.Count];
        int at = 0;
        for (int i = 0; i < Level.Space.Size; i++)
        {
            for (int part = 0; part < 2; part++)
            {
                for (int k = start[i]; k < start[i + 1]; k++)
                {
                    double c = omega * Charge[k];
                    values[at++] = part == 0 ? jacobian[k] : c;
                    values[at++] = part == 0 ? -c : jacobian[k];
                }
            }
        }

        return values;
    }

    private SparseAnalysis Analyse()
    {
        SymmetricPattern simple = Level.Space.Pattern;
        int n = simple.Size;
        int[] start = new int[(2 * n) + 1], column = new int[4 * simple.Count];
        int at = 0;
        for (int i = 0; i < n; i++)
        {
            for (int part = 0; part < 2; part++)
            {
                for (int k = simple.Start[i]; k < simple.Start[i + 1]; k++)
                {
                    column[at++] = 2 * simple.Column[k];
                    column[at++] = (2 * simple.Column[k]) + 1;
                }

                start[(2 * i) + part + 1] = at;
            }
        }

        (double[] x, double[] y) = Level.Space.Places();
        return SparseAnalysis.Analyse(new(start, column), [.. x.SelectMany(v => new[] { v, v })], [.. y.SelectMany(v => new[] { v, v })]);
    }
}
