using System.Globalization;
using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>Forcing pieces of outline into the triangulation, and splitting them.</summary>
internal sealed partial class Triangulation
{
    // Edges still crossing the piece that is being forced, as pairs of vertices.
    private readonly Queue<(int P, int Q)> crossing = new();

    /// <summary>
    /// Makes the edge of a piece exist by flipping the edges that cross it, and constrains it: S. W. Sloan, Comput. Struct. 47 (1993) 441.
    /// </summary>
    /// <exception cref="MeshException">The piece passes through a vertex or crosses another piece.</exception>
    public void Force(int piece)
    {
        int a = Pieces.A[piece], b = Pieces.B[piece];
        ForceEdge(a, b);
        int h = Find(a, b);
        if (h < 0 || Piece[h] >= 0)
        {
            throw new MeshException($"Two stretches of the outline run along each other between {Place(a)} and {Place(b)}. Draw that stretch once.");
        }

        Join(h, Twin[h], piece);
    }

    private void ForceEdge(int a, int b)
    {
        if (Find(a, b) >= 0)
        {
            return;
        }

        CollectCrossings(a, b);
        long patience = 100 + (20L * crossing.Count * crossing.Count);
        while (crossing.Count > 0)
        {
            if (patience-- < 0)
            {
                throw new MeshException($"The outline near {Place(a)} is too thin to be resolved. Move its points apart or take the detail off.");
            }

            (int p, int q) = crossing.Dequeue();
            int h = Find(p, q);
            int c = Corner[h], d = Corner[Twin[h]];
            if (Orient(c, p, d) <= 0 || Orient(d, q, c) <= 0)
            {
                crossing.Enqueue((p, q)); // not convex yet
                continue;
            }

            Flip(h);
            suspects.Add((3 * (h / 3)) + 1);
            if (c != a && c != b && d != a && d != b && Orient(a, b, c) * Orient(a, b, d) < 0)
            {
                crossing.Enqueue((c, d));
            }
        }

        if (Find(a, b) < 0)
        {
            throw new MeshException($"The outline cannot be resolved between {Place(a)} and {Place(b)}. Check that its edges meet only at their ends.");
        }
    }

    private void CollectCrossings(int a, int b)
    {
        crossing.Clear();
        int t = At[a], start = t, h;
        while (true)
        {
            int k = 3 * t;
            h = Corner[k] == a ? k : Corner[k + 1] == a ? k + 1 : k + 2;
            double right = Orient(a, b, From(h)), left = Orient(a, b, To(h));
            if (right < 0 && left > 0)
            {
                break;
            }

            if ((right == 0 && Ahead(a, b, From(h))) || (left == 0 && Ahead(a, b, To(h))))
            {
                throw Meets(right == 0 ? From(h) : To(h), a, b);
            }

            t = Twin[Next(h)] / 3;
            if (Twin[Next(h)] < 0 || t == start)
            {
                throw new MeshException($"The outline at {Place(a)} cannot be followed. Check that its coordinates are distinct.");
            }
        }

        while (true)
        {
            if (Piece[h] >= 0)
            {
                throw new MeshException(
                    $"The edge of the outline from {Place(a)} to {Place(b)} crosses the one from {Place(From(h))} to {Place(To(h))}. Edges may meet only at their ends.");
            }

            crossing.Enqueue((From(h), To(h)));
            int g = Twin[h];
            int apex = Corner[g];
            if (apex == b)
            {
                return;
            }

            double side = Orient(a, b, apex);
            if (side == 0)
            {
                throw Meets(apex, a, b);
            }

            // g runs from the left of the line to its right; the line leaves between the apex and the end on the apex's other side.
            h = side > 0 ? Next(g) : Previous(g);
        }
    }

    private bool Ahead(int a, int b, int c) => ((X[c] - X[a]) * (X[b] - X[a])) + ((Y[c] - Y[a]) * (Y[b] - Y[a])) > 0;

    private MeshException Meets(int v, int a, int b) =>
        new($"The point {Place(v)} lies on the edge of the outline from {Place(a)} to {Place(b)}. End the edge there, or move the point off it.");

    public string Place(int v) => string.Create(CultureInfo.InvariantCulture, $"({X[v]:G9}, {Y[v]:G9}) m");

    /// <summary>
    /// Splits a piece at a new point of its curve, which may lie off the chord. Returns the new vertex, or -1 when
    /// the point is not distinct from what is there already.
    /// </summary>
    public int SplitPiece(int piece, Point2 m, double t)
    {
        int h = Pieces.Half[piece];
        int a = Pieces.A[piece], b = Pieces.B[piece];
        int left = Corner[h], right = Corner[Twin[h]];
        bool fits = Orient(left, a, m.X, m.Y) > 0 && Orient(b, left, m.X, m.Y) > 0
            && Orient(a, right, m.X, m.Y) > 0 && Orient(right, b, m.X, m.Y) > 0;
        if (fits)
        {
            int v = AddVertex(m.X, m.Y);
            int second = Halve(piece, v, t);
            SplitEdge(h, v, piece, second);
            return v;
        }

        return SplitBulge(piece, m, t);
    }

    private int Halve(int piece, int v, double t)
    {
        int second = Pieces.Add(v, Pieces.B[piece], Pieces.Edge[piece], t, Pieces.ToT[piece]);
        Pieces.B[piece] = v;
        Pieces.ToT[piece] = t;
        return second;
    }

    // The point lies beyond the triangle next to the chord: insert it over there, then move the strip between the
    // chord and its halves, which holds no vertex, to the other side.
    private int SplitBulge(int piece, Point2 m, double t)
    {
        int h = Pieces.Half[piece];
        int a = Pieces.A[piece], b = Pieces.B[piece];
        double side = Orient(a, b, m.X, m.Y);
        if (side == 0)
        {
            return -1;
        }

        int near = side > 0 ? h : Twin[h];
        int holds = WalkInside(near / 3, m.X, m.Y, out _);
        if (holds < 0 || Coincides(holds, m))
        {
            return -1;
        }

        int v = AddVertex(m.X, m.Y);
        FindCavity(holds, m.X, m.Y);
        FillCavity(v);
        suspects.Clear();
        ForceEdge(a, v);
        ForceEdge(v, b);
        h = Pieces.Half[piece];
        near = side > 0 ? h : Twin[h];
        if (Corner[near] != v)
        {
            throw new MeshException($"The outline near {Place(v)} passes too close to itself to be resolved. Check the arcs there.");
        }

        int strip = near / 3;
        bool other = Inside[Twin[near] / 3];
        int second = Halve(piece, v, t);
        int first = Find(a, v), last = Find(v, b);
        Join(near, Twin[near], -1);
        Join(first, Twin[first], piece);
        Join(last, Twin[last], second);
        Inside[strip] = other;
        Touched.Add(strip);
        suspects.Add(near);
        Legalise();
        return v;
    }

    /// <summary>Whether the point is a corner of the triangle, bit for bit.</summary>
    public bool Coincides(int t, Point2 p)
    {
        for (int k = 3 * t; k < (3 * t) + 3; k++)
        {
            if (X[Corner[k]] == p.X && Y[Corner[k]] == p.Y)
            {
                return true;
            }
        }

        return false;
    }
}
