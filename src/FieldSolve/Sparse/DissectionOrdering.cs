namespace FieldSolve.Sparse;

/// <summary>
/// Nested dissection: the graph is cut in two by a small set of vertices (ordered last), again and again; the leaves are ordered
/// by constrained minimum degree. A cut lies in a band around the median of a coordinate (straight lines, circles for graded
/// pieces, or the breadth-first rank where there are no coordinates), and is the smallest of that band.
/// </summary>
/// <remarks>A. George, Nested dissection of a regular finite element mesh, SIAM J. Numer. Anal. 10 (1973) 345-363.</remarks>
internal sealed class DissectionOrdering
{
    private const int LeafSize = 128;
    private const int Samples = 512;

    private readonly SymmetricPattern pattern;
    private readonly CancellationToken cancel;
    private readonly int[] order;
    private readonly bool hasPlaces;
    private readonly LeafOrdering leaves;
    private readonly VertexCut cut = new();
    private readonly double[] sample = new double[Samples];

    // Scratch over the vertices of the piece at hand.
    private readonly double[] projection;
    private readonly byte[] side;
    private readonly int[] number;
    private readonly int[] bandVertex;
    private readonly int[] queue;

    private DissectionOrdering(SymmetricPattern pattern, int size, bool hasPlaces, int[] order, CancellationToken cancel)
    {
        this.pattern = pattern;
        this.cancel = cancel;
        this.order = order;
        this.hasPlaces = hasPlaces;
        leaves = new LeafOrdering(pattern);
        projection = new double[size];
        side = new byte[size];
        number = new int[size];
        bandVertex = new int[size];
        queue = new int[size];
    }

    /// <summary>Elimination order: entry k is the row eliminated as k-th.</summary>
    /// <param name="pattern">The graph.</param>
    /// <param name="x">First coordinate of each row, or empty.</param>
    /// <param name="y">Second coordinate of each row, or empty.</param>
    /// <param name="cancel">Stops the work.</param>
    public static int[] Order(SymmetricPattern pattern, ReadOnlySpan<double> x, ReadOnlySpan<double> y, CancellationToken cancel)
    {
        int n = pattern.Size;
        int[] order = new int[n];
        int[] start = pattern.Start, column = pattern.Column;

        // Rows coupled to very many others (a contact) would spoil every cut: they go last.
        long dense = Math.Max(100, 10L * pattern.Count / Math.Max(n, 1));
        int[] number = new int[n];
        int sparse = 0, last = n;
        for (int i = 0; i < n; i++)
        {
            number[i] = start[i + 1] - start[i] > dense ? -1 : sparse++;
        }
        if (sparse < n)
        {
            int[] rows = [.. Enumerable.Range(0, n).Where(i => number[i] < 0).OrderBy(i => start[i + 1] - start[i])];
            rows.CopyTo(order.AsSpan(sparse));
            last = sparse;
        }
        if (last == 0)
        {
            return order;
        }

        bool hasPlaces = x.Length == n && y.Length == n && n > 0;
        var top = new Piece(sparse, pattern.Count, hasPlaces);
        int count = 0, edges = 0;
        for (int i = 0; i < n; i++)
        {
            if (number[i] < 0)
            {
                continue;
            }
            top.Vertex[count] = i;
            if (hasPlaces)
            {
                top.X[count] = x[i];
                top.Y[count] = y[i];
            }
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                int w = column[k];
                if (w != i && number[w] >= 0)
                {
                    top.Neighbour[edges++] = number[w];
                }
            }
            top.Start[++count] = edges;
        }
        new DissectionOrdering(pattern, sparse, hasPlaces, order, cancel).Dissect(top, 0);
        return order;
    }

    private void Dissect(Piece piece, int first)
    {
        cancel.ThrowIfCancellationRequested();
        int n = piece.Count;
        if (n <= LeafSize || !(hasPlaces && SplitByPlace(piece) || SplitByRank(piece)))
        {
            piece.Vertex.AsSpan(0, n).CopyTo(order.AsSpan(first));
            leaves.Order(order.AsSpan(first, n));
            return;
        }
        int before = 0, behind = 0, inCut = 0, edgesBefore = 0, edgesBehind = 0;
        for (int i = 0; i < n; i++)
        {
            int edges = piece.Start[i + 1] - piece.Start[i];
            switch (side[i])
            {
                case VertexCut.Before:
                    number[i] = before++;
                    edgesBefore += edges;
                    break;
                case VertexCut.Behind:
                    number[i] = behind++;
                    edgesBehind += edges;
                    break;
                default:
                    inCut++;
                    break;
            }
        }
        int place = first + before + behind;
        for (int i = 0; i < n; i++)
        {
            if (side[i] == VertexCut.Cut)
            {
                order[place++] = piece.Vertex[i];
            }
        }
        Piece a = Part(piece, VertexCut.Before, before, edgesBefore), b = Part(piece, VertexCut.Behind, behind, edgesBehind);
        piece.Release();
        Dissect(a, first);
        Dissect(b, first + before);
    }

    private Piece Part(Piece piece, byte which, int count, int edges)
    {
        var part = new Piece(count, edges, hasPlaces);
        int v = 0, e = 0;
        int[] start = piece.Start, neighbour = piece.Neighbour;
        for (int i = 0; i < piece.Count; i++)
        {
            if (side[i] != which)
            {
                continue;
            }
            part.Vertex[v] = piece.Vertex[i];
            if (hasPlaces)
            {
                part.X[v] = piece.X[i];
                part.Y[v] = piece.Y[i];
            }
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                int w = neighbour[k];
                if (side[w] == which)
                {
                    part.Neighbour[e++] = number[w];
                }
            }
            part.Start[++v] = e;
        }
        return part;
    }

    // The straight line or circle that cuts fewest vertices, judged on a sample, then the smallest cut of its band.
    private bool SplitByPlace(Piece piece)
    {
        int n = piece.Count;
        double[] px = piece.X, py = piece.Y;
        double cx = Median(px, n), cy = Median(py, n);
        long least = long.MaxValue;
        Direction best = default;
        ReadOnlySpan<Direction> candidates =
            [new(1, 0, 0, cx, cy), new(0, 1, 0, cx, cy), new(1, 1, 0, cx, cy), new(1, -1, 0, cx, cy), new(0, 0, 1, cx, cy)];
        foreach (Direction candidate in candidates)
        {
            double middle = Quantile(piece, candidate, 0.5);
            long crossing = Crossing(piece, candidate, middle);
            if (crossing < least)
            {
                least = crossing;
                best = candidate;
            }
        }
        for (int i = 0; i < n; i++)
        {
            projection[i] = best.Of(px[i], py[i]);
        }
        double half = HalfBand(n);
        return CutBand(piece, Quantile(piece, best, 0.5 - half), Quantile(piece, best, 0.5 + half));
    }

    // Without coordinates: rank in a breadth-first sweep from a vertex at the rim, one component after the other.
    private bool SplitByRank(Piece piece)
    {
        int n = piece.Count;
        int from = 0;
        for (int sweep = 0; sweep < 3; sweep++)
        {
            from = Sweep(piece, from);
        }
        double half = HalfBand(n) * n;
        return CutBand(piece, 0.5 * n - half, 0.5 * n + half);
    }

    // Ranks all vertices; returns the last vertex of the first component.
    private int Sweep(Piece piece, int from)
    {
        int n = piece.Count, head = 0, tail = 0, far = from;
        projection.AsSpan(0, n).Fill(-1);
        for (int seed = -1; seed < n; seed++)
        {
            int root = seed < 0 ? from : seed;
            if (projection[root] >= 0)
            {
                continue;
            }
            projection[root] = tail;
            queue[tail++] = root;
            while (head < tail)
            {
                int v = queue[head++];
                for (int k = piece.Start[v]; k < piece.Start[v + 1]; k++)
                {
                    int w = piece.Neighbour[k];
                    if (projection[w] < 0)
                    {
                        projection[w] = tail;
                        queue[tail++] = w;
                    }
                }
            }
            if (seed < 0)
            {
                far = queue[tail - 1];
            }
        }
        return far;
    }

    private static double HalfBand(int n) => 0.5 * Math.Clamp(12 / Math.Sqrt(n), 0.08, 0.4);

    // Sets side[]: vertices with a projection below low come before, above high behind; the smallest cut of the rest parts them.
    private bool CutBand(Piece piece, double low, double high)
    {
        int n = piece.Count, before = 0, behind = 0, band = 0, bandEdges = 0;
        int[] start = piece.Start, neighbour = piece.Neighbour;
        for (int i = 0; i < n; i++)
        {
            byte s = projection[i] < low ? VertexCut.Before : projection[i] > high ? VertexCut.Behind : VertexCut.Cut;
            side[i] = s;
            before += s == VertexCut.Before ? 1 : 0;
            behind += s == VertexCut.Behind ? 1 : 0;
        }
        if (before == 0 || behind == 0)
        {
            return false;
        }
        // A vertex that reaches across the whole band belongs to the band.
        for (int i = 0; i < n; i++)
        {
            if (side[i] == VertexCut.Before)
            {
                for (int k = start[i]; k < start[i + 1]; k++)
                {
                    if (side[neighbour[k]] == VertexCut.Behind)
                    {
                        side[i] = VertexCut.Cut;
                        before--;
                        break;
                    }
                }
            }
            if (side[i] == VertexCut.Cut)
            {
                number[i] = band;
                bandVertex[band++] = i;
                bandEdges += start[i + 1] - start[i];
            }
        }
        cut.Reserve(band, bandEdges);
        int edges = 0;
        for (int b = 0; b < band; b++)
        {
            int i = bandVertex[b];
            byte touches = 0;
            cut.Start[b] = edges;
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                int w = neighbour[k];
                switch (side[w])
                {
                    case VertexCut.Before:
                        touches |= 1;
                        break;
                    case VertexCut.Behind:
                        touches |= 2;
                        break;
                    default:
                        cut.Neighbour[edges++] = number[w];
                        break;
                }
            }
            cut.Touches[b] = touches;
        }
        cut.Start[band] = edges;
        cut.Solve(band, before, behind);
        int partBefore = before, partBehind = behind;
        for (int b = 0; b < band; b++)
        {
            byte s = cut.Side[b];
            side[bandVertex[b]] = s;
            partBefore += s == VertexCut.Before ? 1 : 0;
            partBehind += s == VertexCut.Behind ? 1 : 0;
        }
        // Lopsided parts (ties in the coordinate, a graph that is nearly complete) would not pay, and would nest deeply.
        return Math.Min(partBefore, partBehind) >= n / 16;
    }

    private double Median(double[] values, int n)
    {
        int step = Math.Max(1, n / Samples), m = 0;
        for (int i = 0; i < n && m < Samples; i += step)
        {
            sample[m++] = values[i];
        }
        Array.Sort(sample, 0, m);
        return sample[m / 2];
    }

    private double Quantile(Piece piece, Direction direction, double fraction)
    {
        int step = Math.Max(1, piece.Count / Samples), m = 0;
        for (int i = 0; i < piece.Count && m < Samples; i += step)
        {
            sample[m++] = direction.Of(piece.X[i], piece.Y[i]);
        }
        Array.Sort(sample, 0, m);
        return sample[Math.Clamp((int)(fraction * m), 0, m - 1)];
    }

    // Vertices below the value with a neighbour at or above it, counted on a sample of the vertices.
    private static long Crossing(Piece piece, Direction direction, double middle)
    {
        int step = Math.Max(1, piece.Count / 4096);
        long count = 0;
        double[] px = piece.X, py = piece.Y;
        for (int i = 0; i < piece.Count; i += step)
        {
            if (direction.Of(px[i], py[i]) >= middle)
            {
                continue;
            }
            for (int k = piece.Start[i]; k < piece.Start[i + 1]; k++)
            {
                int w = piece.Neighbour[k];
                if (direction.Of(px[w], py[w]) >= middle)
                {
                    count++;
                    break;
                }
            }
        }
        return count;
    }

    // a x + b y, or the squared distance from (cx, cy).
    private readonly record struct Direction(double A, double B, double Round, double Cx, double Cy)
    {
        public double Of(double x, double y) =>
            Round == 0 ? A * x + B * y : (x - Cx) * (x - Cx) + (y - Cy) * (y - Cy);
    }

    /// <summary>A piece of the graph with its own numbering, so that deep pieces sit together in the cache.</summary>
    private sealed class Piece(int count, int edges, bool places)
    {
        public int Count { get; } = count;
        public int[] Vertex { get; private set; } = new int[count];
        public int[] Start { get; private set; } = new int[count + 1];
        public int[] Neighbour { get; private set; } = new int[edges];
        public double[] X { get; private set; } = places ? new double[count] : [];
        public double[] Y { get; private set; } = places ? new double[count] : [];

        public void Release()
        {
            Vertex = [];
            Start = [];
            Neighbour = [];
            X = [];
            Y = [];
        }
    }
}
