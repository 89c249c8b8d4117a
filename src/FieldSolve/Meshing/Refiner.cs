using System.Globalization;
using FieldSolve.Geometry;

namespace FieldSolve.Meshing;

/// <summary>
/// Delaunay refinement. Pieces of outline with a vertex inside their diametral circle are split; bad triangles get a new point on
/// the bisector of their shortest edge, at most at the circumcentre; a point that would enter a piece's diametral circle splits
/// that piece instead. Sources at <see cref="Mesher"/>.
/// </summary>
internal sealed class Refiner
{
    // An equilateral triangle of edge h has circumradius h/sqrt(3). A triangle is too large beyond this many times that; when
    // curing it would split a piece of outline that is short enough already, it is let pass up to the second figure.
    // The first figure makes the number of triangles come out as for equilateral ones of edge h, within some per cent.
    private const double TooLarge = 1.3;
    private const double LetPass = 1.75;
    private const double LongPiece = 1.25;

    // An edge longer than this many times the wanted length is no front to build on.
    private const double LongFront = 1.2;

    private readonly Triangulation mesh;
    private readonly Domain domain;
    private readonly SharpCorners sharp;
    private readonly ISizeField size;
    private readonly MeshOptions options;
    private readonly CancellationToken cancel;
    private readonly double sine;
    private readonly double offCentre;
    private readonly Ring front = new();
    private readonly Ring late = new();
    private readonly IntList pieces = new();
    private bool[] queued = [];

    // Domain edge each vertex lies inside of; -1 for other vertices.
    private int[] edgeOf = [];

    public Refiner(Triangulation mesh, Domain domain, SharpCorners sharp, ISizeField size, MeshOptions options, CancellationToken cancel)
    {
        (this.mesh, this.domain, this.sharp, this.size, this.options, this.cancel) = (mesh, domain, sharp, size, options, cancel);
        double angle = options.MinimumAngleDegrees * Math.PI / 180;
        sine = Math.Sin(angle);
        // A new triangle on a short edge gets an apex angle a little above the limit.
        offCentre = 0.5 / Math.Tan(0.5 * (angle + (2 * Math.PI / 180)));
    }

    public void Run()
    {
        edgeOf = new int[mesh.X.Length];
        Array.Fill(edgeOf, -1);
        for (int s = 0; s < mesh.Pieces.Count; s++)
        {
            if (mesh.Pieces.ToT[s] < 1)
            {
                edgeOf[mesh.Pieces.B[s]] = mesh.Pieces.Edge[s];
            }

            pieces.Add(s);
        }

        for (int t = 0; t < mesh.TriangleCount; t++)
        {
            Enqueue(t);
        }

        SplitPieces();
        int steps = 0;
        while (front.Count > 0 || late.Count > 0)
        {
            bool isLate = front.Count == 0;
            int t = isLate ? late.Dequeue() : front.Dequeue();
            queued[t] = false;
            if (mesh.Inside[t])
            {
                Improve(t, isLate);
            }

            if ((++steps & 0x3ff) == 0)
            {
                cancel.ThrowIfCancellationRequested();
            }
        }
    }

    private void Enqueue(int t)
    {
        if (t >= queued.Length)
        {
            Array.Resize(ref queued, mesh.Inside.Length);
        }

        if (mesh.Inside[t] && !queued[t])
        {
            queued[t] = true;
            front.Enqueue(t);
        }
    }

    // Looks at everything the last operation changed.
    private void Review()
    {
        for (int i = 0; i < mesh.Touched.Count; i++)
        {
            int t = mesh.Touched[i];
            Enqueue(t);
            for (int h = 3 * t; h < (3 * t) + 3; h++)
            {
                if (mesh.Piece[h] >= 0 && mesh.Inside[t] && Encroaches(mesh.Piece[h], mesh.X[mesh.Corner[h]], mesh.Y[mesh.Corner[h]]))
                {
                    pieces.Add(mesh.Piece[h]);
                }
            }
        }

        mesh.Touched.Clear();
        if (mesh.TriangleCount > 4L * options.MaxTriangles + 1000 || mesh.VertexCount > (options.MaxTriangles / 2L) + 1000 + domain.Vertices.Count)
        {
            throw new MeshException(string.Create(CultureInfo.InvariantCulture,
                $"More than {options.MaxTriangles} triangles are needed; the last one was at {mesh.Place(mesh.VertexCount - 1)}. Ask for larger triangles or allow more of them."))
            { IsTooMany = true };
        }
    }

    private bool Encroaches(int piece, double x, double y)
    {
        int a = mesh.Pieces.A[piece], b = mesh.Pieces.B[piece];
        return ((mesh.X[a] - x) * (mesh.X[b] - x)) + ((mesh.Y[a] - y) * (mesh.Y[b] - y)) < 0;
    }

    private void SplitPieces()
    {
        while (pieces.Count > 0)
        {
            int s = pieces.Pop();
            int h = mesh.Pieces.Half[s];
            if (IsEncroachedFrom(h) || IsEncroachedFrom(mesh.Twin[h]))
            {
                Split(s);
            }
        }
    }

    private bool IsEncroachedFrom(int h) =>
        mesh.Inside[h / 3] && Encroaches(mesh.Piece[h], mesh.X[mesh.Corner[h]], mesh.Y[mesh.Corner[h]]);

    private bool Split(int s)
    {
        Pieces p = mesh.Pieces;
        double t = sharp.SplitAt(p.Edge[s], p.FromT[s], p.ToT[s]);
        if (!(t > p.FromT[s] && t < p.ToT[s]))
        {
            return false;
        }

        Point2 m = domain.Edges[p.Edge[s]].Curve.At(t);
        Point2 a = new(mesh.X[p.A[s]], mesh.Y[p.A[s]]), b = new(mesh.X[p.B[s]], mesh.Y[p.B[s]]);
        double room = 1e-14 * Math.Max(Math.Abs(m.X), Math.Abs(m.Y));
        if (Math.Min(Point2.Distance(a, m), Point2.Distance(m, b)) < room)
        {
            return false;
        }

        int v = mesh.SplitPiece(s, m, t);
        if (v < 0)
        {
            mesh.Touched.Clear();
            return false;
        }

        SetEdge(v, p.Edge[s]);
        Review();
        pieces.Add(s);
        pieces.Add(p.Count - 1);
        return true;
    }

    private void SetEdge(int v, int edge)
    {
        if (v >= edgeOf.Length)
        {
            int old = edgeOf.Length;
            Array.Resize(ref edgeOf, mesh.X.Length);
            Array.Fill(edgeOf, -1, old, edgeOf.Length - old);
        }

        edgeOf[v] = edge;
    }

    private void Improve(int t, bool isLate)
    {
        Shape shape = new(mesh, t);
        bool sharpAngle = shape.ShortestSquared < 4 * sine * sine * shape.RadiusSquared && !Unavoidable(shape);
        double wanted = size.At(shape.CentreX, shape.CentreY);
        double large = Math.Sqrt(3 * shape.RadiusSquared) / wanted;
        if (!sharpAngle && large <= TooLarge)
        {
            return;
        }

        Point2 point = NewPoint(shape, sharpAngle, isLate, out bool wait);
        if (wait)
        {
            queued[t] = true;
            late.Enqueue(t);
            return;
        }

        int holds = mesh.WalkInside(t, point.X, point.Y, out int blocker);
        if (holds < 0)
        {
            if (blocker >= 0 && MaySplit(mesh.Piece[blocker], sharpAngle, large) && Split(mesh.Piece[blocker]))
            {
                SplitPieces();
                Enqueue(t);
            }

            return;
        }

        if (mesh.Coincides(holds, point))
        {
            return;
        }

        mesh.FindCavity(holds, point.X, point.Y);
        bool free = true, split = false;
        IntList border = mesh.Border;
        int first = pieces.Count;
        for (int i = 0; i < border.Count; i++)
        {
            int s = mesh.Piece[border[i]];
            if (s >= 0 && Encroaches(s, point.X, point.Y))
            {
                free = false;
                if (MaySplit(s, sharpAngle, large))
                {
                    pieces.Add(s);
                }
            }
        }

        if (free)
        {
            int v = mesh.AddVertex(point.X, point.Y);
            SetEdge(v, -1);
            mesh.FillCavity(v);
            Review();
            SplitPieces();
            return;
        }

        int[] doomed = new int[pieces.Count - first];
        for (int i = doomed.Length - 1; i >= 0; i--)
        {
            doomed[i] = pieces.Pop();
        }

        foreach (int s in doomed)
        {
            split |= Split(s);
        }

        if (split)
        {
            SplitPieces();
            Enqueue(t);
        }
    }

    private bool MaySplit(int piece, bool sharpAngle, double large)
    {
        if (sharpAngle || large > LetPass)
        {
            return true;
        }

        int a = mesh.Pieces.A[piece], b = mesh.Pieces.B[piece];
        double dx = mesh.X[b] - mesh.X[a], dy = mesh.Y[b] - mesh.Y[a];
        return Math.Sqrt((dx * dx) + (dy * dy)) > LongPiece * size.At(mesh.X[a] + (dx / 2), mesh.Y[a] + (dy / 2));
    }

    // A small angle that is, or comes from, a sharp corner of the outline.
    private bool Unavoidable(in Shape shape)
    {
        int p = edgeOf[shape.P], q = edgeOf[shape.Q];
        return p >= 0 && q >= 0
            && sharp.FaceEachOther(p, q, new(mesh.X[shape.P], mesh.Y[shape.P]), new(mesh.X[shape.Q], mesh.Y[shape.Q]));
    }

    private Point2 NewPoint(in Shape shape, bool sharpAngle, bool isLate, out bool wait)
    {
        double shortest = Math.Sqrt(shape.ShortestSquared);
        double toCentre = Math.Sqrt(Math.Max(0, shape.RadiusSquared - (0.25 * shape.ShortestSquared)));
        double h = size.At(shape.MiddleX, shape.MiddleY);
        wait = false;
        double height = Math.Min(toCentre, offCentre * shortest);
        if (shortest > LongFront * h)
        {
            // Not at the front: better wait until the front has come here.
            wait = !isLate && !sharpAngle;
            height = toCentre;
        }
        else
        {
            double up = Math.Min(toCentre, 0.5 * h);
            double ahead = size.At(shape.MiddleX + (up * shape.NormalX), shape.MiddleY + (up * shape.NormalY));
            double equal = Math.Sqrt(Math.Max(0, (ahead * ahead) - (0.25 * shape.ShortestSquared)));
            height = Math.Min(height, Math.Max(equal, 0.75 * shortest));
        }

        return new(shape.MiddleX + (height * shape.NormalX), shape.MiddleY + (height * shape.NormalY));
    }
}
