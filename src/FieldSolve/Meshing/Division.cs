using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>
/// First division of the domain's edges: into pieces as long as the size field wants them, and so short on arcs that each arc
/// piece stays clear of everything but its neighbours.
/// </summary>
internal static class Division
{
    // Edges need not be shorter than the field says; this much of a piece more is let pass rather than splitting again.
    private const double Slack = 0.15;
    private const double LongestArc = Math.PI / 4;

    /// <summary>For each edge the parameters 0 = t0 &lt; t1 &lt; ... = 1 between its pieces.</summary>
    /// <exception cref="MeshException">An edge needs more pieces than <paramref name="most"/>.</exception>
    public static List<double>[] Divide(Domain domain, ISizeField size, SharpCorners sharp, int most, CancellationToken cancel)
    {
        List<double>[] coarse = ArcSeparation.Split(domain, sharp, LongestArc);
        List<double>[] result = new List<double>[domain.Edges.Count];
        for (int e = 0; e < result.Length; e++)
        {
            cancel.ThrowIfCancellationRequested();
            Curve curve = domain.Edges[e].Curve;
            List<double> ts = [0];
            for (int k = 1; k < coarse[e].Count; k++)
            {
                if (sharp.IsSharp(e))
                {
                    Bisect(curve, e, size, sharp, ts, most, coarse[e][k - 1], coarse[e][k]);
                }
                else
                {
                    Equidistribute(curve, size, ts, most, coarse[e][k - 1], coarse[e][k]);
                }
            }

            result[e] = ts;
        }

        return result;
    }

    private static double At(ISizeField size, Point2 p) => size.At(p.X, p.Y);

    private static void Bisect(Curve curve, int edge, ISizeField size, SharpCorners sharp, List<double> ts, int most, double from, double to)
    {
        RefuseTooMany(ts.Count, most, curve);
        double middle = sharp.SplitAt(edge, from, to);
        double wanted = Math.Min(At(size, curve.At(middle)), Math.Min(At(size, curve.At(from)), At(size, curve.At(to))));
        if (curve.Length * (to - from) <= 1.3 * wanted || !(middle > from && middle < to))
        {
            ts.Add(to);
            return;
        }

        Bisect(curve, edge, size, sharp, ts, most, from, middle);
        Bisect(curve, edge, size, sharp, ts, most, middle, to);
    }

    // Places points so that each piece holds the same integral of 1/h, which is the number of edges wanted.
    private static void Equidistribute(Curve curve, ISizeField size, List<double> ts, int most, double from, double to)
    {
        List<double> at = [from], sum = [0];
        Integrate(curve, size, at, sum, most, from, to, At(size, curve.At(from)), At(size, curve.At(to)));
        double total = sum[^1];
        int n = Math.Max(1, (int)Math.Ceiling(total - Slack));
        int k = 1;
        for (int i = 1; i < n; i++)
        {
            double goal = total * i / n;
            while (sum[k] < goal)
            {
                k++;
            }

            double t = at[k - 1] + ((at[k] - at[k - 1]) * (goal - sum[k - 1]) / (sum[k] - sum[k - 1]));
            if (t > ts[^1] && t < to)
            {
                ts.Add(t);
            }
        }

        ts.Add(to);
    }

    private static void Integrate(
        Curve curve, ISizeField size, List<double> at, List<double> sum, int most, double from, double to, double sizeFrom, double sizeTo)
    {
        // There are two to five samples per piece.
        RefuseTooMany(at.Count / 8, most, curve);
        double middle = (from + to) / 2, sizeMiddle = At(size, curve.At(middle));
        double length = curve.Length * (to - from);
        double smallest = Math.Min(sizeMiddle, Math.Min(sizeFrom, sizeTo));
        if (length <= 0.5 * smallest || !(middle > from && middle < to))
        {
            at.Add(to);
            sum.Add(sum[^1] + (length * ((1 / sizeFrom) + (4 / sizeMiddle) + (1 / sizeTo)) / 6));
            return;
        }

        Integrate(curve, size, at, sum, most, from, middle, sizeFrom, sizeMiddle);
        Integrate(curve, size, at, sum, most, middle, to, sizeMiddle, sizeTo);
    }

    private static void RefuseTooMany(int pieces, int most, Curve curve)
    {
        if (pieces > most)
        {
            throw new MeshException(FormattableString.Invariant(
                $"The edge of the outline from ({curve.Start.X:G9}, {curve.Start.Y:G9}) m alone needs more than the {most} triangles allowed. Ask for larger triangles or allow more of them."))
            { IsTooMany = true };
        }
    }
}
