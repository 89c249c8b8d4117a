using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>
/// Inserting points by replacing all triangles whose circumcircle holds the point, not looking across constrained edges:
/// A. Bowyer, Comput. J. 24 (1981) 162; D. F. Watson, Comput. J. 24 (1981) 167.
/// </summary>
internal sealed partial class Triangulation
{
    private readonly IntList cavity = new();
    private readonly IntList border = new();   // half-edges of cavity triangles
    private readonly IntList outer = new();    // the same from outside
    private readonly IntList borderFrom = new();
    private readonly IntList borderTo = new();
    private readonly IntList borderPiece = new();
    private int[] stamp = [];
    private int[] startAt = [];
    private int round;

    /// <summary>Half-edges around the last cavity.</summary>
    public IntList Border => border;

    /// <summary>Triangle that holds the point, walking from a given one through any edges; -1 outside the rectangle.</summary>
    public int Locate(double x, double y, int start)
    {
        int t = start, last = -1;
        while (true)
        {
            int next = -1;
            for (int h = 3 * t; h < (3 * t) + 3; h++)
            {
                // Not going back through the edge just crossed saves a test; the exact sign rules out endless rounds.
                if (Twin[h] != last && Orient(From(h), To(h), x, y) < 0)
                {
                    next = h;
                    break;
                }
            }

            if (next < 0)
            {
                return t;
            }

            if (Twin[next] < 0)
            {
                return -1;
            }

            last = next;
            t = Twin[next] / 3;
        }
    }

    /// <summary>
    /// Walks from a triangle along the straight line to a point. Returns the triangle that holds it; or, when the line first meets
    /// a constrained edge, -1 with that half-edge in <paramref name="blocker"/>; or -1 with blocker -1 when rounding led the walk astray.
    /// </summary>
    public int WalkInside(int start, double x, double y, out int blocker)
    {
        int k = 3 * start;
        int a = Corner[k], b = Corner[k + 1], c = Corner[k + 2];
        double ox = X[a] + (((X[b] - X[a]) + (X[c] - X[a])) / 3), oy = Y[a] + (((Y[b] - Y[a]) + (Y[c] - Y[a])) / 3);
        blocker = -1;
        int exit = -1;
        for (int h = k; h < k + 3; h++)
        {
            if (Orient(From(h), To(h), x, y) < 0
                && (exit < 0 || (Predicates.Orient(ox, oy, x, y, X[From(h)], Y[From(h)]) <= 0 && Predicates.Orient(ox, oy, x, y, X[To(h)], Y[To(h)]) >= 0)))
            {
                exit = h;
            }
        }

        int t = start;
        for (int steps = 0; exit >= 0; steps++)
        {
            if (Piece[exit] >= 0)
            {
                blocker = exit;
                return -1;
            }

            int g = Twin[exit];
            if (g < 0 || steps > TriangleCount)
            {
                return -1;
            }

            // Entered through g; the line leaves to the right of the apex or to its left.
            t = g / 3;
            double side = Predicates.Orient(ox, oy, x, y, X[Corner[g]], Y[Corner[g]]);
            int right = Next(g), left = Previous(g);
            int candidate = side > 0 ? right : left;
            exit = Beyond(candidate, x, y) ? candidate : side == 0 && Beyond(right, x, y) ? right : -1;
        }

        return t;
    }

    private bool Beyond(int h, double x, double y) => Orient(From(h), To(h), x, y) < 0;

    /// <summary>Collects the triangles whose circumcircle holds the point, starting from the one that holds the point.</summary>
    public void FindCavity(int t, double x, double y)
    {
        cavity.Clear();
        border.Clear();
        round++;
        stamp[t] = round;
        cavity.Add(t);
        for (int i = 0; i < cavity.Count; i++)
        {
            int k = 3 * cavity[i];
            for (int h = k; h < k + 3; h++)
            {
                int g = Twin[h];
                if (g >= 0 && Piece[h] < 0)
                {
                    int u = g / 3;
                    if (stamp[u] == round)
                    {
                        continue;
                    }

                    if (InCircle(u, x, y) > 0)
                    {
                        stamp[u] = round;
                        cavity.Add(u);
                        continue;
                    }
                }

                border.Add(h);
            }
        }
    }

    /// <summary>Fills the last cavity with the triangles around vertex v.</summary>
    public void FillCavity(int v)
    {
        if (startAt.Length < X.Length)
        {
            Array.Resize(ref startAt, X.Length);
        }

        outer.Clear();
        borderFrom.Clear();
        borderTo.Clear();
        borderPiece.Clear();
        int n = 0;
        for (int i = 0; i < border.Count; i++)
        {
            int h = border[i];

            // A triangle may have joined the cavity after its edge was first seen as border.
            if (Piece[h] < 0 && Twin[h] >= 0 && stamp[Twin[h] / 3] == round)
            {
                continue;
            }

            outer.Add(Twin[h]);
            borderFrom.Add(From(h));
            borderTo.Add(To(h));
            borderPiece.Add(Piece[h]);
            n++;
        }

        bool inside = Inside[cavity[0]];
        for (int i = 0; i < n; i++)
        {
            int t = i < cavity.Count ? cavity[i] : NewTriangle();
            SetCorners(t, borderFrom[i], borderTo[i], v);
            Inside[t] = inside;
            startAt[borderFrom[i]] = t;
            Join((3 * t) + 2, outer[i], borderPiece[i]);
        }

        for (int i = 0; i < n; i++)
        {
            int t = startAt[borderFrom[i]];
            Join(3 * t, (3 * startAt[borderTo[i]]) + 1, -1);
        }
    }

    /// <summary>
    /// Splits the edge h and its two triangles at vertex v, which must lie inside their quadrangle, then restores the Delaunay
    /// property. The two halves are constrained by the given pieces (-1: not), near the start of h and near its end.
    /// </summary>
    private void SplitEdge(int h, int v, int startPiece, int endPiece)
    {
        int g = Twin[h];
        int t = h / 3, u = g / 3;
        int a = Corner[h], b = From(h), c = To(h), d = Corner[g];
        int ab = Previous(h), ca = Next(h), bd = Next(g), dc = Previous(g);
        (int nab, int sab) = (Twin[ab], Piece[ab]);
        (int nca, int sca) = (Twin[ca], Piece[ca]);
        (int nbd, int sbd) = (Twin[bd], Piece[bd]);
        (int ndc, int sdc) = (Twin[dc], Piece[dc]);
        int t2 = NewTriangle(), u2 = NewTriangle();
        SetCorners(t, a, b, v);
        SetCorners(t2, a, v, c);
        SetCorners(u, d, v, b);
        SetCorners(u2, d, c, v);
        Inside[t2] = Inside[t];
        Inside[u2] = Inside[u];
        Join((3 * t) + 2, nab, sab);
        Join((3 * t2) + 1, nca, sca);
        Join((3 * u) + 1, nbd, sbd);
        Join((3 * u2) + 2, ndc, sdc);
        Join((3 * t) + 1, (3 * t2) + 2, -1);
        Join((3 * u) + 2, (3 * u2) + 1, -1);
        Join(3 * t, 3 * u, startPiece);
        Join(3 * t2, 3 * u2, endPiece);
        suspects.Add((3 * t) + 2);
        suspects.Add((3 * t2) + 1);
        suspects.Add((3 * u) + 1);
        suspects.Add((3 * u2) + 2);
        Legalise();
    }
}
