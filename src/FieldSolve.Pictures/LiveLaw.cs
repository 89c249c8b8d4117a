using FieldSolve.Laws;

namespace FieldSolve.Pictures;

/// <summary>
/// A sheet law in the form the page can evaluate, whatever its kind: K(E) = s E + |E| N(|E|, angle), with N as a Fourier sum over the angle at
/// radii in even steps of ln |E|, and cubic Hermite pieces between them. For the laws that are polynomials in E times a function of |E| the sum ends after a
/// few terms and only the pieces approximate; <see cref="Error"/> says how well.
/// </summary>
internal sealed class LiveLaw
{
    private const int Angles = 64, MostDegree = 24, StepsPerDecade = 40;

    // Fields beside the end of a contact can be thousands of times those in the middle of the sheet.
    private const int Decades = 7;
    private const double Negligible = 1e-11;

    private readonly ISheetLaw law;

    /// <summary>Samples the law.</summary>
    /// <param name="law">In the crystal frame.</param>
    /// <param name="axis">Angle from lab x to crystal a, radians.</param>
    /// <param name="largest">Largest field that will be asked for, V/m.</param>
    public LiveLaw(ISheetLaw law, double axis, double largest)
    {
        this.law = law;
        (Axis, AtZeroField) = (axis, law.AtZeroField);
        if (law.IsLinear || !(largest > 0) || !double.IsFinite(largest))
        {
            Table = [];
            return;
        }

        First = Math.Log(largest) - (Decades * Math.Log(10));
        Step = Math.Log(10) / StepsPerDecade;
        Count = (Decades * StepsPerDecade) + 1;
        double[][] rows = [.. Enumerable.Range(0, Count).Select(j => Row(Math.Exp(First + (j * Step))))];

        // Row: for value and slope, for a and b: cos and sin terms of degree 0, 1, 2, …
        double top = rows.Max(r => r.Max(Math.Abs));
        int Used(double[] r) => Enumerable.Range(0, MostDegree + 1).LastOrDefault(m => Enumerable.Range(0, 8)
            .Any(p => Math.Abs(r[(p * (MostDegree + 1)) + m]) > Negligible * top), -1);
        Degree = top > 0 ? rows.Max(Used) : -1;
        int kept = Degree + 1;
        Table = [.. rows.SelectMany(r => Enumerable.Range(0, 8).SelectMany(p => r.Skip(p * (MostDegree + 1)).Take(kept)))];
        Error = Degree < 0 ? 0 : Measure(largest);
    }

    /// <summary>Angle from lab x to crystal a, radians.</summary>
    public double Axis { get; }

    /// <summary>dK/dE at zero field, crystal frame, S.</summary>
    public Tensor2 AtZeroField { get; }

    /// <summary>ln of the smallest radius (V/m).</summary>
    public double First { get; }

    /// <summary>Step of ln |E|.</summary>
    public double Step { get; }

    /// <summary>Number of radii; 0 for a linear law.</summary>
    public int Count { get; }

    /// <summary>Highest multiple of the angle; -1 when there is none.</summary>
    public int Degree { get; } = -1;

    /// <summary>Per radius: N along a, cos terms, then sin terms; N along b likewise; then the same four rows for dN/d ln |E|. Siemens.</summary>
    public double[] Table { get; }

    /// <summary>Largest difference between this form and the law, relative to |K|, over fields in all directions.</summary>
    public double Error { get; }

    // The value at a field, as the page works it out.
    private (double A, double B) At(double ea, double eb)
    {
        double r = double.Hypot(ea, eb), u = Math.Clamp((Math.Log(r) - First) / Step, 0, Count - 1.000001), angle = Math.Atan2(eb, ea);
        int j = (int)u, n = Degree + 1;
        double t = u - j, na = 0, nb = 0;
        double h0 = (1 + (2 * t)) * (1 - t) * (1 - t), g0 = Step * t * (1 - t) * (1 - t), h1 = t * t * (3 - (2 * t)), g1 = Step * t * t * (t - 1);
        for (int m = 0; m < n; m++)
        {
            double c = Math.Cos(m * angle), s = Math.Sin(m * angle);
            double Piece(int p) => (h0 * Table[(((8 * j) + p) * n) + m]) + (g0 * Table[(((8 * j) + p + 4) * n) + m])
                + (h1 * Table[(((8 * (j + 1)) + p) * n) + m]) + (g1 * Table[(((8 * (j + 1)) + p + 4) * n) + m]);
            na += (Piece(0) * c) + (Piece(1) * s);
            nb += (Piece(2) * c) + (Piece(3) * s);
        }

        Tensor2 z = AtZeroField;
        return ((z.Aa * ea) + (z.Ab * eb) + (r * na), (z.Ba * ea) + (z.Bb * eb) + (r * nb));
    }

    private double Measure(double largest)
    {
        double worst = 0;
        for (int k = 0; k < 1200; k++)
        {
            // Golden-ratio steps spread the fields over sizes and directions.
            double r = largest * Math.Pow(10, -Decades * ((k * 0.6180339887498949) % 1)), angle = 2 * Math.PI * ((k * 0.7548776662466927) % 1);
            double[] ea = [r * Math.Cos(angle)], eb = [r * Math.Sin(angle)], ka = [0], kb = [0];
            try
            {
                law.Evaluate(ea, eb, ka, kb);
            }
            catch (FieldOutsideTableException)
            {
                continue;
            }

            (double a, double b) = At(ea[0], eb[0]);
            worst = Math.Max(worst, double.Hypot(a - ka[0], b - kb[0]) / Math.Max(double.Hypot(ka[0], kb[0]), double.Epsilon));
        }

        return worst;
    }

    private double[] Row(double radius)
    {
        double[,] samples = new double[Angles, 4];
        Span<double> k = stackalloc double[6];
        Tensor2 z = AtZeroField;
        for (int i = 0; i < Angles; i++)
        {
            (double s, double c) = Math.SinCos(2 * Math.PI * i / Angles);
            Evaluate(radius, c, s, k);
            double na = (k[0] / radius) - (z.Aa * c) - (z.Ab * s), nb = (k[1] / radius) - (z.Ba * c) - (z.Bb * s);

            // d(N)/d ln r with N = K/r - s e: dK/dr - K/r.
            samples[i, 0] = na;
            samples[i, 1] = nb;
            samples[i, 2] = (k[2] * c) + (k[3] * s) - (k[0] / radius);
            samples[i, 3] = (k[4] * c) + (k[5] * s) - (k[1] / radius);
        }

        double[] row = new double[8 * (MostDegree + 1)];
        for (int m = 0; m <= MostDegree; m++)
        {
            double weight = (m == 0 ? 1.0 : 2.0) / Angles;
            for (int i = 0; i < Angles; i++)
            {
                double angle = 2 * Math.PI * ((long)m * i % Angles) / Angles, c = weight * Math.Cos(angle), s = m == 0 ? 0 : weight * Math.Sin(angle);
                for (int q = 0; q < 4; q++)
                {
                    row[(2 * q * (MostDegree + 1)) + m] += c * samples[i, q];
                    row[(((2 * q) + 1) * (MostDegree + 1)) + m] += s * samples[i, q];
                }
            }
        }

        return row;
    }

    // K and dK/dE; beyond a table's grid the values of its rim go on along the ray, where no field of the solution lies.
    private void Evaluate(double radius, double c, double s, Span<double> k)
    {
        if (!Try(radius, c, s, k))
        {
            double low = 0, high = radius;
            for (int i = 0; i < 40; i++)
            {
                double middle = (low + high) / 2;
                (low, high) = Try(middle, c, s, k) ? (middle, high) : (low, middle);
            }

            Try(low, c, s, k);
            double beyond = radius - low;
            k[0] += beyond * ((k[2] * c) + (k[3] * s));
            k[1] += beyond * ((k[4] * c) + (k[5] * s));
        }
    }

    private bool Try(double radius, double c, double s, Span<double> k)
    {
        try
        {
            law.Evaluate([radius * c], [radius * s], k[..1], k.Slice(1, 1), k.Slice(2, 1), k.Slice(3, 1), k.Slice(4, 1), k.Slice(5, 1));
            return true;
        }
        catch (FieldOutsideTableException)
        {
            return false;
        }
    }
}
