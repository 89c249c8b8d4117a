using FieldSolve.Geometry;

namespace FieldSolve.Pictures;

/// <summary>Lines of equal value over small straight triangles, joined into long polylines.</summary>
internal static class LevelLines
{
    /// <summary>The lines of one level.</summary>
    /// <param name="mesh">Small triangles.</param>
    /// <param name="values">One per fine node.</param>
    /// <param name="level">The value.</param>
    /// <returns>Polylines in metres; closed ones repeat their first point.</returns>
    public static IReadOnlyList<Point2[]> Of(FineMesh mesh, double[] values, double level)
    {
        // Every crossed triangle joins two crossed edges; an edge belongs to at most two triangles.
        Dictionary<(int, int), int> ends = [];
        List<(int, int)> edges = [];
        List<int> one = [], two = [];
        int End(int a, int b)
        {
            (int, int) key = (Math.Min(a, b), Math.Max(a, b));
            if (!ends.TryGetValue(key, out int end))
            {
                end = ends[key] = edges.Count;
                edges.Add(key);
                one.Add(-1);
                two.Add(-1);
            }

            return end;
        }

        void Join(int from, int to)
        {
            if (one[from] < 0)
            {
                one[from] = to;
            }
            else
            {
                two[from] = to;
            }
        }

        for (int t = 0; t < mesh.Count; t++)
        {
            (int a, int b, int c) = (mesh.Triangles[3 * t], mesh.Triangles[(3 * t) + 1], mesh.Triangles[(3 * t) + 2]);
            bool above = values[a] >= level, bb = values[b] >= level, cc = values[c] >= level;
            if (above == bb && bb == cc)
            {
                continue;
            }

            // The corner that stands alone on its side of the level touches both crossed edges.
            (int alone, int p, int q) = bb == cc ? (a, b, c) : above == cc ? (b, c, a) : (c, a, b);
            int first = End(alone, p), last = End(alone, q);
            Join(first, last);
            Join(last, first);
        }

        Point2 Place(int end)
        {
            (int a, int b) = edges[end];
            double s = (level - values[a]) / (values[b] - values[a]);
            return new(mesh.X[a] + (s * (mesh.X[b] - mesh.X[a])), mesh.Y[a] + (s * (mesh.Y[b] - mesh.Y[a])));
        }

        List<Point2[]> lines = [];
        bool[] used = new bool[edges.Count];
        void Walk(int from)
        {
            List<Point2> line = [];
            int previous = -1, current = from;
            while (current >= 0 && !used[current])
            {
                used[current] = true;
                line.Add(Place(current));
                int next = one[current] != previous ? one[current] : two[current];
                (previous, current) = (current, next);
            }

            if (current == from && line.Count > 2)
            {
                line.Add(line[0]);
            }

            lines.Add([.. line]);
        }

        // Open lines first, from their ends; what is then left is closed.
        for (int pass = 0; pass < 2; pass++)
        {
            for (int end = 0; end < edges.Count; end++)
            {
                if (!used[end] && (pass == 1 || two[end] < 0))
                {
                    Walk(end);
                }
            }
        }

        return lines;
    }

    /// <summary>Drops points that lie closer than a distance to the last one kept; first and last stay.</summary>
    public static Point2[] Thinned(Point2[] line, double distance)
    {
        List<Point2> kept = [line[0]];
        for (int k = 1; k < line.Length; k++)
        {
            if (k == line.Length - 1 || Point2.Distance(kept[^1], line[k]) >= distance)
            {
                kept.Add(line[k]);
            }
        }

        return [.. kept];
    }
}
