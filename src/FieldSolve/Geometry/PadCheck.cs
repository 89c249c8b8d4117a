using NetTopologySuite.Geometries;
using NetTopologySuite.Operation.Distance;
using NetTopologySuite.Operation.OverlayNG;
using NetTopologySuite.Operation.Valid;

namespace FieldSolve.Geometry;

/// <summary>Finds what is wrong with pads among themselves.</summary>
internal static class PadCheck
{
    /// <summary>Whether the corners make a simple polygon with area; if not, the place of the trouble.</summary>
    public static bool IsSound(IReadOnlyList<Point2> corners, double tolerance, out Point2 at)
    {
        at = corners.Count > 0 ? corners[0] : default;
        if (corners.Any(p => !double.IsFinite(p.X) || !double.IsFinite(p.Y)))
        {
            at = corners.FirstOrDefault(p => double.IsFinite(p.X) && double.IsFinite(p.Y));
            return false;
        }

        List<Point2> distinct = OutlinePolygons.Distinct(corners, tolerance);
        if (distinct.Count < 3)
        {
            return false;
        }

        Polygon polygon = OutlinePolygons.Polygon(distinct);
        if (new IsValidOp(polygon).ValidationError is { } error)
        {
            at = new(error.Coordinate.X, error.Coordinate.Y);
            return false;
        }

        return polygon.Area > tolerance * polygon.EnvelopeInternal.Diameter;
    }

    /// <summary>Adds every pair of sound pads that overlap or touch, on the sheet or off it.</summary>
    /// <param name="pads">Contact and outline of each sound pad, by contact.</param>
    /// <param name="tolerance">Pads nearer than this touch.</param>
    /// <param name="problems">Where to add.</param>
    public static void AddMeetings(IReadOnlyList<(int Contact, Outline Outline)> pads, double tolerance, List<PlacementProblem> problems)
    {
        var tree = new BoxTree([.. pads.Select(p => p.Outline.Bounds)]);
        var polygons = new Polygon?[pads.Count];
        for (int i = 0; i < pads.Count; i++)
        {
            foreach (int j in tree.Query(pads[i].Outline.Bounds.Grown(tolerance)).Where(j => j > i))
            {
                Polygon a = polygons[i] ??= OutlinePolygons.Polygon(pads[i].Outline);
                Polygon b = polygons[j] ??= OutlinePolygons.Polygon(pads[j].Outline);
                if (Meeting(a, b, pads[i].Outline, pads[j].Outline, tolerance) is { } meeting)
                {
                    problems.Add(new(pads[i].Contact, -1, pads[j].Contact, meeting.Fault, meeting.At));
                }
            }
        }
    }

    private static (PlacementFault Fault, Point2 At)? Meeting(Polygon a, Polygon b, Outline outlineA, Outline outlineB, double tolerance)
    {
        Point2 firstA = outlineA.Pieces[0].Start, firstB = outlineB.Pieces[0].Start;
        Coordinate[] near = new IndexedFacetDistance(a).NearestPoints(b);
        bool inside = outlineA.SignedDistance(firstB) > tolerance || outlineB.SignedDistance(firstA) > tolerance;
        if (!inside && near[0].Distance(near[1]) > tolerance)
        {
            return null;
        }

        // Pads side by side overlap by rounding at most: no wider than the tolerance.
        var common = OverlayNGRobust.Overlay(a, b, NetTopologySuite.Operation.Overlay.SpatialFunction.Intersection);
        if (common.Area > 2 * tolerance * Math.Min(a.Length, b.Length))
        {
            NetTopologySuite.Geometries.Point p = common.InteriorPoint;
            return (PlacementFault.PadOverlapsPad, new(p.X, p.Y));
        }

        return (PlacementFault.PadsTouch, new(near[0].X, near[0].Y));
    }
}
