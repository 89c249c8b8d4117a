using FieldSolve.Geometry;
using NetTopologySuite.Geometries;
using NetTopologySuite.Index.KdTree;

namespace FieldSolve.Runs;

/// <summary>The points around each point of a map: over them a patch shows where single points drown in noise.</summary>
internal sealed class Neighbourhood
{
    private const int Count = 12;

    /// <summary>Finds the neighbours.</summary>
    /// <param name="places">Metres.</param>
    public Neighbourhood(Point2[] places)
    {
        var tree = new KdTree<List<int>>();
        int count = Math.Min(Count, places.Length);
        double low = places.Min(p => p.X), high = places.Max(p => p.X), bottom = places.Min(p => p.Y), top = places.Max(p => p.Y);
        double reach = 2.5 * Math.Sqrt(Math.Max(high - low, 1e-3 * (top - bottom)) * Math.Max(top - bottom, 1e-3 * (high - low)) * count / places.Length / Math.PI);
        for (int i = 0; i < places.Length; i++)
        {
            // Points at one and the same place share a node of the tree.
            var own = new List<int> { i };
            List<int> kept = tree.Insert(new Coordinate(places[i].X, places[i].Y), own).Data;
            if (kept != own)
            {
                kept.Add(i);
            }
        }

        All =
        [
            .. places.Select(p => tree.Query(new Envelope(p.X - reach, p.X + reach, p.Y - reach, p.Y + reach))
                .SelectMany(node => node.Data).OrderBy(n => Point2.Distance(places[n], p)).ThenBy(n => n).Take(count).ToArray()),
        ];
    }

    /// <summary>Of each point, itself and its nearest, nearest first.</summary>
    public int[][] All { get; }
}
