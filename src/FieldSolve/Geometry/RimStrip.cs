namespace FieldSolve.Geometry;

/// <summary>A thin strip of sheet between a side of a pad and the rim that it runs along.</summary>
/// <param name="Gap">Least width, metres.</param>
/// <param name="Squares">Length over width: about so many triangles lie in the strip, however coarse the mesh.</param>
/// <param name="At">Where it is narrowest, metres.</param>
internal readonly record struct RimStrip(double Gap, double Squares, Point2 At)
{
    private const int Steps = 64;

    // A wider strip is no trouble to any mesh.
    private const double Near = 1e-2;

    /// <summary>The strip of most squares; null where no side comes near the rim.</summary>
    /// <param name="live">The sheet.</param>
    /// <param name="pad">Corners of a sound pad, either way round.</param>
    /// <param name="isIdeal">The sheet under the pad is no part of the problem.</param>
    public static RimStrip? Of(Outline live, IReadOnlyList<Point2> pad, bool isIdeal)
    {
        RimStrip? worst = null;
        double turn = Outline.SignedArea(OutlinePolygons.Segments(pad)) < 0 ? -1 : 1;
        foreach (Curve side in OutlinePolygons.Segments(pad))
        {
            Point2 along = side.End - side.Start;
            double[] width = [.. Enumerable.Range(0, Steps + 1).Select(k => Width(live, side.At(k / (double)Steps), isIdeal ? turn * along : default))];
            double squares = 0;
            for (int k = 0; k < Steps; k++)
            {
                // The wider end: a side that crosses the rim is near it for a moment only.
                double wider = Math.Max(width[k], width[k + 1]);
                if (wider <= Near * live.Size)
                {
                    squares += side.Length / Steps / wider;
                }
            }

            if (squares > (worst?.Squares ?? 0))
            {
                // Where it is equally narrow in many places, the middle of them.
                double gap = width.Min();
                int[] narrow = [.. Enumerable.Range(0, width.Length).Where(k => width[k] <= (1 + 1e-3) * gap)];
                worst = new(gap, squares, side.At(narrow[narrow.Length / 2] / (double)Steps));
            }
        }

        return worst;
    }

    // Distance from a point of a side to the rim across sheet; infinite where there is none: off the sheet, on the rim, or across the pad's own metal.
    private static double Width(Outline live, Point2 p, Point2 along)
    {
        double distance = live.SignedDistance(p);
        if (distance <= live.Tolerance)
        {
            return double.PositiveInfinity;
        }

        Curve piece = live.Pieces[live.NearestPiece(p)];
        return Point2.Cross(along, piece.At(piece.NearestParameter(p)) - p) > 0 ? double.PositiveInfinity : distance;
    }
}
