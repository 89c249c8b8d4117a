using System.Numerics;
using System.Runtime.InteropServices;

namespace FieldSolve.Laws;

/// <summary>
/// A law seen from the lab frame: K_lab(E) = R(axis) K(R(-axis) E). Immutable; no heap allocation per call.
/// A <see cref="FieldOutsideTableException"/> gives its field in the crystal frame, where the table stands.
/// </summary>
public sealed class LabLaw
{
    private const int Chunk = 256;

    // cos and sin of the axis angle turn vectors, those of its double the symmetric part of a tensor.
    private readonly double c, s, c2, s2;

    /// <summary>Makes the view.</summary>
    /// <param name="law">Law in the crystal frame.</param>
    /// <param name="axis">Angle from lab x to crystal a, radians.</param>
    public LabLaw(ISheetLaw law, double axis)
    {
        ArgumentNullException.ThrowIfNull(law);
        Expect.Finite(axis, "rad", nameof(axis));
        Law = law;
        Axis = axis;
        (s, c) = Math.SinCos(axis);
        (s2, c2) = Math.SinCos(2 * axis);
        AtZeroField = law.AtZeroField.ToLab(axis);
    }

    /// <summary>The law in the crystal frame.</summary>
    public ISheetLaw Law { get; }

    /// <summary>Angle from lab x to crystal a, radians.</summary>
    public double Axis { get; }

    /// <summary>True when K is proportional to E.</summary>
    public bool IsLinear => Law.IsLinear;

    /// <summary>True when dK/dE is symmetric at every field, in either frame.</summary>
    public bool HasPotential => Law.HasPotential;

    /// <summary>True when dK/dE is symmetric at zero field, in either frame.</summary>
    public bool IsSymmetricAtZero => Law.AtZeroField.Ab == Law.AtZeroField.Ba;

    /// <summary>dK/dE at zero field in the lab frame: rows and columns are x, y; siemens per square.</summary>
    public Tensor2 AtZeroField { get; }

    /// <summary>The law's guard; it depends on |E| alone, so it is the same in both frames.</summary>
    public FieldGuard? Guard => Law.Guard;

    /// <summary>K at each field, with the guard. All spans have the same length.</summary>
    /// <param name="ex">E along lab x, V/m.</param>
    /// <param name="ey">E along lab y, V/m.</param>
    /// <param name="kx">Takes K along lab x, A/m.</param>
    /// <param name="ky">Takes K along lab y, A/m.</param>
    /// <exception cref="FieldOutsideTableException">A table law was asked beyond its grid.</exception>
    public void Evaluate(ReadOnlySpan<double> ex, ReadOnlySpan<double> ey, Span<double> kx, Span<double> ky) =>
        Evaluate(ex, ey, kx, ky, pure: false);

    /// <summary>As <see cref="Evaluate(ReadOnlySpan{double}, ReadOnlySpan{double}, Span{double}, Span{double})"/>, without the guard.</summary>
    /// <param name="ex">E along lab x, V/m.</param>
    /// <param name="ey">E along lab y, V/m.</param>
    /// <param name="kx">Takes K along lab x, A/m.</param>
    /// <param name="ky">Takes K along lab y, A/m.</param>
    /// <exception cref="FieldOutsideTableException">A table law was asked beyond its grid.</exception>
    public void EvaluatePure(ReadOnlySpan<double> ex, ReadOnlySpan<double> ey, Span<double> kx, Span<double> ky) =>
        Evaluate(ex, ey, kx, ky, pure: true);

    /// <summary>K and dK/dE at each field, with the guard: dxy = dKx/dEy and so on. All spans have the same length.</summary>
    /// <param name="ex">E along lab x, V/m.</param>
    /// <param name="ey">E along lab y, V/m.</param>
    /// <param name="kx">Takes K along lab x, A/m.</param>
    /// <param name="ky">Takes K along lab y, A/m.</param>
    /// <param name="dxx">Takes dKx/dEx, S.</param>
    /// <param name="dxy">Takes dKx/dEy, S.</param>
    /// <param name="dyx">Takes dKy/dEx, S.</param>
    /// <param name="dyy">Takes dKy/dEy, S.</param>
    /// <exception cref="FieldOutsideTableException">A table law was asked beyond its grid.</exception>
    public void Evaluate(
        ReadOnlySpan<double> ex, ReadOnlySpan<double> ey, Span<double> kx, Span<double> ky,
        Span<double> dxx, Span<double> dxy, Span<double> dyx, Span<double> dyy)
    {
        VectorLoop.RequireLength(ex.Length, ey.Length, kx.Length, ky.Length);
        VectorLoop.RequireLength(ex.Length, dxx.Length, dxy.Length, dyx.Length);
        VectorLoop.RequireLength(ex.Length, dyy.Length, dyy.Length, dyy.Length);
        Span<double> ea = stackalloc double[Chunk], eb = stackalloc double[Chunk];
        for (int start = 0; start < ex.Length; start += Chunk)
        {
            int n = Math.Min(Chunk, ex.Length - start);
            Span<double> kx1 = kx.Slice(start, n), ky1 = ky.Slice(start, n);
            Span<double> xx = dxx.Slice(start, n), xy = dxy.Slice(start, n), yx = dyx.Slice(start, n), yy = dyy.Slice(start, n);
            Turn(ex.Slice(start, n), ey.Slice(start, n), ea[..n], eb[..n], -s);
            try
            {
                Law.Evaluate(ea[..n], eb[..n], kx1, ky1, xx, xy, yx, yy);
            }
            catch (FieldOutsideTableException e) when (start > 0)
            {
                throw new FieldOutsideTableException(start + e.Index, e.FieldA, e.FieldB);
            }

            Turn(kx1, ky1, kx1, ky1, s);
            TurnTensors(xx, xy, yx, yy);
        }
    }

    /// <summary>dK/dp at each field for a parameter of the law, with the guard; see <see cref="LawSensitivity.Slope"/>.</summary>
    /// <param name="key">Key of the parameter.</param>
    /// <param name="ex">E along lab x, V/m.</param>
    /// <param name="ey">E along lab y, V/m.</param>
    /// <param name="kx">Takes dK_x/dp.</param>
    /// <param name="ky">Takes dK_y/dp.</param>
    /// <exception cref="ArgumentException">The law has no such parameter.</exception>
    public void ParameterSlope(string key, ReadOnlySpan<double> ex, ReadOnlySpan<double> ey, Span<double> kx, Span<double> ky)
    {
        VectorLoop.RequireLength(ex.Length, ey.Length, kx.Length, ky.Length);
        Span<double> ea = stackalloc double[Chunk], eb = stackalloc double[Chunk];
        for (int start = 0; start < ex.Length; start += Chunk)
        {
            int n = Math.Min(Chunk, ex.Length - start);
            Span<double> kx1 = kx.Slice(start, n), ky1 = ky.Slice(start, n);
            Turn(ex.Slice(start, n), ey.Slice(start, n), ea[..n], eb[..n], -s);
            LawSensitivity.Slope(Law, key, ea[..n], eb[..n], kx1, ky1);
            Turn(kx1, ky1, kx1, ky1, s);
        }
    }

    private void Evaluate(ReadOnlySpan<double> ex, ReadOnlySpan<double> ey, Span<double> kx, Span<double> ky, bool pure)
    {
        VectorLoop.RequireLength(ex.Length, ey.Length, kx.Length, ky.Length);
        Span<double> ea = stackalloc double[Chunk], eb = stackalloc double[Chunk];
        for (int start = 0; start < ex.Length; start += Chunk)
        {
            int n = Math.Min(Chunk, ex.Length - start);
            Span<double> kx1 = kx.Slice(start, n), ky1 = ky.Slice(start, n);
            Turn(ex.Slice(start, n), ey.Slice(start, n), ea[..n], eb[..n], -s);
            try
            {
                if (pure)
                {
                    Law.EvaluatePure(ea[..n], eb[..n], kx1, ky1);
                }
                else
                {
                    Law.Evaluate(ea[..n], eb[..n], kx1, ky1);
                }
            }
            catch (FieldOutsideTableException e) when (start > 0)
            {
                throw new FieldOutsideTableException(start + e.Index, e.FieldA, e.FieldB);
            }

            Turn(kx1, ky1, kx1, ky1, s);
        }
    }

    /// <summary>Turns vectors counter-clockwise by the angle of (c, sine); source and target may be the same spans.</summary>
    private void Turn(ReadOnlySpan<double> x, ReadOnlySpan<double> y, Span<double> p, Span<double> q, double sine)
    {
        ref double x0 = ref MemoryMarshal.GetReference(x);
        ref double y0 = ref MemoryMarshal.GetReference(y);
        ref double p0 = ref MemoryMarshal.GetReference(p);
        ref double q0 = ref MemoryMarshal.GetReference(q);
        int i = 0;
        for (; i <= x.Length - Vector<double>.Count; i += Vector<double>.Count)
        {
            Vector<double> a = Vector.LoadUnsafe(ref x0, (nuint)i), b = Vector.LoadUnsafe(ref y0, (nuint)i);
            ((c * a) - (sine * b)).StoreUnsafe(ref p0, (nuint)i);
            ((sine * a) + (c * b)).StoreUnsafe(ref q0, (nuint)i);
        }

        for (; i < x.Length; i++)
        {
            double a = x[i], b = y[i];
            p[i] = (c * a) - (sine * b);
            q[i] = (sine * a) + (c * b);
        }
    }

    // R T R' in place: trace and antisymmetric part stay, the traceless symmetric part turns by twice the angle.
    private void TurnTensors(Span<double> xx, Span<double> xy, Span<double> yx, Span<double> yy)
    {
        ref double xx0 = ref MemoryMarshal.GetReference(xx);
        ref double xy0 = ref MemoryMarshal.GetReference(xy);
        ref double yx0 = ref MemoryMarshal.GetReference(yx);
        ref double yy0 = ref MemoryMarshal.GetReference(yy);
        int i = 0;
        for (; i <= xx.Length - Vector<double>.Count; i += Vector<double>.Count)
        {
            nuint at = (nuint)i;
            Vector<double> aa = Vector.LoadUnsafe(ref xx0, at), ab = Vector.LoadUnsafe(ref xy0, at);
            Vector<double> ba = Vector.LoadUnsafe(ref yx0, at), bb = Vector.LoadUnsafe(ref yy0, at);
            Vector<double> mean = 0.5 * (aa + bb), half = 0.5 * (aa - bb), off = 0.5 * (ab + ba), anti = 0.5 * (ab - ba);
            Vector<double> p = (c2 * half) - (s2 * off), q = (s2 * half) + (c2 * off);
            (mean + p).StoreUnsafe(ref xx0, at);
            (q + anti).StoreUnsafe(ref xy0, at);
            (q - anti).StoreUnsafe(ref yx0, at);
            (mean - p).StoreUnsafe(ref yy0, at);
        }

        for (; i < xx.Length; i++)
        {
            double mean = 0.5 * (xx[i] + yy[i]), half = 0.5 * (xx[i] - yy[i]);
            double off = 0.5 * (xy[i] + yx[i]), anti = 0.5 * (xy[i] - yx[i]);
            double p = (c2 * half) - (s2 * off), q = (s2 * half) + (c2 * off);
            (xx[i], xy[i], yx[i], yy[i]) = (mean + p, q + anti, q - anti, mean - p);
        }
    }
}
