namespace FieldSolve.Sparse;

/// <summary>
/// Nested dissection: the graph is cut in two by a small set of vertices (ordered last), again and again; the leaves are ordered
/// by constrained minimum degree. A cut lies in a band around the median of a coordinate (straight lines, circles for graded
/// pieces, or the breadth-first rank where there are no coordinates), and is the smallest of that band.
/// </summary>
/// <remarks>A. George, Nested dissection of a regular finite element mesh, SIAM J. Numer. Anal. 10 (1973) 345-363.</remarks>
internal sealed class DissectionOrdering
{
    private const int LeafSize = 256;
    private const int Samples = 512;
    private const int Dense = -1;

    /// <summary>Vertices across the band in which the smallest cut is sought, for a round piece.</summary>
    private const double BandLayers = 6;

    private readonly CancellationToken cancel;
    private readonly int leafSize;
    private readonly DissectionTree tree;
    private readonly bool hasPlaces;
    private readonly VertexCut cut = new();
    private readonly GraphPieces pieces;
    private readonly double[] sample = new double[Samples];

    // Scratch over the vertices of the piece at hand.
    private readonly double[] projection;
    private readonly byte[] side;
    private readonly int[] number;
    private readonly int[] bandVertex;
    private readonly int[] queue;

    private DissectionOrdering(GraphPieces pieces, int size, int leafSize, bool hasPlaces, DissectionTree tree, CancellationToken cancel)
    {
        this.cancel = cancel;
        this.leafSize = leafSize;
        this.hasPlaces = hasPlaces;
        this.pieces = pieces;
        this.tree = tree;
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
        int[] start = pattern.Start, column = pattern.Column;

        // Rows coupled to very many others (a contact) would spoil every cut: they go last.
        long dense = Math.Max(100, 10L * pattern.Count / Math.Max(n, 1));
        int[] number = new int[n];
        int sparse = 0;
        for (int i = 0; i < n; i++)
        {
            number[i] = start[i + 1] - start[i] > dense ? Dense : sparse++;
        }
        if (sparse == 0)
        {
            return RowsByDegree(pattern, number);
        }
        int[] followers = Followers.Find(pattern, number, cancel);
        cancel.ThrowIfCancellationRequested();
        int kept = 0;
        for (int i = 0; i < n; i++)
        {
            number[i] = number[i] == Dense || number[i] == Followers.Mark ? number[i] : kept++;
        }

        bool hasPlaces = x.Length == n;
        var pieces = new GraphPieces(kept, kept < sparse ? pattern.Count / 3 : pattern.Count, hasPlaces);
        var top = new GraphPiece(kept, 0, 0, 0);
        Span<int> vertex = pieces.Vertex(top), starts = pieces.Start(top);
        starts[0] = 0;
        int count = 0, edges = 0;
        for (int i = 0; i < n; i++)
        {
            if (number[i] < 0)
            {
                continue;
            }
            vertex[count] = i;
            if (hasPlaces)
            {
                pieces.X(top)[count] = x[i];
                pieces.Y(top)[count] = y[i];
            }
            Span<int> neighbour = pieces.Room(edges, start[i + 1] - start[i]);
            int degree = 0;
            for (int k = start[i]; k < start[i + 1]; k++)
            {
                int w = column[k];
                if (w != i && number[w] >= 0)
                {
                    neighbour[degree++] = number[w];
                }
            }
            edges += degree;
            starts[++count] = edges;
        }
        var tree = new DissectionTree(n);
        int leafSize = Math.Max(16, (int)((long)LeafSize * kept / sparse));
        new DissectionOrdering(pieces, kept, leafSize, hasPlaces, tree, cancel).Dissect(top, -1);
        cancel.ThrowIfCancellationRequested();
        tree.Follow(pattern, followers, number);
        cancel.ThrowIfCancellationRequested();
        int[] order = RowsByDegree(pattern, number);
        tree.Fill(pattern, order, cancel);
        return order;
    }

    // An order with the dense rows at its end, fewest neighbours first; the rest is still open.
    private static int[] RowsByDegree(SymmetricPattern pattern, int[] number)
    {
        int[] order = new int[pattern.Size];
        int[] rows = [.. Enumerable.Range(0, order.Length).Where(i => number[i] == Dense).OrderBy(i => pattern.Start[i + 1] - pattern.Start[i])];
        rows.CopyTo(order.AsSpan(order.Length - rows.Length));
        return order;
    }

    private void Dissect(GraphPiece piece, int parent)
    {
        cancel.ThrowIfCancellationRequested();
        int n = piece.Count;
        Span<int> vertex = pieces.Vertex(piece);
        if (n <= leafSize || !(hasPlaces && SplitByPlace(piece) || SplitByRank(piece)))
        {
            tree.AddLeaf(parent, vertex);
            return;
        }
        int node = tree.AddCut(parent), before = 0, behind = 0;
        for (int i = 0; i < n; i++)
        {
            byte s = side[i];
            number[i] = s == VertexCut.Before ? before : behind;
            before += s == VertexCut.Before ? 1 : 0;
            behind += s == VertexCut.Behind ? 1 : 0;
            if (s == VertexCut.Cut)
            {
                tree.Put(vertex[i], node);
            }
        }
        cancel.ThrowIfCancellationRequested();
        (GraphPiece a, GraphPiece b) = pieces.Split(piece, side, number, VertexCut.Before, before, VertexCut.Behind, behind);
        Dissect(b, node);
        Dissect(a, node);
        tree.Close(node);
    }

    // The straight line or circle that cuts fewest vertices, judged on a sample, then the smallest cut of its band.
    private bool SplitByPlace(GraphPiece piece)
    {
        int n = piece.Count;
        ReadOnlySpan<double> px = pieces.X(piece), py = pieces.Y(piece);
        double cx = Quantile(px, py, new(1, 0, 0, 0, 0), 0.5), cy = Quantile(px, py, new(0, 1, 0, 0, 0), 0.5);
        long least = long.MaxValue;
        Direction best = default;
        ReadOnlySpan<Direction> candidates =
            [new(1, 0, 0, cx, cy), new(0, 1, 0, cx, cy), new(1, 1, 0, cx, cy), new(1, -1, 0, cx, cy), new(0, 0, 1, cx, cy)];
        foreach (Direction candidate in candidates)
        {
            long crossing = Crossing(piece, candidate, Quantile(px, py, candidate, 0.5), least);
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
        cancel.ThrowIfCancellationRequested();
        double half = HalfBand(n);
        return CutBand(piece, Quantile(px, py, best, 0.5 - half), Quantile(px, py, best, 0.5 + half));
    }

    // Without coordinates: rank in a breadth-first sweep from a vertex at the rim, one component after the other.
    private bool SplitByRank(GraphPiece piece)
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
    private int Sweep(GraphPiece piece, int from)
    {
        ReadOnlySpan<int> start = pieces.Start(piece), neighbour = pieces.Neighbour(piece);
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
                foreach (int w in neighbour[start[v]..start[v + 1]])
                {
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

    private static double HalfBand(int n) => 0.5 * Math.Clamp(BandLayers / Math.Sqrt(n), 0.07, 0.35);

    // Sets side[]: vertices with a projection below low come before, above high behind; the smallest cut of the rest parts them.
    private bool CutBand(GraphPiece piece, double low, double high)
    {
        int n = piece.Count, before = 0, behind = 0, band = 0, bandEdges = 0;
        ReadOnlySpan<int> start = pieces.Start(piece), neighbour = pieces.Neighbour(piece);
        Span<byte> sides = side.AsSpan(0, n);
        Span<int> numbers = number.AsSpan(0, n);
        for (int i = 0; i < n; i++)
        {
            double p = projection[i];
            int isBefore = p < low ? 1 : 0, isBehind = p > high ? 1 : 0;
            sides[i] = (byte)(VertexCut.Cut - 2 * isBefore - isBehind);
            before += isBefore;
            behind += isBehind;
        }
        if (before == 0 || behind == 0)
        {
            return false;
        }
        // A vertex that reaches across the whole band belongs to the band.
        for (int i = 0; i < n; i++)
        {
            if (sides[i] == VertexCut.Before)
            {
                foreach (int w in neighbour[start[i]..start[i + 1]])
                {
                    if (sides[w] == VertexCut.Behind)
                    {
                        sides[i] = VertexCut.Cut;
                        before--;
                        break;
                    }
                }
            }
            if (sides[i] == VertexCut.Cut)
            {
                numbers[i] = band;
                bandVertex[band++] = i;
                bandEdges += start[i + 1] - start[i];
            }
        }
        cut.Reserve(band, bandEdges);
        int edges = 0;
        int[] cutStart = cut.Start, cutNeighbour = cut.Neighbour;
        for (int b = 0; b < band; b++)
        {
            int i = bandVertex[b];
            int touches = 0;
            cutStart[b] = edges;
            foreach (int w in neighbour[start[i]..start[i + 1]])
            {
                if (sides[w] == VertexCut.Cut)
                {
                    cutNeighbour[edges++] = numbers[w];
                }
                else
                {
                    touches |= 1 << sides[w];
                }
            }
            cut.Touches[b] = (byte)touches;
        }
        cutStart[band] = edges;
        cancel.ThrowIfCancellationRequested();
        cut.Solve(band, before, behind);
        int partBefore = before, partBehind = behind;
        for (int b = 0; b < band; b++)
        {
            byte s = cut.Side[b];
            sides[bandVertex[b]] = s;
            partBefore += s == VertexCut.Before ? 1 : 0;
            partBehind += s == VertexCut.Behind ? 1 : 0;
        }
        // Lopsided parts (ties in the coordinate, a graph that is nearly complete) would not pay, and would nest deeply.
        return Math.Min(partBefore, partBehind) >= n / 16;
    }

    private double Quantile(ReadOnlySpan<double> px, ReadOnlySpan<double> py, Direction direction, double fraction)
    {
        int m = Math.Min(px.Length, Math.Clamp(px.Length / 4, 64, Samples));
        for (int k = 0; k < m; k++)
        {
            int i = Scattered(k, px.Length);
            sample[k] = direction.Of(px[i], py[i]);
        }
        return QuickSelect.Of(sample.AsSpan(0, m), Math.Clamp((int)(fraction * m), 0, m - 1));
    }

    // Vertices below the value with a neighbour at or above it, counted on a sample of the vertices, up to a limit.
    private long Crossing(GraphPiece piece, Direction direction, double middle, long limit)
    {
        int n = piece.Count, m = Math.Min(n, Math.Clamp(n / 2, 512, 4096));
        long count = 0;
        ReadOnlySpan<double> px = pieces.X(piece), py = pieces.Y(piece);
        ReadOnlySpan<int> start = pieces.Start(piece), neighbour = pieces.Neighbour(piece);
        for (int k = 0; k < m && count < limit; k++)
        {
            int i = m == n ? k : Scattered(k, n);
            if (direction.Of(px[i], py[i]) >= middle)
            {
                continue;
            }
            foreach (int w in neighbour[start[i]..start[i + 1]])
            {
                if (direction.Of(px[w], py[w]) >= middle)
                {
                    count++;
                    break;
                }
            }
        }
        return count;
    }

    // Spreads k = 0, 1, 2, … evenly over 0 .. n - 1 by multiples of the golden ratio: equal steps would beat with the numbering of a grid.
    private static int Scattered(int k, int n) => (int)(((ulong)((uint)k * 2654435769u) * (ulong)n) >> 32);

    // a x + b y, or the squared distance from (cx, cy).
    private readonly record struct Direction(double A, double B, double Round, double Cx, double Cy)
    {
        public double Of(double x, double y) =>
            Round == 0 ? A * x + B * y : (x - Cx) * (x - Cx) + (y - Cy) * (y - Cy);
    }
}
