using System.Runtime.Intrinsics;

namespace FieldSolve.Laws;

/// <summary>
/// K on a rectangular grid of (E_a, E_b), from a CSV file, interpolated by bicubic splines with continuous first and second
/// derivatives. Refuses every field outside its grid. The offset that interpolation may leave at zero field is taken off.
/// </summary>
/// <remarks>The law as written; <see cref="LawCatalogue"/> makes it with its guard.</remarks>
public sealed class TableLaw : ILawDetail
{
    private readonly TableGrid grid;

    internal TableLaw(TableGrid grid)
    {
        this.grid = grid;
        grid.At(0, 0, out Vector128<double> byA, out Vector128<double> byB);
        AtZeroField = new(byA[0], byB[0], byA[1], byB[1]);
    }

    /// <summary>How the device file makes it.</summary>
    public static LawKind Registration { get; } = new(
        "table",
        "K on a grid of fields from a CSV file, interpolated",
        [new("file", Quantities.Dimension.None, true, 0, ParameterBound.Any, "CSV file with ea_V_per_m, eb_V_per_m, ka_A_per_m, kb_A_per_m", IsFile: true)],
        v =>
        {
            LawFile file = v.File("file");
            TableLawReading reading = Read(file.Text);
            return reading.Law is { } law ? GuardedLaw.Around(law) : throw new LawException(file.Path, reading.Faults);
        });

    /// <inheritdoc/>
    public string Kind => Registration.Name;

    /// <inheritdoc/>
    public bool IsLinear => false;

    /// <inheritdoc/>
    public bool HasPotential => false;

    /// <inheritdoc/>
    public Tensor2 AtZeroField { get; }

    /// <summary>Null: this is the law as written.</summary>
    public FieldGuard? Guard => null;

    FieldScan ILawDetail.Scan
    {
        get
        {
            double far = double.Hypot(Math.Max(-grid.LowA, grid.HighA), Math.Max(-grid.LowB, grid.HighB));
            double step = Math.Max(grid.SmallestStep / 3, far / 300);
            return new(step / 4, far)
            {
                LossShare = 1e-3,
                LargestStep = step,
                Directions = (int)Math.Clamp(Math.Ceiling(2 * Math.PI * far / step), 180, 480),
                Reach = Reach,
            };
        }
    }

    string ILawDetail.Terms => LawSummary.TensorTerms(AtZeroField)
        + $"; {grid.Size.A} x {grid.Size.B} points, ea from {LawSummary.Number(grid.LowA)} to {LawSummary.Number(grid.HighA)} V/m"
        + $", eb from {LawSummary.Number(grid.LowB)} to {LawSummary.Number(grid.HighB)} V/m";

    /// <summary>
    /// Reads a table: CSV with the header ea_V_per_m, eb_V_per_m, ka_A_per_m, kb_A_per_m (columns in any order) and one row per
    /// point of a full rectangular grid, rows in any order, at least four different fields along each axis with zero inside, no point
    /// twice, K = 0 at zero field to a thousandth of the largest K. Lines that begin with # and empty lines are skipped.
    /// </summary>
    /// <param name="text">Whole text of the file.</param>
    public static TableLawReading Read(string text)
    {
        ArgumentNullException.ThrowIfNull(text);
        return TableReader.Read(text);
    }

    void ILawDetail.RequireInside(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb)
    {
        for (int i = 0; i < ea.Length; i++)
        {
            RequireInside(i, ea[i], eb[i]);
        }
    }

    /// <inheritdoc/>
    public void Evaluate(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        VectorLoop.RequireLength(ea.Length, eb.Length, ka.Length, kb.Length);
        for (int i = 0; i < ea.Length; i++)
        {
            RequireInside(i, ea[i], eb[i]);
            Vector128<double> k = grid.At(ea[i], eb[i], out _, out _);
            ka[i] = k[0];
            kb[i] = k[1];
        }
    }

    /// <inheritdoc/>
    public void Evaluate(
        ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb,
        Span<double> daa, Span<double> dab, Span<double> dba, Span<double> dbb)
    {
        VectorLoop.RequireLength(ea.Length, eb.Length, ka.Length, kb.Length);
        VectorLoop.RequireLength(ea.Length, daa.Length, dab.Length, dba.Length);
        VectorLoop.RequireLength(ea.Length, dbb.Length, dbb.Length, dbb.Length);
        for (int i = 0; i < ea.Length; i++)
        {
            RequireInside(i, ea[i], eb[i]);
            Vector128<double> k = grid.At(ea[i], eb[i], out Vector128<double> byA, out Vector128<double> byB);
            ka[i] = k[0];
            kb[i] = k[1];
            daa[i] = byA[0];
            dab[i] = byB[0];
            dba[i] = byA[1];
            dbb[i] = byB[1];
        }
    }

    /// <inheritdoc/>
    public void EvaluatePure(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb) =>
        Evaluate(ea, eb, ka, kb);

    private void RequireInside(int index, double ea, double eb)
    {
        if (!grid.Holds(ea, eb))
        {
            throw new FieldOutsideTableException(index, ea, eb);
        }
    }

    // A hair inside the rim, so that reach times direction cannot round to the outside.
    private double Reach(double cos, double sin) => (1 - 1e-12) * Math.Min(
        cos == 0 ? double.PositiveInfinity : (cos > 0 ? grid.HighA : grid.LowA) / cos,
        sin == 0 ? double.PositiveInfinity : (sin > 0 ? grid.HighB : grid.LowB) / sin);
}
