namespace FieldSolve.Sparse;

/// <summary>A piece of the graph, by its places in the arrays of <see cref="GraphPieces"/>.</summary>
/// <param name="Count">Vertices.</param>
/// <param name="Vertex">Place of the first vertex.</param>
/// <param name="Start">Place of the first of Count + 1 neighbour starts.</param>
/// <param name="Edge">Place of the first neighbour.</param>
internal readonly record struct GraphPiece(int Count, int Vertex, int Start, int Edge);

/// <summary>
/// Pieces of a graph, each with its own numbering so that deep pieces sit together in the cache, on one stack: a piece is split
/// into a first part, which takes its place, and a second part, which comes on top.
/// </summary>
internal sealed class GraphPieces(int vertices, int edges, bool places)
{
    private int[] vertex = GC.AllocateUninitializedArray<int>(2 * vertices + 64);
    private int[] start = GC.AllocateUninitializedArray<int>(2 * vertices + 256);
    private int[] neighbour = GC.AllocateUninitializedArray<int>(2 * edges + 64);
    private double[] x = GC.AllocateUninitializedArray<double>(places ? 2 * vertices + 64 : 0);
    private double[] y = GC.AllocateUninitializedArray<double>(places ? 2 * vertices + 64 : 0);

    /// <summary>Row of the pattern of each vertex of a piece.</summary>
    public Span<int> Vertex(GraphPiece p) => vertex.AsSpan(p.Vertex, p.Count);

    /// <summary>Starts of the neighbours in <see cref="Neighbour"/>, one entry more than vertices.</summary>
    public Span<int> Start(GraphPiece p) => start.AsSpan(p.Start, p.Count + 1);

    /// <summary>Neighbours, in the numbering of the piece; to the end of the stack.</summary>
    public Span<int> Neighbour(GraphPiece p) => neighbour.AsSpan(p.Edge);

    /// <summary>Place for more neighbours, from an index on.</summary>
    public Span<int> Room(int from, int count)
    {
        Grow(ref neighbour, from + count);
        return neighbour.AsSpan(from, count);
    }

    /// <summary>First coordinates.</summary>
    public Span<double> X(GraphPiece p) => x.AsSpan(p.Vertex, p.Count);

    /// <summary>Second coordinates.</summary>
    public Span<double> Y(GraphPiece p) => y.AsSpan(p.Vertex, p.Count);

    /// <summary>Splits a piece, which is lost; vertices on neither side are dropped.</summary>
    /// <param name="piece">The piece on top of the stack.</param>
    /// <param name="side">Side of each vertex.</param>
    /// <param name="number">Number of each vertex in its part.</param>
    /// <param name="firstSide">Side that takes the place of the piece.</param>
    /// <param name="firstCount">Vertices of the first part.</param>
    /// <param name="secondSide">Side that comes on top.</param>
    /// <param name="secondCount">Vertices of the second part.</param>
    public (GraphPiece First, GraphPiece Second) Split(
        GraphPiece piece, byte[] side, int[] number, byte firstSide, int firstCount, byte secondSide, int secondCount)
    {
        int top = piece.Edge + Start(piece)[piece.Count];
        var second = new GraphPiece(secondCount, piece.Vertex + piece.Count, piece.Start + piece.Count + 1, top);
        Grow(ref vertex, second.Vertex + secondCount);
        Grow(ref start, second.Start + secondCount + 1);
        Grow(ref neighbour, top + top - piece.Edge);
        if (places)
        {
            Grow(ref x, second.Vertex + secondCount);
            Grow(ref y, second.Vertex + secondCount);
        }
        Copy(piece, second, side, number, secondSide);
        GraphPiece first = piece with { Count = firstCount };
        Copy(piece, first, side, number, firstSide);
        return (first, second);
    }

    // Source and target may start at the same place: nothing is written behind the place that is being read.
    private void Copy(GraphPiece from, GraphPiece to, byte[] side, int[] number, byte which)
    {
        Span<int> fromStart = Start(from), toStart = Start(to), fromEdge = Neighbour(from), toEdge = Neighbour(to);
        Span<int> fromVertex = Vertex(from), toVertex = Vertex(to);
        int v = 0, e = 0, begin = 0;
        for (int i = 0; i < fromVertex.Length; i++)
        {
            int end = fromStart[i + 1];
            if (side[i] == which)
            {
                toVertex[v] = fromVertex[i];
                if (places)
                {
                    x[to.Vertex + v] = x[from.Vertex + i];
                    y[to.Vertex + v] = y[from.Vertex + i];
                }
                foreach (int w in fromEdge[begin..end])
                {
                    if (side[w] == which)
                    {
                        toEdge[e++] = number[w];
                    }
                }
                toStart[++v] = e;
            }
            begin = end;
        }
        toStart[0] = 0;
    }

    private static void Grow<T>(ref T[] array, int length)
    {
        if (array.Length < length)
        {
            Array.Resize(ref array, length + length / 2);
        }
    }
}
