using System.Numerics;
using System.Runtime.InteropServices;

namespace FieldSolve.Laws;

/// <summary>
/// A law continued monotonically beyond the field where dK/dE would lose definiteness: K = sE + N(u), u = g(|E|) E/|E|, with N the
/// law's part beyond the ohmic one and g as in <see cref="FieldGuard"/>. As |E| grows N tends to a constant for each direction
/// and dK/dE to s, so that K stays monotone: (K(E1) - K(E2))·(E1 - E2) &gt; 0 for any two fields.
/// </summary>
public sealed class GuardedLaw : ILawDetail
{
    // Small enough for the stack and the first-level cache, large enough to hide the call.
    private const int Chunk = 256;

    private readonly ILawDetail law;
    private readonly FieldGuard guard;

    private GuardedLaw(ILawDetail law, FieldGuard guard)
    {
        this.law = law;
        this.guard = guard;
    }

    /// <summary>The law without its guard.</summary>
    internal ILawDetail AsWritten => law;

    /// <inheritdoc/>
    public string Kind => law.Kind;

    /// <inheritdoc/>
    public bool IsLinear => law.IsLinear;

    // The guard pulls the field towards zero along itself: that mixes the axes unless the law does not know them.
    /// <inheritdoc/>
    public bool HasPotential => false;

    /// <inheritdoc/>
    public Tensor2 AtZeroField => law.AtZeroField;

    /// <inheritdoc/>
    public FieldGuard? Guard => guard;

    FieldScan ILawDetail.Scan => law.Scan;

    string ILawDetail.Terms => law.Terms;

    void ILawDetail.RequireInside(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb) => law.RequireInside(ea, eb);

    /// <summary>The same law bent elsewhere.</summary>
    internal GuardedLaw With(FieldGuard other) => new(law, other);

    /// <summary>The law with its guard; the law itself where it needs none.</summary>
    internal static ISheetLaw Around(ILawDetail law) =>
        GuardSearch.Find(law) is { } guard ? new GuardedLaw(law, guard) : law;

    /// <inheritdoc/>
    public void Evaluate(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
    {
        VectorLoop.RequireLength(ea.Length, eb.Length, ka.Length, kb.Length);
        Span<double> ua = stackalloc double[Chunk], ub = stackalloc double[Chunk];
        for (int start = 0; start < ea.Length; start += Chunk)
        {
            int n = Math.Min(Chunk, ea.Length - start);
            ReadOnlySpan<double> ea1 = ea.Slice(start, n), eb1 = eb.Slice(start, n);
            Span<double> ka1 = ka.Slice(start, n), kb1 = kb.Slice(start, n);
            try
            {
                if (!AnyBeyond(ea1, eb1))
                {
                    law.Evaluate(ea1, eb1, ka1, kb1);
                    continue;
                }

                law.RequireInside(ea1, eb1);
                Pull(ea1, eb1, ua, ub);
                law.Evaluate(ua[..n], ub[..n], ka1, kb1);
                AddOhmicRest(ea1, eb1, ua, ub, ka1, kb1);
            }
            catch (FieldOutsideTableException e) when (start > 0)
            {
                throw new FieldOutsideTableException(start + e.Index, e.FieldA, e.FieldB);
            }
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
        Span<double> ua = stackalloc double[Chunk], ub = stackalloc double[Chunk];
        for (int start = 0; start < ea.Length; start += Chunk)
        {
            int n = Math.Min(Chunk, ea.Length - start);
            ReadOnlySpan<double> ea1 = ea.Slice(start, n), eb1 = eb.Slice(start, n);
            Span<double> ka1 = ka.Slice(start, n), kb1 = kb.Slice(start, n);
            Span<double> aa = daa.Slice(start, n), ab = dab.Slice(start, n), ba = dba.Slice(start, n), bb = dbb.Slice(start, n);
            try
            {
                if (!AnyBeyond(ea1, eb1))
                {
                    law.Evaluate(ea1, eb1, ka1, kb1, aa, ab, ba, bb);
                    continue;
                }

                law.RequireInside(ea1, eb1);
                Pull(ea1, eb1, ua, ub);
                law.Evaluate(ua[..n], ub[..n], ka1, kb1, aa, ab, ba, bb);
                AddOhmicRest(ea1, eb1, ua, ub, ka1, kb1);
                for (int i = 0; i < n; i++)
                {
                    double f = Math.Sqrt((ea1[i] * ea1[i]) + (eb1[i] * eb1[i]));
                    if (f > guard.From)
                    {
                        GuardBend bend = new(guard, f);
                        Tensor2 d = bend.Slope(AtZeroField, new(aa[i], ab[i], ba[i], bb[i]), ea1[i] / f, eb1[i] / f);
                        (aa[i], ab[i], ba[i], bb[i]) = (d.Aa, d.Ab, d.Ba, d.Bb);
                    }
                }
            }
            catch (FieldOutsideTableException e) when (start > 0)
            {
                throw new FieldOutsideTableException(start + e.Index, e.FieldA, e.FieldB);
            }
        }
    }

    /// <inheritdoc/>
    public void EvaluatePure(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb) =>
        law.EvaluatePure(ea, eb, ka, kb);

    /// <summary>True when a field of the batch may lie beyond the guard's start.</summary>
    private bool AnyBeyond(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb)
    {
        // A hair below From²: a batch at the edge takes the careful path, which changes nothing below From.
        double limit = guard.From * guard.From * (1 - 1e-12);
        Vector<double> most = default;
        int i = 0;
        ref double a0 = ref MemoryMarshal.GetReference(ea);
        ref double b0 = ref MemoryMarshal.GetReference(eb);
        for (; i <= ea.Length - Vector<double>.Count; i += Vector<double>.Count)
        {
            Vector<double> a = Vector.LoadUnsafe(ref a0, (nuint)i), b = Vector.LoadUnsafe(ref b0, (nuint)i);
            most = Vector.Max(most, (a * a) + (b * b));
        }

        bool beyond = Vector.GreaterThanAny(most, new Vector<double>(limit));
        for (; i < ea.Length; i++)
        {
            beyond |= (ea[i] * ea[i]) + (eb[i] * eb[i]) > limit;
        }

        return beyond;
    }

    /// <summary>The pulled-back fields u = g(|E|) E/|E|.</summary>
    internal void Pull(ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ua, Span<double> ub)
    {
        for (int i = 0; i < ea.Length; i++)
        {
            double f = Math.Sqrt((ea[i] * ea[i]) + (eb[i] * eb[i]));
            double h = f > guard.From ? new GuardBend(guard, f).Ratio : 1;
            ua[i] = h * ea[i];
            ub[i] = h * eb[i];
        }
    }

    private void AddOhmicRest(
        ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, ReadOnlySpan<double> ua, ReadOnlySpan<double> ub, Span<double> ka, Span<double> kb)
    {
        Tensor2 s = AtZeroField;
        for (int i = 0; i < ea.Length; i++)
        {
            double ra = ea[i] - ua[i], rb = eb[i] - ub[i];
            ka[i] += (s.Aa * ra) + (s.Ab * rb);
            kb[i] += (s.Ba * ra) + (s.Bb * rb);
        }
    }
}
