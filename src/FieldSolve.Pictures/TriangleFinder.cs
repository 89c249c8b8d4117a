namespace FieldSolve.Pictures;

/// <summary>Finds the small triangle under a point: a grid of boxes, each with the triangles that touch it.</summary>
internal sealed class TriangleFinder
{
    private const double Slack = 1e-9;

    private readonly FineMesh mesh;
    private readonly double x0, y0, cell;
    private readonly int columns, rows;
    private readonly int[] start;
    private readonly int[] member;

    /// <summary>Builds the grid.</summary>
    public TriangleFinder(FineMesh mesh)
    {
        this.mesh = mesh;
        (x0, y0) = (mesh.X.Min(), mesh.Y.Min());
        double width = mesh.X.Max() - x0, height = mesh.Y.Max() - y0;
        cell = Math.Sqrt(width * height / Math.Max(1, mesh.Count / 2));
        columns = Math.Max(1, (int)Math.Ceiling(width / cell));
        rows = Math.Max(1, (int)Math.Ceiling(height / cell));

        int[] count = new int[(columns * rows) + 1];
        Visit((box, _) => count[box + 1]++);
        for (int k = 1; k < count.Length; k++)
        {
            count[k] += count[k - 1];
        }

        start = [.. count];
        member = new int[count[^1]];
        Visit((box, t) => member[count[box]++] = t);
    }

    /// <summary>The triangle under a point with the weights of its corners; false outside the sheet.</summary>
    public bool Find(double x, double y, out int triangle, out double wa, out double wb, out double wc)
    {
        int i = (int)Math.Floor((x - x0) / cell), j = (int)Math.Floor((y - y0) / cell);
        if (i >= 0 && i <= columns && j >= 0 && j <= rows)
        {
            int box = (Math.Min(j, rows - 1) * columns) + Math.Min(i, columns - 1);
            for (int k = start[box]; k < start[box + 1]; k++)
            {
                triangle = member[k];
                (int a, int b, int c) = (mesh.Triangles[3 * triangle], mesh.Triangles[(3 * triangle) + 1], mesh.Triangles[(3 * triangle) + 2]);
                double ux = mesh.X[b] - mesh.X[a], uy = mesh.Y[b] - mesh.Y[a], vx = mesh.X[c] - mesh.X[a], vy = mesh.Y[c] - mesh.Y[a];
                double px = x - mesh.X[a], py = y - mesh.Y[a], twice = (ux * vy) - (uy * vx);
                wb = ((px * vy) - (py * vx)) / twice;
                wc = ((ux * py) - (uy * px)) / twice;
                wa = 1 - wb - wc;
                if (wa >= -Slack && wb >= -Slack && wc >= -Slack)
                {
                    return true;
                }
            }
        }

        (triangle, wa, wb, wc) = (-1, 0, 0, 0);
        return false;
    }

    /// <summary>The value at a point, straight within the small triangle; null outside the sheet.</summary>
    public double? Value(double[] fine, double x, double y) => Find(x, y, out int t, out double wa, out double wb, out double wc)
        ? (wa * fine[mesh.Triangles[3 * t]]) + (wb * fine[mesh.Triangles[(3 * t) + 1]]) + (wc * fine[mesh.Triangles[(3 * t) + 2]])
        : null;

    private void Visit(Action<int, int> visit)
    {
        for (int t = 0; t < mesh.Count; t++)
        {
            (int a, int b, int c) = (mesh.Triangles[3 * t], mesh.Triangles[(3 * t) + 1], mesh.Triangles[(3 * t) + 2]);
            (int i0, int i1) = Span(mesh.X[a], mesh.X[b], mesh.X[c], x0, columns);
            (int j0, int j1) = Span(mesh.Y[a], mesh.Y[b], mesh.Y[c], y0, rows);
            for (int j = j0; j <= j1; j++)
            {
                for (int i = i0; i <= i1; i++)
                {
                    visit((j * columns) + i, t);
                }
            }
        }
    }

    private (int First, int Last) Span(double a, double b, double c, double origin, int boxes)
    {
        double low = (Math.Min(a, Math.Min(b, c)) - origin) / cell, high = (Math.Max(a, Math.Max(b, c)) - origin) / cell;
        return (Math.Clamp((int)Math.Floor(low - Slack), 0, boxes - 1), Math.Clamp((int)Math.Floor(high + Slack), 0, boxes - 1));
    }
}
