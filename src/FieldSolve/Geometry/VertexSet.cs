namespace FieldSolve.Geometry;

/// <summary>Points that are told apart only beyond a tolerance: a point near an earlier one gets that one's index.</summary>
internal sealed class VertexSet
{
    private readonly double _tolerance;
    private readonly Point2 _corner;
    private readonly Dictionary<(long, long), List<int>> _cells = []; // looked up only, never walked through
    private readonly List<Point2> _points = [];

    /// <param name="tolerance">Metres, above 0.</param>
    /// <param name="corner">A point near the others, so that the cells' numbers stay small.</param>
    public VertexSet(double tolerance, Point2 corner)
    {
        _tolerance = tolerance;
        _corner = corner;
    }

    public int Count => _points.Count;

    public Point2 this[int index] => _points[index];

    /// <summary>Index of the nearest point within the tolerance, or -1.</summary>
    public int Find(Point2 p)
    {
        (long x, long y) = Cell(p);
        (int found, double best) = (-1, _tolerance);
        for (long i = x - 1; i <= x + 1; i++)
        {
            for (long j = y - 1; j <= y + 1; j++)
            {
                foreach (int k in _cells.GetValueOrDefault((i, j)) ?? [])
                {
                    double d = Point2.Distance(p, _points[k]);
                    if (d < best || (d == best && (found < 0 || k < found)))
                    {
                        (found, best) = (k, d);
                    }
                }
            }
        }

        return found;
    }

    /// <summary>Index of the nearest point within the tolerance, or of the point itself, added.</summary>
    public int Add(Point2 p)
    {
        int k = Find(p);
        if (k < 0)
        {
            k = _points.Count;
            _points.Add(p);
            (long, long) cell = Cell(p);
            if (!_cells.TryGetValue(cell, out List<int>? here))
            {
                _cells.Add(cell, here = []);
            }

            here.Add(k);
        }

        return k;
    }

    private (long X, long Y) Cell(Point2 p) =>
        ((long)Math.Floor((p.X - _corner.X) / _tolerance), (long)Math.Floor((p.Y - _corner.Y) / _tolerance));
}
