namespace FieldSolve.Geometry;

/// <summary>A stretch of rim between two vertices with nothing happening on the way.</summary>
/// <param name="From">First vertex.</param>
/// <param name="To">Last vertex.</param>
/// <param name="Curve">The stretch; its ends are the vertices, bit for bit.</param>
/// <param name="Loop">Its loop.</param>
/// <param name="Middle">Arc length of its middle in the loop.</param>
internal readonly record struct RimPiece(int From, int To, Curve Curve, int Loop, double Middle);

/// <summary>The rim of an outline being cut at vertices.</summary>
internal sealed class CutRim
{
    private readonly Outline _outline;
    private readonly VertexSet _vertices;
    private readonly int[] _start; // vertex at the start of each piece
    private readonly List<(double T, int Vertex)>?[] _cuts;
    private readonly HashSet<int> _needed = []; // all vertices but those that only join two arcs of one circle

    public CutRim(Outline outline, VertexSet vertices)
    {
        _outline = outline;
        _vertices = vertices;
        _cuts = new List<(double, int)>?[outline.Pieces.Length];
        _start = [.. outline.Pieces.Select(c => vertices.Add(c.Start))];
        for (int k = 0; k < _start.Length; k++)
        {
            if (!Continues(outline.Pieces[outline.Neighbour(k, -1)], outline.Pieces[k]))
            {
                _needed.Add(_start[k]);
            }
        }
    }

    /// <summary>Keeps a vertex that something else needs.</summary>
    public void Need(int vertex) => _needed.Add(vertex);

    /// <summary>Cuts a piece at a parameter; returns the vertex there.</summary>
    public int Cut(int piece, double t)
    {
        int vertex = _vertices.Add(_outline.Pieces[piece].At(t));
        _needed.Add(vertex);
        if (vertex != _start[piece] && vertex != EndOf(piece))
        {
            (_cuts[piece] ??= []).Add((t, vertex));
        }

        return vertex;
    }

    /// <summary>The vertices on a piece, ends included.</summary>
    public IEnumerable<int> On(int piece) =>
        (_cuts[piece] ?? []).Select(c => c.Vertex).Append(_start[piece]).Append(EndOf(piece)).Distinct();

    /// <summary>The whole rim between its vertices, loop after loop. Arcs over a quarter turn are divided evenly.</summary>
    public List<RimPiece> Pieces()
    {
        var pieces = new List<RimPiece>();
        for (int loop = 0, first = 0; loop < _outline.Loops.Count; loop++)
        {
            int count = _outline.Loops[loop].Count;
            AddLoop(loop, Stops(first, count), pieces);
            first += count;
        }

        return pieces;
    }

    private int EndOf(int piece) => _start[_outline.Neighbour(piece, 1)];

    private static bool Continues(Curve before, Curve after) =>
        before.IsArc && after.IsArc && before.Centre == after.Centre && before.Radius == after.Radius
        && before.Sweep > 0 == after.Sweep > 0;

    // Stops along a loop in order. A vertex met several times running (pieces shorter than the tolerance) is one stop that is
    // reached at its first place and left at its last.
    private List<Stop> Stops(int first, int count)
    {
        var stops = new List<Stop>();
        for (int k = first; k < first + count; k++)
        {
            Pass(_start[k], new(k, 0));
            foreach ((double t, int vertex) in (_cuts[k] ?? []).OrderBy(c => c.T).ThenBy(c => c.Vertex))
            {
                Pass(vertex, new(k, t));
            }
        }

        if (stops.Count > 1 && stops[^1].Vertex == stops[0].Vertex)
        {
            stops[0] = stops[0] with { Reached = stops[^1].Reached };
            stops.RemoveAt(stops.Count - 1);
        }

        List<Stop> needed = stops.FindAll(s => _needed.Contains(s.Vertex));
        return needed.Count > 0 ? needed : [stops[0]];

        void Pass(int vertex, RimPoint at)
        {
            if (stops.Count > 0 && stops[^1].Vertex == vertex)
            {
                stops[^1] = stops[^1] with { Left = at };
            }
            else
            {
                stops.Add(new(vertex, at, at));
            }
        }
    }

    private void AddLoop(int loop, List<Stop> stops, List<RimPiece> pieces)
    {
        for (int i = 0; i < stops.Count; i++)
        {
            Stop from = stops[i], to = stops[(i + 1) % stops.Count];
            Curve c = _outline.Pieces[from.Left.Piece];
            double s = _outline.StartOf(from.Left.Piece) + (from.Left.T * c.Length);
            if (!c.IsArc)
            {
                if (from.Vertex != to.Vertex)
                {
                    Curve segment = Curve.Segment(_vertices[from.Vertex], _vertices[to.Vertex]);
                    pieces.Add(new(from.Vertex, to.Vertex, segment, loop, s + (segment.Length / 2)));
                }

                continue;
            }

            double sweep = Sweep(from.Left, to.Reached);
            int n = Math.Max(1, (int)Math.Ceiling((Math.Abs(sweep) / (Math.PI / 2)) - 1e-9));
            double angle = c.StartAngle + (from.Left.T * c.Sweep), step = sweep / n, half = c.Radius * Math.Abs(step) / 2;
            Curve whole = Curve.Arc(c.Centre, c.Radius, angle, sweep);
            for (int k = 0, a = from.Vertex; k < n; k++)
            {
                int b = k == n - 1 ? to.Vertex : _vertices.Add(whole.At((k + 1.0) / n));
                Curve arc = Curve.Arc(c.Centre, c.Radius, angle + (k * step), step, _vertices[a], _vertices[b]);
                pieces.Add(new(a, b, arc, loop, s + (((2 * k) + 1) * half)));
                a = b;
            }
        }
    }

    // Angle travelled along arcs of one circle.
    private double Sweep(RimPoint from, RimPoint to)
    {
        if (from.Piece == to.Piece && to.T > from.T)
        {
            return (to.T - from.T) * _outline.Pieces[from.Piece].Sweep;
        }

        double sweep = (1 - from.T) * _outline.Pieces[from.Piece].Sweep;
        for (int k = _outline.Neighbour(from.Piece, 1); k != to.Piece; k = _outline.Neighbour(k, 1))
        {
            sweep += _outline.Pieces[k].Sweep;
        }

        return sweep + (to.T * _outline.Pieces[to.Piece].Sweep);
    }

    private readonly record struct RimPoint(int Piece, double T);

    private readonly record struct Stop(int Vertex, RimPoint Reached, RimPoint Left);
}
