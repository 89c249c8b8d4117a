using System.Numerics;
using System.Runtime.CompilerServices;
using System.Runtime.InteropServices;

namespace FieldSolve.Laws;

/// <summary>A law's formula for a vector of points at once. Implemented by structs, so that the loop below is compiled for each.</summary>
internal interface IVectorFormula
{
    /// <summary>K at E.</summary>
    void Value(Vector<double> ea, Vector<double> eb, out Vector<double> ka, out Vector<double> kb);

    /// <summary>K and dK/dE at E.</summary>
    void Slope(Vector<double> ea, Vector<double> eb, ref VectorSlope at);
}

/// <summary>K and dK/dE of a vector of points.</summary>
internal struct VectorSlope
{
    public Vector<double> Ka, Kb, Aa, Ab, Ba, Bb;

    /// <summary>Adds the ohmic part, which all parametric laws share.</summary>
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    public void AddOhmic(Vector<double> ea, Vector<double> eb, double a, double b, double hall)
    {
        Ka += (a * ea) + (hall * eb);
        Kb += (b * eb) - (hall * ea);
        Aa += new Vector<double>(a);
        Ab += new Vector<double>(hall);
        Ba -= new Vector<double>(hall);
        Bb += new Vector<double>(b);
    }
}

/// <summary>
/// Runs a formula over spans of any length; the last, partial vector is padded with zero field. Never inlined: inside a caller's try
/// block the vectors would live in memory instead of registers.
/// </summary>
internal static class VectorLoop
{
    [MethodImpl(MethodImplOptions.NoInlining)]
    public static void Value<TFormula>(
        in TFormula formula, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb)
        where TFormula : struct, IVectorFormula
    {
        int n = ea.Length;
        RequireLength(n, eb.Length, ka.Length, kb.Length);
        int i = 0;
        for (; i <= n - Vector<double>.Count; i += Vector<double>.Count)
        {
            formula.Value(Load(ea, i), Load(eb, i), out Vector<double> a, out Vector<double> b);
            Store(a, ka, i);
            Store(b, kb, i);
        }

        if (i < n)
        {
            formula.Value(LoadTail(ea[i..]), LoadTail(eb[i..]), out Vector<double> a, out Vector<double> b);
            StoreTail(a, ka[i..]);
            StoreTail(b, kb[i..]);
        }
    }

    [MethodImpl(MethodImplOptions.NoInlining)]
    public static void Slope<TFormula>(
        in TFormula formula, ReadOnlySpan<double> ea, ReadOnlySpan<double> eb, Span<double> ka, Span<double> kb,
        Span<double> daa, Span<double> dab, Span<double> dba, Span<double> dbb)
        where TFormula : struct, IVectorFormula
    {
        int n = ea.Length;
        RequireLength(n, eb.Length, ka.Length, kb.Length);
        RequireLength(n, daa.Length, dab.Length, dba.Length);
        RequireLength(n, dbb.Length, n, n);
        VectorSlope at = default;
        int i = 0;
        for (; i <= n - Vector<double>.Count; i += Vector<double>.Count)
        {
            formula.Slope(Load(ea, i), Load(eb, i), ref at);
            Store(at.Ka, ka, i);
            Store(at.Kb, kb, i);
            Store(at.Aa, daa, i);
            Store(at.Ab, dab, i);
            Store(at.Ba, dba, i);
            Store(at.Bb, dbb, i);
        }

        if (i < n)
        {
            formula.Slope(LoadTail(ea[i..]), LoadTail(eb[i..]), ref at);
            StoreTail(at.Ka, ka[i..]);
            StoreTail(at.Kb, kb[i..]);
            StoreTail(at.Aa, daa[i..]);
            StoreTail(at.Ab, dab[i..]);
            StoreTail(at.Ba, dba[i..]);
            StoreTail(at.Bb, dbb[i..]);
        }
    }

    /// <summary>Spans of one batch must be equally long: the loops index without further checks.</summary>
    public static void RequireLength(int n, int second, int third, int fourth)
    {
        if (second != n || third != n || fourth != n)
        {
            throw new ArgumentException("All spans of a batch must have the same length.");
        }
    }

    // The lengths were checked once; the loop bound keeps i + Count within them.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static Vector<double> Load(ReadOnlySpan<double> from, int i) =>
        Vector.LoadUnsafe(ref MemoryMarshal.GetReference(from), (nuint)i);

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private static void Store(Vector<double> v, Span<double> to, int i) =>
        v.StoreUnsafe(ref MemoryMarshal.GetReference(to), (nuint)i);

    private static Vector<double> LoadTail(ReadOnlySpan<double> from)
    {
        Span<double> padded = stackalloc double[Vector<double>.Count];
        padded.Clear();
        from.CopyTo(padded);
        return new(padded);
    }

    private static void StoreTail(Vector<double> v, Span<double> to)
    {
        Span<double> padded = stackalloc double[Vector<double>.Count];
        v.CopyTo(padded);
        padded[..to.Length].CopyTo(to);
    }
}
