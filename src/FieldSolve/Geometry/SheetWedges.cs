namespace FieldSolve.Geometry;

/// <summary>A wedge of sheet between two edges that meet.</summary>
/// <param name="Vertex">Where they meet.</param>
/// <param name="First">Index of the edge that bounds it clockwise.</param>
/// <param name="FirstAtStart">Whether that edge starts here.</param>
/// <param name="Second">Index of the edge that bounds it counter-clockwise.</param>
/// <param name="SecondAtStart">Whether that edge starts here.</param>
/// <param name="Angle">Radians, 0 to 2 pi.</param>
internal readonly record struct SheetWedge(int Vertex, int First, bool FirstAtStart, int Second, bool SecondAtStart, double Angle);

/// <summary>The angles at which the edges of the sheet and of the pads in it meet.</summary>
internal static class SheetWedges
{
    /// <summary>Wedges below this, radians, cannot be filled with triangles: their sizes would span more than the digits of a number.</summary>
    public const double Cusp = 1e-6;

    private const double Noise = 1e-9;

    /// <summary>Every wedge of sheet, by vertex.</summary>
    public static IEnumerable<SheetWedge> Of(IReadOnlyList<DomainEdge> edges, int vertices)
    {
        List<(int Edge, bool AtStart, Point2 Away)>?[] at = new List<(int, bool, Point2)>?[vertices];
        for (int e = 0; e < edges.Count; e++)
        {
            DomainEdge edge = edges[e];
            (at[edge.From] ??= []).Add((e, true, edge.Curve.Tangent(0)));
            (at[edge.To] ??= []).Add((e, false, -edge.Curve.Tangent(1)));
        }

        for (int v = 0; v < at.Length; v++)
        {
            List<(int Edge, bool AtStart, Point2 Away)>? fan = at[v];
            for (int i = 0; fan != null && i < fan.Count; i++)
            {
                // The sheet lies left of a rim edge that leaves.
                if (edges[fan[i].Edge].IsRim && !fan[i].AtStart)
                {
                    continue;
                }

                // Counter-clockwise from this edge to the next one.
                int next = i;
                double wedge = 2 * Math.PI;
                for (int j = 0; j < fan.Count; j++)
                {
                    double turn = j == i ? 2 * Math.PI : Turn(fan[i].Away, fan[j].Away);
                    if (turn < wedge)
                    {
                        (next, wedge) = (j, turn);
                    }
                }

                yield return new(v, fan[i].Edge, fan[i].AtStart, fan[next].Edge, fan[next].AtStart, wedge);
            }
        }
    }

    // Counter-clockwise angle from a to b, 0 to 2 pi.
    private static double Turn(Point2 a, Point2 b)
    {
        double turn = Math.Atan2(Point2.Cross(a, b), Point2.Dot(a, b));
        return turn >= -Noise ? Math.Max(0, turn) : turn + (2 * Math.PI);
    }
}
