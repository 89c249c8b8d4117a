namespace FieldSolve.Bands;

/// <summary>
/// One piece of a contour of constant energy of a <see cref="ConeSlice"/>. (E - t·q)² = q² + mass² is an ellipse for |t| &lt; 1 and
/// a hyperbola for |t| &gt; 1, one branch for each band: q(u) = c + X(u) e1 + Y(u) e2 with cos and sin, or cosh and sinh.
/// </summary>
internal sealed class FermiLine
{
    private const int ScanSteps = 160;
    private const int Halvings = 50;

    private readonly ConeSlice slice;
    private readonly (double A, double B) c, e1, e2;

    private FermiLine(ConeSlice slice, int band, bool hyperbola, double measure, (double A, double B) c, (double A, double B) e1, (double A, double B) e2)
    {
        (this.slice, Band, IsHyperbola, Measure) = (slice, band, hyperbola, measure);
        (this.c, this.e1, this.e2) = (c, e1, e2);
    }

    /// <summary>+1 for the upper band, -1 for the lower one.</summary>
    public int Band { get; }

    /// <summary>Open branch.</summary>
    public bool IsHyperbola { get; }

    /// <summary>
    /// |dq/du| / |dE/dq| over √(q² + mass²), a constant on the whole line: 1/√|1 - t²|. It follows from the gradient of the conic's
    /// equation, and has no cancellation near a band edge.
    /// </summary>
    public double Measure { get; }

    /// <summary>Range of u.</summary>
    public double Start { get; private init; }

    /// <summary>Range of u.</summary>
    public double End { get; private init; }

    /// <summary>A whole ellipse.</summary>
    public bool IsClosed => !IsHyperbola && End - Start == 2 * Math.PI;

    /// <summary>The pieces of the contour at an energy counted from the node.</summary>
    /// <param name="slice">The cone.</param>
    /// <param name="energy">J.</param>
    /// <param name="cutOff">Largest |k|, 1/m; infinite for none, which hyperbolas do not allow.</param>
    public static IReadOnlyList<FermiLine> At(ConeSlice slice, double energy, double cutOff)
    {
        double t = slice.Tilt;
        (double A, double B) along = t > 0 ? (slice.TiltA / t, slice.TiltB / t) : (1, 0), aside = (-along.B, along.A);
        (double, double) Times((double A, double B) v, double f) => (f * v.A, f * v.B);
        double closed = (1 - t) * (1 + t), root = Math.Sqrt(Math.Abs(closed));
        if (closed > 0)
        {
            double square = (Math.Abs(energy) - (root * slice.Mass)) * (Math.Abs(energy) + (root * slice.Mass));
            if (!(square > 0))
            {
                return [];
            }

            double half = Math.Sqrt(square) / root;
            FermiLine ellipse = new(
                slice, Math.Sign(energy), false, 1 / root, Times(along, -energy * t / closed), Times(along, half / root), Times(aside, half))
            {
                Start = 0,
                End = 2 * Math.PI,
            };
            return ellipse.Within(cutOff);
        }

        (double ha, double hb) = slice.PerWaveNumber;
        double far = cutOff * Math.Max(ha, hb);

        // A node just at the energy gives two crossing lines; a branch that passes it this closely is the same to all digits kept.
        double size = Math.Max(Math.Sqrt((slice.Mass * slice.Mass) + (energy * energy / -closed)), 1e-9 * far);
        double reach = Math.Asinh(far / size);
        return
        [
            .. new[] { 1, -1 }.SelectMany(side => new FermiLine(
                slice, -side, true, 1 / root, Times(along, energy * t / -closed), Times(along, side * size / root), Times(aside, size))
            {
                Start = -reach,
                End = reach,
            }.Within(cutOff)),
        ];
    }

    /// <summary>Place on the line and its derivative, J.</summary>
    public (double Qa, double Qb, double Da, double Db) At(double u)
    {
        (double x, double y, double dx, double dy) = Shape(u);
        return (c.A + (x * e1.A) + (y * e2.A), c.B + (x * e1.B) + (y * e2.B), (dx * e1.A) + (dy * e2.A), (dx * e1.B) + (dy * e2.B));
    }

    /// <summary>Wave vector from the node along the cone's axes, 1/m.</summary>
    public (double A, double B) WaveVector(double u)
    {
        (double qa, double qb, _, _) = At(u);
        (double ha, double hb) = slice.PerWaveNumber;
        return (qa / ha, qb / hb);
    }

    /// <summary>
    /// Total variation of k·p along the line: twice the extent of a closed contour in the direction p. Exact: on a conic k·p turns
    /// at known places.
    /// </summary>
    /// <param name="p">Direction in the cone's frame.</param>
    public double Variation((double A, double B) p)
    {
        (double ha, double hb) = slice.PerWaveNumber;
        double x = (e1.A * p.A / ha) + (e1.B * p.B / hb), y = (e2.A * p.A / ha) + (e2.B * p.B / hb);
        if (IsClosed)
        {
            return 4 * Math.Sqrt((x * x) + (y * y));
        }

        List<double> stops = [Start];
        if (!IsHyperbola)
        {
            double turn = Math.Atan2(y, x), first = turn + (Math.PI * Math.Ceiling((Start - turn) / Math.PI));
            for (double at = first; at < End; at += Math.PI)
            {
                stops.Add(at);
            }
        }
        else if (Math.Abs(y) < Math.Abs(x) && -Math.Atanh(y / x) is double at && at > Start && at < End)
        {
            stops.Add(at);
        }

        stops.Add(End);
        double sum = 0;
        for (int k = 1; k < stops.Count; k++)
        {
            (double x1, double y1, _, _) = Shape(stops[k]);
            (double x0, double y0, _, _) = Shape(stops[k - 1]);
            sum += Math.Abs((x * (x1 - x0)) + (y * (y1 - y0)));
        }

        return sum;
    }

    /// <summary>Half the shortest width of the contour, 1/m: the smaller half axis of an ellipse; of an open piece, from its chords along a and b.</summary>
    public double HalfWidth()
    {
        if (!IsClosed)
        {
            return 0.5 * Math.Min(Variation((1, 0)), Variation((0, 1)));
        }

        // Smaller singular value of the two half-axis vectors: the area over the larger one.
        (double ha, double hb) = slice.PerWaveNumber;
        double xx = e1.A / ha, xy = e1.B / hb, yx = e2.A / ha, yy = e2.B / hb;
        double sum = (xx * xx) + (xy * xy) + (yx * yx) + (yy * yy), area = Math.Abs((xx * yy) - (xy * yx));
        double larger = Math.Sqrt(0.5 * (sum + Math.Sqrt(Math.Max(0, (sum - (2 * area)) * (sum + (2 * area))))));
        return larger > 0 ? area / larger : 0;
    }

    private (double X, double Y, double DX, double DY) Shape(double u)
    {
        if (IsHyperbola)
        {
            (double cosh, double sinh) = (Math.Cosh(u), Math.Sinh(u));
            return (cosh, sinh, sinh, cosh);
        }

        (double sin, double cos) = Math.SinCos(u);
        return (cos, sin, -sin, cos);
    }

    private List<FermiLine> Within(double cutOff)
    {
        bool Inside(double u)
        {
            (double a, double b) = WaveVector(u);
            return (a * a) + (b * b) <= cutOff * cutOff;
        }

        if (double.IsPositiveInfinity(cutOff))
        {
            return [this];
        }

        List<FermiLine> parts = [];
        double step = (End - Start) / ScanSteps, open = Start;
        bool inside = Inside(Start);
        for (int k = 1; k <= ScanSteps; k++)
        {
            double low = Start + ((k - 1) * step), high = k == ScanSteps ? End : Start + (k * step);
            if (Inside(high) == inside)
            {
                continue;
            }

            for (int halving = 0; halving < Halvings; halving++)
            {
                double middle = 0.5 * (low + high);
                (low, high) = Inside(middle) == inside ? (middle, high) : (low, middle);
            }

            if (inside)
            {
                parts.Add(Part(open, low));
            }

            (inside, open) = (!inside, high);
        }

        if (inside)
        {
            parts.Add(open == Start ? this : Part(open, End));
        }

        return parts;
    }

    private FermiLine Part(double from, double to) => new(slice, Band, IsHyperbola, Measure, c, e1, e2) { Start = from, End = to };
}
