using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>
/// Splits arcs until each piece, with the triangle of its chord and end tangents about it, meets other pieces at shared end points
/// only. From then on chords of arc pieces never cross anything, however finely they are split.
/// </summary>
internal static class ArcSeparation
{
    // Arcs that touch at zero angle can never be parted; they are left at this sweep (radians).
    private const double Smallest = 1e-5;

    public static List<double>[] Split(Domain domain, SharpCorners sharp, double longestArc)
    {
        List<Hull> hulls = [];
        Point2[] loose = LooseVertices(domain);
        Stack<int> work = new();
        for (int e = 0; e < domain.Edges.Count; e++)
        {
            Curve curve = domain.Edges[e].Curve;
            int n = Math.Max(1, (int)Math.Ceiling(Math.Abs(curve.Sweep) / longestArc * (1 - 1e-12)));
            for (int k = 0; k < n; k++)
            {
                Add(e, (double)k / n, k + 1 == n ? 1 : (k + 1.0) / n);
            }
        }

        while (work.Count > 0)
        {
            int i = work.Pop();
            if (hulls[i].Sweep > Smallest && Array.Exists(loose, hulls[i].Holds))
            {
                Halve(i);
                continue;
            }

            for (int j = 0; j < hulls.Count && hulls[i].Sweep > Smallest; j++)
            {
                if (i == j || !hulls[i].BoxMeets(hulls[j]) || !hulls[i].Meets(hulls[j]))
                {
                    continue;
                }

                int larger = hulls[i].Height >= hulls[j].Height ? i : j;
                Halve(larger);
                if (larger != i)
                {
                    work.Push(i);
                }

                break;
            }
        }

        List<double>[] result = new List<double>[domain.Edges.Count];
        for (int e = 0; e < result.Length; e++)
        {
            result[e] = [0];
        }

        foreach (Hull hull in hulls)
        {
            result[hull.Edge].Add(hull.To);
        }

        foreach (List<double> ts in result)
        {
            ts.Sort();
        }

        return result;

        Hull Make(int e, double from, double to) => new(domain.Edges[e], e, from, to);

        void Halve(int i)
        {
            Hull old = hulls[i];
            double middle = sharp.SplitAt(old.Edge, old.From, old.To);
            hulls[i] = Make(old.Edge, old.From, middle);
            work.Push(i);
            Add(old.Edge, middle, old.To);
        }

        void Add(int e, double from, double to)
        {
            hulls.Add(Make(e, from, to));
            if (domain.Edges[e].Curve.IsArc)
            {
                work.Push(hulls.Count - 1);
            }
        }
    }

    // Vertices on no edge: tips inside the sheet.
    private static Point2[] LooseVertices(Domain domain)
    {
        bool[] used = new bool[domain.Vertices.Count];
        foreach (DomainEdge e in domain.Edges)
        {
            used[e.From] = used[e.To] = true;
        }

        return domain.Vertices.Where((_, v) => !used[v]).ToArray();
    }

    // A piece and the corners A, T, B of the triangle about it; T is the chord's middle on a straight piece.
    private sealed class Hull
    {
        private readonly Point2 a, t, b;
        private readonly double x0, x1, y0, y1;

        public Hull(DomainEdge edge, int index, double from, double to)
        {
            Curve curve = edge.Curve;
            (Edge, From, To) = (index, from, to);
            a = curve.At(from);
            b = curve.At(to);
            Sweep = Math.Abs(curve.Sweep) * (to - from);
            Point2 middle = new((a.X + b.X) / 2, (a.Y + b.Y) / 2);
            Height = Sweep == 0 ? 0 : Point2.Distance(a, b) / 2 * Math.Tan(Sweep / 2);
            t = Sweep == 0 ? middle : middle + (Height * (curve.Sweep > 0 ? -1 : 1) * curve.Tangent((from + to) / 2).Left);
            (x0, x1) = (Math.Min(a.X, Math.Min(t.X, b.X)), Math.Max(a.X, Math.Max(t.X, b.X)));
            (y0, y1) = (Math.Min(a.Y, Math.Min(t.Y, b.Y)), Math.Max(a.Y, Math.Max(t.Y, b.Y)));
        }

        public int Edge { get; }

        public double From { get; }

        public double To { get; }

        public double Sweep { get; }

        public double Height { get; }

        public bool BoxMeets(Hull o) => x0 <= o.x1 && o.x0 <= x1 && y0 <= o.y1 && o.y0 <= y1;

        public bool Holds(Point2 p)
        {
            double first = Point2.Cross(t - a, p - a), second = Point2.Cross(b - t, p - t), third = Point2.Cross(a - b, p - b);
            return (first >= 0 && second >= 0 && third >= 0) || (first <= 0 && second <= 0 && third <= 0);
        }

        public bool Meets(Hull o)
        {
            bool shared = false;
            foreach ((Point2 end, Point2 other) in new[] { (a, b), (b, a) })
            {
                if (end == o.a || end == o.b)
                {
                    shared = true;
                    if (WedgesMeet(t - end, other - end, o.t - end, (end == o.a ? o.b : o.a) - end))
                    {
                        return true;
                    }
                }
            }

            return !shared && !Separated(o) && !o.Separated(this);
        }

        // Whether the wedge between p and q (less than a right angle) and the one between r and s share a direction.
        private static bool WedgesMeet(Point2 p, Point2 q, Point2 r, Point2 s) =>
            In(p, q, r) || In(p, q, s) || In(r, s, p) || In(r, s, q);

        private static bool In(Point2 p, Point2 q, Point2 d)
        {
            double turn = Point2.Cross(p, q), first = Point2.Cross(p, d), last = Point2.Cross(d, q);
            if (turn < 0)
            {
                (first, last) = (-first, -last);
            }

            double noise = 1e-13 * d.Length;
            return first >= -noise * p.Length && last >= -noise * q.Length && (Point2.Dot(p, d) > 0 || Point2.Dot(q, d) > 0);
        }

        // Whether one of this hull's sides has the other hull on its far side.
        private bool Separated(Hull o) => Parts(a, t, b, o) || Parts(t, b, a, o) || Parts(b, a, t, o);

        private bool Parts(Point2 p, Point2 q, Point2 third, Hull o)
        {
            Point2 side = q - p;
            if (Sweep == 0)
            {
                // A segment has two far sides.
                double l = Point2.Cross(side, o.a - p), m = Point2.Cross(side, o.t - p), n = Point2.Cross(side, o.b - p);
                return (l > 0 && m > 0 && n > 0) || (l < 0 && m < 0 && n < 0);
            }

            double own = Point2.Cross(side, third - p);
            return own * Point2.Cross(side, o.a - p) < 0 && own * Point2.Cross(side, o.t - p) < 0 && own * Point2.Cross(side, o.b - p) < 0;
        }
    }
}
