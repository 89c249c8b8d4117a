using NetTopologySuite.Geometries;

namespace FieldSolve.Geometry;

/// <summary>
/// The sheet as closed loops of curves with the sheet to the left: the outer loop first (counter-clockwise), then the holes (clockwise).
/// </summary>
public sealed class Outline
{
    // Nothing is told apart below this part of the sheet's size: 1e-9 of an 8 um disc is a hundred-thousandth of an atom.
    private const double RelativeTolerance = 1e-9;

    private readonly Curve[][] _loops;
    private readonly double[][] _starts; // arc length at which each piece starts, and the loop's length at the end
    private readonly int[] _offsets; // index of each loop's first piece in Pieces
    private readonly int[] _loopOf;
    private readonly BoxTree _tree;

    /// <summary>
    /// Takes the loops in either direction and turns the outer one (the first) counter-clockwise and the others clockwise; a
    /// loop's first point stays its first. Arcs over a quarter turn are divided evenly, and ends that differ by rounding are
    /// made equal. Checks nothing else: see <see cref="Validate"/>.
    /// </summary>
    /// <param name="loops">Each loop's pieces, end to start.</param>
    /// <exception cref="ArgumentException">There is no loop, or a loop has no piece.</exception>
    public Outline(IReadOnlyList<IReadOnlyList<Curve>> loops)
    {
        ArgumentNullException.ThrowIfNull(loops);
        if (loops.Count == 0 || loops.Any(l => l.Count == 0))
        {
            throw new ArgumentException("An outline needs at least one loop, and each loop at least one piece.", nameof(loops));
        }

        Bounds = loops.SelectMany(l => l).Select(c => c.Bounds()).Aggregate((a, b) => a.With(b));
        Size = Bounds.Diagonal;
        Tolerance = RelativeTolerance * Size;
        _loops = [.. loops.Select((l, i) => Normalised(l, hole: i > 0))];
        _starts = [.. _loops.Select(RunningLength)];
        _offsets = new int[_loops.Length];
        for (int i = 1; i < _loops.Length; i++)
        {
            _offsets[i] = _offsets[i - 1] + _loops[i - 1].Length;
        }

        Pieces = [.. _loops.SelectMany(l => l)];
        _loopOf = [.. _loops.SelectMany((l, i) => Enumerable.Repeat(i, l.Length))];
        _tree = new BoxTree([.. Pieces.Select(c => c.Bounds())]);
        Area = _loops.Sum(SignedArea);
    }

    /// <summary>The loops; each piece starts where the one before it ends.</summary>
    public IReadOnlyList<IReadOnlyList<Curve>> Loops => _loops;

    /// <summary>Length of the diagonal of the smallest upright rectangle about the sheet, metres.</summary>
    public double Size { get; }

    /// <summary>Area of the sheet, holes taken off, square metres; exact with arcs.</summary>
    public double Area { get; }

    internal Box Bounds { get; }

    /// <summary>Places nearer than this count as one, metres.</summary>
    internal double Tolerance { get; }

    /// <summary>The pieces of all loops, loop after loop.</summary>
    internal Curve[] Pieces { get; }

    /// <summary>Length of a loop, metres.</summary>
    public double LoopLength(int loop) => _starts[loop][^1];

    /// <summary>The point at an arc length (metres, any sign, taken round the loop) from the loop's first point.</summary>
    public Point2 At(int loop, double s)
    {
        (int piece, double t) = PieceAt(loop, s);
        return Pieces[piece].At(t);
    }

    /// <summary>The place of the whole rim nearest to a point.</summary>
    public RimPlace Nearest(Point2 p) => Place(_tree.Nearest(p, i => Pieces[i].Distance(p)), p);

    /// <summary>The place of one loop nearest to a point.</summary>
    public RimPlace NearestOn(int loop, Point2 p) =>
        Place(_tree.Nearest(p, i => _loopOf[i] == loop ? Pieces[i].Distance(p) : double.PositiveInfinity), p);

    /// <summary>The pieces that cover a span, in the loop's direction. Ends within a billionth of the sheet's size of a corner are that corner.</summary>
    public IReadOnlyList<Curve> Stretch(RimSpan span)
    {
        double length = LoopLength(span.Loop);
        (int first, _) = PieceAt(span.Loop, span.From);
        double begin = Wrapped(span.From, length), end = begin + Math.Min(span.Length, length);
        Curve[] loop = _loops[span.Loop];
        double[] starts = _starts[span.Loop];
        var pieces = new List<Curve>();
        for (int k = first - _offsets[span.Loop], turn = 0; starts[k] + (turn * length) < end;)
        {
            double from = starts[k] + (turn * length), own = starts[k + 1] - starts[k];
            double a = Math.Max(begin - from, 0), b = Math.Min(end - from, own);
            a = a <= Tolerance ? 0 : a;
            b = b >= own - Tolerance ? own : b;
            if (b - a > Tolerance)
            {
                pieces.Add(a == 0 && b == own ? loop[k] : loop[k].Part(a / own, b == own ? 1 : b / own));
            }

            if (++k == loop.Length)
            {
                (k, turn) = (0, turn + 1);
            }
        }

        return pieces;
    }

    /// <summary>The span between two places of one loop, the shorter way round.</summary>
    /// <exception cref="ArgumentException">The places are on different loops, or the same place.</exception>
    public RimSpan Between(RimPlace a, RimPlace b)
    {
        if (a.Loop != b.Loop)
        {
            throw new ArgumentException("The two places lie on different loops of the rim.", nameof(b));
        }

        double length = LoopLength(a.Loop), ahead = Wrapped(b.S - a.S, length);
        double shorter = Math.Min(ahead, length - ahead);
        if (!(shorter > Tolerance))
        {
            throw new ArgumentException("The two places are one and the same.", nameof(b));
        }

        return new(a.Loop, Wrapped(shorter == ahead ? a.S : b.S, length), shorter);
    }

    /// <summary>Whether a point is on the sheet; a point on the rim, within a billionth of the sheet's size, counts as on it.</summary>
    public bool Contains(Point2 p) => SignedDistance(p) >= -Tolerance;

    /// <summary>
    /// The sheet without a dead edge of this width (metres, 0 or more) along its whole rim. Circles stay circles about their
    /// centre; straight outlines keep sharp corners (mitre joins; very sharp re-entrant ones are cut off).
    /// </summary>
    /// <exception cref="LayoutException">Nothing is left, or several pieces; or the outline mixes arcs and straight edges.</exception>
    /// <exception cref="ArgumentOutOfRangeException">The width is negative or not finite.</exception>
    public Outline Inset(double distance) => OutlineInset.Of(this, distance);

    /// <summary>
    /// Everything wrong with the outline; empty if it is sound. Looks for numbers that are not finite, gaps, coincident corners,
    /// loops without area, and rims that cross or touch themselves or each other; crossings by NetTopologySuite, arcs drawn finely.
    /// </summary>
    public IReadOnlyList<LayoutProblem> Validate() => OutlineCheck.Problems(this);

    /// <summary>An outline with straight edges from a polygon; coincident neighbouring corners are dropped.</summary>
    /// <param name="polygon">Shell and holes.</param>
    /// <param name="scale">Metres per unit of the polygon.</param>
    /// <exception cref="LayoutException">A ring has fewer than three distinct corners.</exception>
    public static Outline FromPolygon(Polygon polygon, double scale)
    {
        ArgumentNullException.ThrowIfNull(polygon);
        double tolerance = RelativeTolerance * polygon.EnvelopeInternal.Diameter * scale;
        return new([.. new[] { polygon.Shell }.Concat(polygon.Holes).Select(ring => OutlinePolygons.Loop(ring, scale, tolerance))]);
    }

    /// <summary>Distance from the rim, metres: positive on the sheet, negative off it.</summary>
    internal double SignedDistance(Point2 p)
    {
        int i = _tree.Nearest(p, k => Pieces[k].Distance(p));
        Curve c = Pieces[i];
        double t = c.NearestParameter(p);
        Point2 foot = c.At(t);
        double distance = Point2.Distance(foot, p);
        if (t is > 0 and < 1)
        {
            return Point2.Cross(c.Tangent(t), p - foot) >= 0 ? distance : -distance;
        }

        // Nearest to a joint: left of both pieces is on the sheet, right of both is off it. Otherwise the point lies in the wedge
        // between their normals, off the sheet at an outward corner and on it at a re-entrant one.
        (Curve before, Curve after) = t == 0 ? (Pieces[Neighbour(i, -1)], c) : (c, Pieces[Neighbour(i, 1)]);
        Point2 arrive = before.Tangent(1), leave = after.Tangent(0);
        bool left0 = Point2.Cross(arrive, p - foot) >= 0, left1 = Point2.Cross(leave, p - foot) >= 0;
        bool inside = left0 == left1 ? left0 : Point2.Cross(arrive, leave) < 0;
        return inside ? distance : -distance;
    }

    /// <summary>Index in <see cref="Pieces"/> and parameter of the place at an arc length of a loop.</summary>
    internal (int Piece, double T) PieceAt(int loop, double s)
    {
        double[] starts = _starts[loop];
        double along = Wrapped(s, starts[^1]);
        int k = Array.BinarySearch(starts, 0, _loops[loop].Length, along);
        k = k < 0 ? ~k - 1 : k;
        double own = starts[k + 1] - starts[k];
        return (_offsets[loop] + k, own > 0 ? Math.Clamp((along - starts[k]) / own, 0, 1) : 0);
    }

    /// <summary>Index of the piece after (+1) or before (-1) one in its loop.</summary>
    internal int Neighbour(int piece, int step)
    {
        int loop = _loopOf[piece], n = _loops[loop].Length;
        return _offsets[loop] + ((piece - _offsets[loop] + step + n) % n);
    }

    internal int LoopOf(int piece) => _loopOf[piece];

    /// <summary>Arc length of a piece's start in its loop.</summary>
    internal double StartOf(int piece) => _starts[_loopOf[piece]][piece - _offsets[_loopOf[piece]]];

    internal List<int> PiecesNear(Box box) => _tree.Query(box);

    internal int NearestPiece(Point2 p) => _tree.Nearest(p, k => Pieces[k].Distance(p));

    internal static double SignedArea(IReadOnlyList<Curve> loop) => loop.Sum(c => c.TwiceSweptArea(loop[0].Start)) / 2;

    internal static double Wrapped(double s, double length)
    {
        double w = s - (length * Math.Floor(s / length));
        return w >= 0 && w < length ? w : 0;
    }

    private RimPlace Place(int piece, Point2 p)
    {
        int loop = _loopOf[piece], k = piece - _offsets[loop];
        double t = Pieces[piece].NearestParameter(p);
        double s = t == 1 ? _starts[loop][k + 1] : _starts[loop][k] + (t * (_starts[loop][k + 1] - _starts[loop][k]));
        return new(loop, Wrapped(s, LoopLength(loop)), Point2.Distance(p, Pieces[piece].At(t)));
    }

    private Curve[] Normalised(IReadOnlyList<Curve> loop, bool hole)
    {
        double area = SignedArea(loop);
        List<Curve> pieces = (hole ? area > 0 : area < 0) ? [.. loop.Reverse().Select(c => c.Reversed())] : [.. loop];
        for (int k = 0; k < pieces.Count; k++)
        {
            Point2 next = pieces[(k + 1) % pieces.Count].Start;
            if (pieces[k].End != next && Point2.Distance(pieces[k].End, next) <= Tolerance)
            {
                Curve c = pieces[k];
                pieces[k] = c.IsArc ? Curve.Arc(c.Centre, c.Radius, c.StartAngle, c.Sweep, c.Start, next) : Curve.Segment(c.Start, next);
            }
        }

        return [.. pieces.SelectMany(Quarters)];
    }

    // At most a quarter turn each; the slack keeps a quarter whole that rounding made a little longer.
    private static IEnumerable<Curve> Quarters(Curve c)
    {
        double quarters = Math.Abs(c.Sweep) / (Math.PI / 2);
        int n = quarters > 1 && quarters < 100 ? (int)Math.Ceiling(quarters - 1e-9) : 1;
        return n == 1 ? [c] : Enumerable.Range(0, n).Select(k => c.Part((double)k / n, (k + 1.0) / n));
    }

    private static double[] RunningLength(Curve[] loop)
    {
        var starts = new double[loop.Length + 1];
        for (int k = 0; k < loop.Length; k++)
        {
            starts[k + 1] = starts[k] + loop[k].Length;
        }

        return starts;
    }
}
