using NetTopologySuite.Operation.Valid;

namespace FieldSolve.Geometry;

/// <summary>Finds what is wrong with an outline.</summary>
internal static class OutlineCheck
{
    private const double LeastArea = 1e-12; // of the square of the sheet's size

    public static IReadOnlyList<LayoutProblem> Problems(Outline outline)
    {
        var problems = new List<LayoutProblem>();
        foreach (Curve c in outline.Pieces.Where(c => !IsFinite(c.Start) || !IsFinite(c.End) || !double.IsFinite(c.Length)))
        {
            problems.Add(new("a corner is not a finite number", c.Start));
        }

        if (problems.Count > 0)
        {
            return problems;
        }

        for (int k = 0; k < outline.Pieces.Length; k++)
        {
            Curve c = outline.Pieces[k];
            if (c.End != outline.Pieces[outline.Neighbour(k, 1)].Start)
            {
                problems.Add(new("the outline has a gap", c.End));
            }

            if (c.Length <= outline.Tolerance)
            {
                problems.Add(new("two neighbouring corners coincide", c.Start));
            }
        }

        foreach (IReadOnlyList<Curve> loop in outline.Loops)
        {
            if (loop.Count < 3 && !loop.Any(c => c.IsArc))
            {
                problems.Add(new("an outline needs at least three corners", loop[0].Start));
            }
            else if (Math.Abs(Outline.SignedArea(loop)) <= LeastArea * outline.Size * outline.Size)
            {
                problems.Add(new("the outline crosses itself or encloses no area", loop[0].Start));
            }
        }

        if (problems.Count > 0)
        {
            return problems;
        }

        var valid = new IsValidOp(OutlinePolygons.Polygon(outline));
        if (valid.ValidationError is { } error)
        {
            problems.Add(new(Said(error.ErrorType), new(error.Coordinate.X, error.Coordinate.Y)));
            return problems;
        }

        AddTouches(outline, problems);
        return problems;
    }

    // Corners that lie on another piece of the rim: valid polygons for some purposes, but a sheet of no width there.
    private static void AddTouches(Outline outline, List<LayoutProblem> problems)
    {
        for (int k = 0; k < outline.Pieces.Length; k++)
        {
            Point2 p = outline.Pieces[k].Start;
            int before = outline.Neighbour(k, -1);
            foreach (int i in outline.PiecesNear(Box.Of(p).Grown(outline.Tolerance)))
            {
                if (i != k && i != before && outline.Pieces[i].Distance(p) <= outline.Tolerance)
                {
                    bool own = outline.LoopOf(i) == outline.LoopOf(k);
                    problems.Add(new(own ? "the outline touches itself" : "a hole touches the rim or another hole", p));
                    break;
                }
            }
        }
    }

    private static string Said(TopologyValidationErrors error) => error switch
    {
        TopologyValidationErrors.HoleOutsideShell => "a hole lies outside the sheet",
        TopologyValidationErrors.NestedHoles => "a hole lies inside another hole",
        TopologyValidationErrors.DisconnectedInteriors => "the holes cut the sheet into pieces",
        TopologyValidationErrors.SelfIntersection => "the outline crosses itself or a hole",
        TopologyValidationErrors.RingSelfIntersection => "the outline touches itself",
        TopologyValidationErrors.TooFewPoints => "an outline needs at least three corners",
        _ => "the outline is not a simple polygon",
    };

    private static bool IsFinite(Point2 p) => double.IsFinite(p.X) && double.IsFinite(p.Y);
}
