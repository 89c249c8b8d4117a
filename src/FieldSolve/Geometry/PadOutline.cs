namespace FieldSolve.Geometry;

/// <summary>A pad's polygon, its corners made vertices, and the places where its edges are cut.</summary>
internal sealed class PadOutline
{
    private readonly List<(double T, int Vertex)>[] _cuts;

    /// <param name="contact">Index of the contact.</param>
    /// <param name="isIdeal">Whether the pad is cut out of the sheet.</param>
    /// <param name="corners">Vertices counter-clockwise, at least three, neighbours different.</param>
    /// <param name="vertices">Where the vertices are.</param>
    public PadOutline(int contact, bool isIdeal, int[] corners, VertexSet vertices)
    {
        Contact = contact;
        IsIdeal = isIdeal;
        Corners = [.. corners.Select(v => vertices[v])];
        Edges = OutlinePolygons.Segments(Corners);
        Outline = new([Edges]);
        _cuts = [.. corners.Select((v, i) => new List<(double, int)> { (0, v), (1, corners[(i + 1) % corners.Length]) })];
    }

    public int Contact { get; }

    public bool IsIdeal { get; }

    public IReadOnlyList<Point2> Corners { get; }

    public Curve[] Edges { get; }

    public Outline Outline { get; }

    public void Cut(int edge, int vertex, Point2 at) => _cuts[edge].Add((Edges[edge].Nearest(at), vertex));

    /// <summary>The edges between their cuts, as pairs of vertices, counter-clockwise.</summary>
    public IEnumerable<(int From, int To)> Pieces()
    {
        foreach (List<(double T, int Vertex)> cuts in _cuts)
        {
            int[] stops = [.. cuts.OrderBy(c => c.T).ThenBy(c => c.Vertex).Select(c => c.Vertex).Distinct()];
            for (int i = 1; i < stops.Length; i++)
            {
                yield return (stops[i - 1], stops[i]);
            }
        }
    }
}
