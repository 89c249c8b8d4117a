namespace FieldSolve.Geometry;

/// <summary>
/// Exact sums and products of doubles as unevaluated sums of non-overlapping doubles, smallest first.
/// J. R. Shewchuk, Discrete Comput. Geom. 18 (1997) 305. Exact as long as nothing under- or overflows.
/// </summary>
internal static class Expansion
{
    /// <summary>a - b = difference + tail, exactly.</summary>
    public static double Difference(double a, double b, out double tail)
    {
        double d = a - b;
        double bv = a - d;
        double av = d + bv;
        tail = (a - av) + (bv - b);
        return d;
    }

    /// <summary>a + b = sum + tail, exactly.</summary>
    public static double Sum(double a, double b, out double tail)
    {
        double s = a + b;
        double bv = s - a;
        double av = s - bv;
        tail = (a - av) + (b - bv);
        return s;
    }

    /// <summary>a b = product + tail, exactly.</summary>
    public static double Product(double a, double b, out double tail)
    {
        double p = a * b;
        tail = Math.FusedMultiplyAdd(a, b, -p);
        return p;
    }

    /// <summary>h = e + f without zero components; returns the number of components. h must not overlap e or f.</summary>
    public static int Add(ReadOnlySpan<double> e, ReadOnlySpan<double> f, Span<double> h)
    {
        int i = 0, j = 0, n = 0;
        double q = 0;
        while (i < e.Length || j < f.Length)
        {
            // Merge by magnitude, carrying the running sum upwards.
            double next = j >= f.Length || (i < e.Length && Math.Abs(e[i]) <= Math.Abs(f[j])) ? e[i++] : f[j++];
            q = Sum(q, next, out double tail);
            if (tail != 0)
            {
                h[n++] = tail;
            }
        }

        if (q != 0)
        {
            h[n++] = q;
        }

        return n;
    }

    /// <summary>h = b e without zero components; returns the number of components (at most twice those of e).</summary>
    public static int Scale(ReadOnlySpan<double> e, double b, Span<double> h)
    {
        int n = 0;
        double q = 0;
        for (int i = 0; i < e.Length; i++)
        {
            double p = Product(e[i], b, out double low);
            double s = Sum(q, low, out double tail);
            if (tail != 0)
            {
                h[n++] = tail;
            }

            q = Sum(p, s, out tail);
            if (tail != 0)
            {
                h[n++] = tail;
            }
        }

        if (q != 0)
        {
            h[n++] = q;
        }

        return n;
    }

    /// <summary>h = e f; returns the number of components, at most 2 |e| |f|, which is the room h needs.</summary>
    public static int Multiply(ReadOnlySpan<double> e, ReadOnlySpan<double> f, Span<double> h)
    {
        Span<double> part = stackalloc double[2 * e.Length];
        Span<double> sum = stackalloc double[2 * e.Length * f.Length];
        int n = 0;
        for (int j = 0; j < f.Length; j++)
        {
            int m = Scale(e, f[j], part);
            h[..n].CopyTo(sum);
            n = Add(sum[..n], part[..m], h);
        }

        return n;
    }

    /// <summary>Turns e into -e.</summary>
    public static void Negate(Span<double> e)
    {
        for (int i = 0; i < e.Length; i++)
        {
            e[i] = -e[i];
        }
    }
}
