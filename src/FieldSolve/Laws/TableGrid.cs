using System.Runtime.Intrinsics;
using MathNet.Numerics.Interpolation;

namespace FieldSolve.Laws;

/// <summary>
/// K on a rectangular grid of fields, interpolated by the tensor product of cubic splines that end in parabolas: twice continuously
/// differentiable, and exact for a law of second order. Each cell keeps its polynomial in local coordinates t, u from 0 to 1.
/// </summary>
internal sealed class TableGrid
{
    private const int Terms = 16;
    private readonly double[] a, b;

    // 16 pairs (ka, kb) per cell; pair 4 p + q multiplies t^p u^q. Cells run along b first.
    private readonly Vector128<double>[] cells;

    /// <param name="a">E_a of the grid, rising, V/m, at least four.</param>
    /// <param name="b">E_b of the grid, rising, V/m, at least four.</param>
    /// <param name="ka">K_a at [i, j], A/m.</param>
    /// <param name="kb">K_b at [i, j], A/m.</param>
    public TableGrid(double[] a, double[] b, double[,] ka, double[,] kb)
    {
        (this.a, this.b) = (a, b);
        cells = new Vector128<double>[(a.Length - 1) * (b.Length - 1) * Terms];
        foreach (double k in ka.Cast<double>().Concat(kb.Cast<double>()))
        {
            LargestCurrent = Math.Max(LargestCurrent, Math.Abs(k));
        }

        Fill(ka, 0);
        Fill(kb, 1);
    }

    public double LowA => a[0];

    public double HighA => a[^1];

    public double LowB => b[0];

    public double HighB => b[^1];

    /// <summary>Smallest step of the grid, V/m.</summary>
    public double SmallestStep => Math.Min(Step(a), Step(b));

    /// <summary>Largest |K_a| or |K_b| of the grid, A/m.</summary>
    public double LargestCurrent { get; }

    /// <summary>Number of points along a and b.</summary>
    public (int A, int B) Size => (a.Length, b.Length);

    /// <summary>Takes K at zero field off everywhere, so that no field drives no current; returns what it was.</summary>
    public (double Ka, double Kb) TakeOffset()
    {
        Vector128<double> k = At(0, 0, out _, out _);
        for (int cell = 0; cell < cells.Length; cell += Terms)
        {
            cells[cell] -= k;
        }

        return (k[0], k[1]);
    }

    public bool Holds(double ea, double eb) => ea >= a[0] && ea <= a[^1] && eb >= b[0] && eb <= b[^1];

    /// <summary>(K_a, K_b) and its derivatives by E_a and E_b at a field that the grid holds.</summary>
    public Vector128<double> At(double ea, double eb, out Vector128<double> byA, out Vector128<double> byB)
    {
        int i = Locate(a, ea), j = Locate(b, eb);
        double da = a[i + 1] - a[i], db = b[j + 1] - b[j];
        double t = (ea - a[i]) / da, u = (eb - b[j]) / db;
        ReadOnlySpan<Vector128<double>> c = cells.AsSpan(((i * (b.Length - 1)) + j) * Terms, Terms);

        // Horner in u within each power of t, then in t; the derivatives ride along.
        Vector128<double> p0 = (((((c[3] * u) + c[2]) * u) + c[1]) * u) + c[0];
        Vector128<double> p1 = (((((c[7] * u) + c[6]) * u) + c[5]) * u) + c[4];
        Vector128<double> p2 = (((((c[11] * u) + c[10]) * u) + c[9]) * u) + c[8];
        Vector128<double> p3 = (((((c[15] * u) + c[14]) * u) + c[13]) * u) + c[12];
        double u3 = 3 * u;
        Vector128<double> q0 = (((c[3] * u3) + (c[2] * 2.0)) * u) + c[1];
        Vector128<double> q1 = (((c[7] * u3) + (c[6] * 2.0)) * u) + c[5];
        Vector128<double> q2 = (((c[11] * u3) + (c[10] * 2.0)) * u) + c[9];
        Vector128<double> q3 = (((c[15] * u3) + (c[14] * 2.0)) * u) + c[13];
        byA = ((((p3 * (3 * t)) + (p2 * 2.0)) * t) + p1) / da;
        byB = ((((((q3 * t) + q2) * t) + q1) * t) + q0) / db;
        return (((((p3 * t) + p2) * t) + p1) * t) + p0;
    }

    private static double Step(double[] axis)
    {
        double least = double.PositiveInfinity;
        for (int i = 1; i < axis.Length; i++)
        {
            least = Math.Min(least, axis[i] - axis[i - 1]);
        }

        return least;
    }

    private static int Locate(double[] axis, double value)
    {
        int low = 0, high = axis.Length - 1;
        while (high - low > 1)
        {
            int middle = (low + high) >>> 1;
            (low, high) = value < axis[middle] ? (low, middle) : (middle, high);
        }

        return low;
    }

    private void Fill(double[,] k, int component)
    {
        double[,] ka = Slopes(k, alongA: true), kb = Slopes(k, alongA: false), kab = Slopes(ka, alongA: false);
        Span<double> corner = stackalloc double[Terms];
        for (int i = 0; i + 1 < a.Length; i++)
        {
            for (int j = 0; j + 1 < b.Length; j++)
            {
                double da = a[i + 1] - a[i], db = b[j + 1] - b[j];

                // Hermite data of the cell: row = value and slope at t = 0, then at t = 1; column likewise in u.
                for (int p = 0; p < 2; p++)
                {
                    for (int q = 0; q < 2; q++)
                    {
                        corner[(8 * p) + (2 * q)] = k[i + p, j + q];
                        corner[(8 * p) + (2 * q) + 1] = db * kb[i + p, j + q];
                        corner[(8 * p) + 4 + (2 * q)] = da * ka[i + p, j + q];
                        corner[(8 * p) + 4 + (2 * q) + 1] = da * db * kab[i + p, j + q];
                    }
                }

                Span<Vector128<double>> cell = cells.AsSpan(((i * (b.Length - 1)) + j) * Terms, Terms);
                for (int row = 0; row < 4; row++)
                {
                    ToPowers(corner, 4 * row, 1);
                }

                for (int column = 0; column < 4; column++)
                {
                    ToPowers(corner, column, 4);
                }

                for (int n = 0; n < Terms; n++)
                {
                    cell[n] = cell[n].WithElement(component, corner[n]);
                }
            }
        }
    }

    // (f0, f0', f1, f1') -> coefficients of 1, t, t², t³.
    private static void ToPowers(Span<double> v, int start, int step)
    {
        double f0 = v[start], g0 = v[start + step], f1 = v[start + (2 * step)], g1 = v[start + (3 * step)];
        v[start + (2 * step)] = (3 * (f1 - f0)) - (2 * g0) - g1;
        v[start + (3 * step)] = (2 * (f0 - f1)) + g0 + g1;
    }

    private double[,] Slopes(double[,] k, bool alongA)
    {
        double[,] slope = new double[a.Length, b.Length];
        double[] axis = alongA ? a : b;
        int lines = alongA ? b.Length : a.Length;
        double[] values = new double[axis.Length];
        for (int line = 0; line < lines; line++)
        {
            for (int n = 0; n < axis.Length; n++)
            {
                values[n] = alongA ? k[n, line] : k[line, n];
            }

            CubicSpline spline = CubicSpline.InterpolateBoundariesSorted(
                axis, values, SplineBoundaryCondition.ParabolicallyTerminated, 0, SplineBoundaryCondition.ParabolicallyTerminated, 0);
            for (int n = 0; n < axis.Length; n++)
            {
                double d = spline.Differentiate(axis[n]);
                if (alongA)
                {
                    slope[n, line] = d;
                }
                else
                {
                    slope[line, n] = d;
                }
            }
        }

        return slope;
    }
}
