using System.Runtime.CompilerServices;
using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>
/// A triangulation of a rectangle that grows point by point, with constrained edges (pieces of the outline) that are never
/// flipped away. Flat arrays; half-edge h = 3 t + i is the edge of triangle t opposite its corner i.
/// </summary>
internal sealed partial class Triangulation
{
    public double[] X = [];
    public double[] Y = [];

    /// <summary>A triangle at each vertex.</summary>
    public int[] At = [];

    /// <summary>Three vertices per triangle, counter-clockwise; the entry of a half-edge is the corner opposite it.</summary>
    public int[] Corner = [];

    /// <summary>The same edge seen from the other triangle; -1 on the rectangle's edge.</summary>
    public int[] Twin = [];

    /// <summary>The piece of outline on a half-edge, or -1.</summary>
    public int[] Piece = [];

    /// <summary>Whether each triangle belongs to the sheet.</summary>
    public bool[] Inside = [];

    public int VertexCount;
    public int TriangleCount;

    /// <summary>Pieces of outline.</summary>
    public Pieces Pieces { get; } = new();

    /// <summary>Triangles written since the list was last cleared; a triangle may appear twice.</summary>
    public IntList Touched { get; } = new();

    // Half-edges that may have lost the Delaunay property.
    private readonly IntList suspects = new();

    public static int Next(int h) => h % 3 == 2 ? h - 2 : h + 1;

    public static int Previous(int h) => h % 3 == 0 ? h + 2 : h - 1;

    /// <summary>First vertex of a half-edge, with its triangle to the left.</summary>
    public int From(int h) => Corner[Next(h)];

    /// <summary>Last vertex of a half-edge.</summary>
    public int To(int h) => Corner[Previous(h)];

    public int AddVertex(double x, double y)
    {
        if (VertexCount == X.Length)
        {
            int room = Math.Max(1024, 2 * VertexCount);
            Array.Resize(ref X, room);
            Array.Resize(ref Y, room);
            Array.Resize(ref At, room);
        }

        (X[VertexCount], Y[VertexCount]) = (x, y);
        return VertexCount++;
    }

    public double Orient(int a, int b, int c) => Predicates.Orient(X[a], Y[a], X[b], Y[b], X[c], Y[c]);

    public double Orient(int a, int b, double x, double y) => Predicates.Orient(X[a], Y[a], X[b], Y[b], x, y);

    public double InCircle(int t, double x, double y)
    {
        int a = Corner[3 * t], b = Corner[(3 * t) + 1], c = Corner[(3 * t) + 2];
        return Predicates.InCircle(X[a], Y[a], X[b], Y[b], X[c], Y[c], x, y);
    }

    /// <summary>Half-edge from vertex a to vertex b, or -1.</summary>
    public int Find(int a, int b)
    {
        int h = FindAround(a, b);
        if (h >= 0)
        {
            return h;
        }

        // The turn about a corner of the rectangle ends at its rim.
        int g = FindAround(b, a);
        return g < 0 ? -1 : Twin[g];
    }

    private int FindAround(int a, int b)
    {
        int t = At[a], start = t;
        do
        {
            int k = 3 * t;
            int i = Corner[k] == a ? k : Corner[k + 1] == a ? k + 1 : k + 2;
            if (Corner[Next(i)] == b)
            {
                return Previous(i);
            }

            int across = Twin[Next(i)]; // the edge that ends in a
            if (across < 0)
            {
                break;
            }

            t = across / 3;
        }
        while (t != start);

        return -1;
    }

    /// <summary>
    /// Takes over the points as vertices and puts two triangles over the rectangle from (x0, y0) to (x1, y1), whose corners become
    /// the vertices <paramref name="corners"/> to corners + 3.
    /// </summary>
    public void BeginAt(int corners, IReadOnlyList<Point2> points, double x0, double y0, double x1, double y1)
    {
        foreach (Point2 p in points)
        {
            AddVertex(p.X, p.Y);
        }

        int a = corners, b = a + 1, c = a + 2, d = a + 3;
        (X[a], X[b], X[c], X[d]) = (x0, x1, x1, x0);
        (Y[a], Y[b], Y[c], Y[d]) = (y0, y0, y1, y1);
        int t = NewTriangle(), u = NewTriangle();
        SetCorners(t, a, b, c);
        SetCorners(u, a, c, d);
        for (int k = 0; k < 6; k++)
        {
            (Twin[k], Piece[k]) = (-1, -1);
        }

        Join((3 * t) + 1, (3 * u) + 2, -1);
    }

    private int NewTriangle()
    {
        if (TriangleCount == Inside.Length)
        {
            int room = Math.Max(2048, 2 * TriangleCount);
            Array.Resize(ref Corner, 3 * room);
            Array.Resize(ref Twin, 3 * room);
            Array.Resize(ref Piece, 3 * room);
            Array.Resize(ref Inside, room);
            Array.Resize(ref stamp, room);
        }

        return TriangleCount++;
    }

    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void SetCorners(int t, int a, int b, int c)
    {
        int k = 3 * t;
        Corner[k] = a;
        Corner[k + 1] = b;
        Corner[k + 2] = c;
        At[a] = t;
        At[b] = t;
        At[c] = t;
        Touched.Add(t);
    }

    // The corners of both triangles must be set.
    [MethodImpl(MethodImplOptions.AggressiveInlining)]
    private void Join(int h, int twin, int piece)
    {
        Twin[h] = twin;
        Piece[h] = piece;
        if (twin >= 0)
        {
            Twin[twin] = h;
            Piece[twin] = piece;
        }

        if (piece >= 0)
        {
            Pieces.Half[piece] = From(h) == Pieces.A[piece] ? h : twin;
        }
    }

    /// <summary>Replaces the edge h by the other diagonal of its two triangles, which must form a convex quadrangle.</summary>
    private void Flip(int h)
    {
        int g = Twin[h];
        int t = h / 3, u = g / 3;
        int a = Corner[h], b = From(h), c = To(h), d = Corner[g];
        int ab = Previous(h), ca = Next(h), bd = Next(g), dc = Previous(g);
        (int nab, int sab) = (Twin[ab], Piece[ab]);
        (int nca, int sca) = (Twin[ca], Piece[ca]);
        (int nbd, int sbd) = (Twin[bd], Piece[bd]);
        (int ndc, int sdc) = (Twin[dc], Piece[dc]);
        SetCorners(t, a, b, d);
        SetCorners(u, a, d, c);
        Join(3 * t, nbd, sbd);
        Join((3 * t) + 2, nab, sab);
        Join(3 * u, ndc, sdc);
        Join((3 * u) + 1, nca, sca);
        Join((3 * t) + 1, (3 * u) + 2, -1);
        suspects.Add(3 * t);
        suspects.Add((3 * t) + 2);
        suspects.Add(3 * u);
        suspects.Add((3 * u) + 1);
    }

    private bool IsLegal(int h)
    {
        int g = Twin[h];
        if (g < 0 || Piece[h] >= 0)
        {
            return true;
        }

        int d = Corner[g];
        return InCircle(h / 3, X[d], Y[d]) <= 0;
    }

    /// <summary>Flips suspects until every one is constrained or Delaunay: C. L. Lawson, in Mathematical Software III (1977) 161.</summary>
    private void Legalise()
    {
        while (suspects.Count > 0)
        {
            int h = suspects.Pop();
            if (!IsLegal(h))
            {
                Flip(h);
            }
        }
    }

    /// <summary>Makes the whole triangulation constrained Delaunay.</summary>
    public void LegaliseAll()
    {
        for (int h = 0; h < 3 * TriangleCount; h++)
        {
            suspects.Add(h);
        }

        Legalise();
    }
}
