using FieldSolve.Geometry;

namespace FieldSolve.Fields;

/// <summary>Values of a map between its nodes, on its own quadratic triangles; safe for several threads at once.</summary>
public sealed class MapSampler
{
    // Points this far outside a triangle, in its own coordinates, still count as on it.
    private const double Slack = 1e-7;
    private const int NewtonSteps = 6;

    private readonly FieldMap map;
    private readonly double x0, y0, cell;
    private readonly int columns, rows;
    private readonly int[] start, member;
    private readonly int[] rim;

    /// <summary>Prepares a map.</summary>
    public MapSampler(FieldMap map)
    {
        ArgumentNullException.ThrowIfNull(map);
        this.map = map;
        (Point2 low, Point2 high) = map.Bounds();
        (x0, y0) = (low.X, low.Y);
        cell = Math.Sqrt((high.X - x0) * (high.Y - y0) / Math.Max(1, map.TriangleCount));
        columns = Math.Max(1, (int)Math.Ceiling((high.X - x0) / cell));
        rows = Math.Max(1, (int)Math.Ceiling((high.Y - y0) / cell));
        int[] count = new int[(columns * rows) + 1];
        Visit((box, _) => count[box + 1]++);
        for (int k = 1; k < count.Length; k++)
        {
            count[k] += count[k - 1];
        }

        start = [.. count];
        member = new int[count[^1]];
        Visit((box, t) => member[count[box]++] = t);
        rim = Rim();
    }

    /// <summary>The value at a point.</summary>
    /// <param name="values">One per node of the map.</param>
    /// <param name="x">Metres.</param>
    /// <param name="y">Metres.</param>
    /// <returns>Null outside the sheet.</returns>
    public double? Value(double[] values, double x, double y)
    {
        ArgumentNullException.ThrowIfNull(values);
        if (Find(x, y, out int t, out double b, out double c))
        {
            Span<double> shape = stackalloc double[6];
            QuadraticShape.Values(1 - b - c, b, c, shape);
            double sum = 0;
            for (int i = 0; i < 6; i++)
            {
                sum += shape[i] * values[map.Nodes[(6 * t) + i]];
            }

            return sum;
        }

        return null;
    }

    /// <summary>The node of the rim nearest to a point outside, and how far it is, metres.</summary>
    public (int Node, double Distance) NearestRim(double x, double y)
    {
        (int node, double least) = (rim[0], double.PositiveInfinity);
        foreach (int n in rim)
        {
            double dx = map.X[n] - x, dy = map.Y[n] - y, d = (dx * dx) + (dy * dy);
            (node, least) = d < least ? (n, d) : (node, least);
        }

        return (node, Math.Sqrt(least));
    }

    // Newton's iteration on the quadratic map of the triangle; for straight ones the first step is exact.
    private bool Find(double x, double y, out int triangle, out double b, out double c)
    {
        (triangle, b, c) = (-1, 0, 0);
        int i = (int)Math.Floor((x - x0) / cell), j = (int)Math.Floor((y - y0) / cell);
        if (i < 0 || i > columns || j < 0 || j > rows)
        {
            return false;
        }

        int box = (Math.Min(j, rows - 1) * columns) + Math.Min(i, columns - 1);
        Span<double> shape = stackalloc double[6], slope = stackalloc double[12];
        for (int k = start[box]; k < start[box + 1]; k++)
        {
            ReadOnlySpan<int> nodes = map.Nodes.AsSpan(6 * member[k], 6);
            (b, c) = (1.0 / 3, 1.0 / 3);
            for (int step = 0; step < NewtonSteps; step++)
            {
                QuadraticShape.Values(1 - b - c, b, c, shape);
                QuadraticShape.Slopes(1 - b - c, b, c, slope);
                double px = -x, py = -y, xb = 0, xc = 0, yb = 0, yc = 0;
                for (int n = 0; n < 6; n++)
                {
                    double nx = map.X[nodes[n]], ny = map.Y[nodes[n]];
                    px += shape[n] * nx;
                    py += shape[n] * ny;
                    xb += slope[2 * n] * nx;
                    xc += slope[(2 * n) + 1] * nx;
                    yb += slope[2 * n] * ny;
                    yc += slope[(2 * n) + 1] * ny;
                }

                double det = (xb * yc) - (xc * yb), db = ((px * yc) - (py * xc)) / det, dc = ((xb * py) - (yb * px)) / det;
                (b, c) = (b - db, c - dc);
                if (!(Math.Abs(db) + Math.Abs(dc) > 1e-12))
                {
                    break;
                }

                // Far outside: no need to be exact about it.
                if (b < -1 || c < -1 || b + c > 2)
                {
                    break;
                }
            }

            if (b >= -Slack && c >= -Slack && b + c <= 1 + Slack)
            {
                triangle = member[k];
                return true;
            }
        }

        return false;
    }

    private void Visit(Action<int, int> visit)
    {
        for (int t = 0; t < map.TriangleCount; t++)
        {
            double lowX = double.PositiveInfinity, highX = -lowX, lowY = lowX, highY = -lowX;
            for (int k = 0; k < 6; k++)
            {
                int n = map.Nodes[(6 * t) + k];
                (lowX, highX, lowY, highY) = (Math.Min(lowX, map.X[n]), Math.Max(highX, map.X[n]), Math.Min(lowY, map.Y[n]), Math.Max(highY, map.Y[n]));
            }

            // A curved side bulges beyond its nodes by less than this share of the triangle.
            double room = 0.02 * Math.Max(highX - lowX, highY - lowY);
            int i0 = Index(lowX - room - x0, columns), i1 = Index(highX + room - x0, columns), j0 = Index(lowY - room - y0, rows), j1 = Index(highY + room - y0, rows);
            for (int j = j0; j <= j1; j++)
            {
                for (int i = i0; i <= i1; i++)
                {
                    visit((j * columns) + i, t);
                }
            }
        }
    }

    private int Index(double from, int count) => Math.Clamp((int)Math.Floor(from / cell), 0, count - 1);

    // Nodes of edges that belong to one triangle alone.
    private int[] Rim()
    {
        var seen = new Dictionary<(int, int), (int Count, int Middle)>();
        for (int t = 0; t < map.TriangleCount; t++)
        {
            for (int k = 0; k < 3; k++)
            {
                int a = map.Nodes[(6 * t) + k], b = map.Nodes[(6 * t) + ((k + 1) % 3)];
                (int, int) key = (Math.Min(a, b), Math.Max(a, b));
                seen[key] = seen.TryGetValue(key, out (int Count, int Middle) old) ? (old.Count + 1, old.Middle) : (1, map.Nodes[(6 * t) + 3 + k]);
            }
        }

        return [.. seen.Where(e => e.Value.Count == 1).SelectMany(e => new[] { e.Key.Item1, e.Key.Item2, e.Value.Middle }).Distinct().Order()];
    }
}
