using FieldSolve.Geometry;

namespace FieldSolve.Pictures;

/// <summary>
/// Lines along a vector field with roughly even spacing, after B. Jobard and W. Lefer, "Creating evenly-spaced streamlines of
/// arbitrary density", Visualization in Scientific Computing '97, 43-56: a line starts only where no other is nearer than the
/// spacing and stops when it comes nearer than a share of it. Seeds stand on a fixed hexagonal grid, nearest to the middle first; none where the
/// sheet is almost at rest.
/// </summary>
internal sealed class Streamlines
{
    private const double Nearest = 0.45, Tightest = 0.12, Stagnant = 0.03;
    private const int MostSteps = 4000;

    private readonly FineMesh mesh;
    private readonly TriangleFinder finder;
    private readonly double[] vx, vy;
    private readonly double spacing, tiny, weak;
    private readonly Dictionary<(int, int), List<Point2>> taken = [];

    private Streamlines(FineMesh mesh, TriangleFinder finder, double[] vx, double[] vy, double spacing)
    {
        (this.mesh, this.finder, this.vx, this.vy, this.spacing) = (mesh, finder, vx, vy, spacing);
        double largest = 0;
        for (int i = 0; i < vx.Length; i++)
        {
            largest = Math.Max(largest, Math.Abs(vx[i]) + Math.Abs(vy[i]));
        }

        tiny = 1e-9 * largest;
        (double flow, double all) = (0, 0);
        for (int t = 0; t < mesh.Count; t++)
        {
            (int a, int b, int c) = (mesh.Triangles[3 * t], mesh.Triangles[(3 * t) + 1], mesh.Triangles[(3 * t) + 2]);
            double area = Math.Abs(((mesh.X[b] - mesh.X[a]) * (mesh.Y[c] - mesh.Y[a])) - ((mesh.Y[b] - mesh.Y[a]) * (mesh.X[c] - mesh.X[a])));
            flow += area * new Point2(vx[a] + vx[b] + vx[c], vy[a] + vy[b] + vy[c]).Length / 3;
            all += area;
        }

        weak = Stagnant * flow / all;
    }

    /// <summary>The lines, each in the direction of the field.</summary>
    /// <param name="mesh">Small triangles.</param>
    /// <param name="finder">Point location on them.</param>
    /// <param name="vx">x component, one per fine node.</param>
    /// <param name="vy">y component, one per fine node.</param>
    /// <param name="spacing">Wanted distance between lines, metres.</param>
    public static IReadOnlyList<Point2[]> Of(FineMesh mesh, TriangleFinder finder, double[] vx, double[] vy, double spacing) =>
        new Streamlines(mesh, finder, vx, vy, spacing).Draw();

    private List<Point2[]> Draw()
    {
        double x0 = mesh.X.Min(), x1 = mesh.X.Max(), y0 = mesh.Y.Min(), y1 = mesh.Y.Max();
        Point2 middle = new((x0 + x1) / 2, (y0 + y1) / 2);
        double step = spacing / 2, row = step * Math.Sqrt(3) / 2;
        List<Point2> seeds = [];
        for (int j = 0; y0 + (j * row) <= y1; j++)
        {
            for (int i = 0; x0 + (i * step) <= x1; i++)
            {
                seeds.Add(new(x0 + ((i + (j % 2 * 0.5)) * step), y0 + (j * row)));
            }
        }

        List<Point2[]> lines = [];
        foreach (Point2 seed in seeds.OrderBy(s => Point2.Distance(s, middle)))
        {
            if (IsFree(seed, spacing) && Strength(seed) > weak)
            {
                List<Point2> back = Follow(seed, -1), line = [.. Enumerable.Reverse(back), seed, .. Follow(seed, 1)];
                double length = 0;
                for (int k = 1; k < line.Count; k++)
                {
                    length += Point2.Distance(line[k - 1], line[k]);
                }

                if (length > 1.5 * spacing)
                {
                    line.ForEach(Take);
                    lines.Add([.. line]);
                }
            }
        }

        return lines;
    }

    // Runge-Kutta of fourth order on the unit direction, in steps well below the spacing.
    private List<Point2> Follow(Point2 from, int sign)
    {
        double strength = Strength(from);

        // Tubes between lines narrow as the current grows denser, so lines may draw together on their way to a contact.
        double Room(Point2 p) => Nearest * spacing * Math.Clamp(strength / Strength(p), Tightest, 1);

        List<Point2> line = [];
        double h = sign * spacing / 6;
        Point2 at = from;
        for (int k = 0; k < MostSteps; k++)
        {
            if (Direction(at) is not { } k1 || Direction(at + (h / 2 * k1)) is not { } k2
                || Direction(at + (h / 2 * k2)) is not { } k3 || Direction(at + (h * k3)) is not { } k4)
            {
                break;
            }

            Point2 next = at + (h / 6 * (k1 + (2 * k2) + (2 * k3) + k4));
            if (Direction(next) is null || !IsFree(next, Room(next)) || (k > 12 && Point2.Distance(next, from) < Math.Abs(h)))
            {
                break;
            }

            line.Add(next);
            at = next;
        }

        // A last short step up to the rim, by halving.
        for (double part = 0.5; part > 0.05 && line.Count < MostSteps; part /= 2)
        {
            if (Direction(at) is { } d && Direction(at + (part * h * d)) is not null && IsFree(at + (part * h * d), Room(at + (part * h * d))))
            {
                at += part * h * d;
                line.Add(at);
            }
        }

        return line;
    }

    private Point2? Direction(Point2 p) => Vector(p) is { } v && v.Length > tiny ? 1 / v.Length * v : null;

    private double Strength(Point2 p) => Math.Max(tiny, Vector(p)?.Length ?? 0);

    private Point2? Vector(Point2 p)
    {
        if (!finder.Find(p.X, p.Y, out int t, out double wa, out double wb, out double wc))
        {
            return null;
        }

        (int a, int b, int c) = (mesh.Triangles[3 * t], mesh.Triangles[(3 * t) + 1], mesh.Triangles[(3 * t) + 2]);
        return new((wa * vx[a]) + (wb * vx[b]) + (wc * vx[c]), (wa * vy[a]) + (wb * vy[b]) + (wc * vy[c]));
    }

    private (int I, int J) Box(Point2 p) => ((int)Math.Floor(p.X / spacing), (int)Math.Floor(p.Y / spacing));

    private void Take(Point2 p)
    {
        if (!taken.TryGetValue(Box(p), out List<Point2>? list))
        {
            taken[Box(p)] = list = [];
        }

        list.Add(p);
    }

    private bool IsFree(Point2 p, double distance)
    {
        (int i, int j) = Box(p);
        for (int dj = -1; dj <= 1; dj++)
        {
            for (int di = -1; di <= 1; di++)
            {
                if (taken.TryGetValue((i + di, j + dj), out List<Point2>? list))
                {
                    foreach (Point2 q in list)
                    {
                        if (Point2.Distance(p, q) < distance)
                        {
                            return false;
                        }
                    }
                }
            }
        }

        return true;
    }
}
