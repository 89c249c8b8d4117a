namespace FieldSolve.Geometry;

/// <summary>
/// Finds the items whose boxes meet a box, and the item nearest to a point. A binary tree over the items in the order given:
/// neighbours along a rim are neighbours in the plane, so nothing needs sorting.
/// </summary>
internal sealed class BoxTree
{
    private readonly List<Box[]> _levels = [];

    public BoxTree(Box[] items)
    {
        _levels.Add(items);
        while (_levels[^1].Length > 1)
        {
            Box[] below = _levels[^1];
            var level = new Box[(below.Length + 1) / 2];
            for (int i = 0; i < level.Length; i++)
            {
                level[i] = (2 * i) + 1 < below.Length ? below[2 * i].With(below[(2 * i) + 1]) : below[2 * i];
            }

            _levels.Add(level);
        }
    }

    /// <summary>Indices of the items whose boxes meet the box, ascending.</summary>
    public List<int> Query(Box box)
    {
        var found = new List<int>();
        if (_levels[0].Length > 0)
        {
            Collect(_levels.Count - 1, 0, box, found);
        }

        return found;
    }

    /// <summary>Index of the item with the smallest distance (the lowest of several), or -1 without items.</summary>
    /// <param name="p">The point.</param>
    /// <param name="distance">Distance of an item from the point; never below that of its box.</param>
    public int Nearest(Point2 p, Func<int, double> distance)
    {
        (int item, double best) = (-1, double.PositiveInfinity);
        if (_levels[0].Length > 0)
        {
            Descend(_levels.Count - 1, 0, p, distance, ref item, ref best);
        }

        return item;
    }

    private void Collect(int level, int node, Box box, List<int> found)
    {
        if (!_levels[level][node].Meets(box))
        {
            return;
        }

        if (level == 0)
        {
            found.Add(node);
            return;
        }

        Collect(level - 1, 2 * node, box, found);
        if ((2 * node) + 1 < _levels[level - 1].Length)
        {
            Collect(level - 1, (2 * node) + 1, box, found);
        }
    }

    private void Descend(int level, int node, Point2 p, Func<int, double> distance, ref int item, ref double best)
    {
        if (level == 0)
        {
            double d = distance(node);
            if (d < best || (d == best && node < item))
            {
                (item, best) = (node, d);
            }

            return;
        }

        Box[] below = _levels[level - 1];
        int left = 2 * node, right = left + 1;
        double dl = below[left].Distance(p);
        double dr = right < below.Length ? below[right].Distance(p) : double.PositiveInfinity;
        (int first, double d1, int second, double d2) = dr < dl ? (right, dr, left, dl) : (left, dl, right, dr);
        if (d1 <= best)
        {
            Descend(level - 1, first, p, distance, ref item, ref best);
        }

        if (d2 <= best && d2 < double.PositiveInfinity)
        {
            Descend(level - 1, second, p, distance, ref item, ref best);
        }
    }
}
