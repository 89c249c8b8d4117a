using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>
/// Places names one after another where they cover the least: lines cost, other names and the edge of the frame cost much, and
/// distance costs a little. Works in pixels, y downwards.
/// </summary>
/// <param name="frame">Names stay inside.</param>
/// <param name="lines">Polylines that names should not cover.</param>
/// <param name="sheet">Tells whether a pixel lies on the sheet.</param>
internal sealed class TagPlacement(SKRect frame, IReadOnlyList<SKPoint[]> lines, Func<SKPoint, bool> sheet)
{
    private const float Gap = 3, CoverCost = 400, OutsideCost = 1000, LineCost = 60, SheetCost = 25;

    private static readonly float[] Distances = [8, 14, 22, 32, 46, 64];

    private readonly List<SKRect> taken = [];

    /// <summary>Keeps a rectangle free of names.</summary>
    public void Take(SKRect box) => taken.Add(box);

    /// <summary>Where a name of a given size goes.</summary>
    /// <param name="size">Of the text.</param>
    /// <param name="anchors">Points and directions to leave in (y downwards; zero for any), the best first.</param>
    /// <param name="body">Outline inside which the name may stand; empty for none.</param>
    /// <param name="keepout">True to prefer places off the sheet.</param>
    /// <returns>The box and the anchor it belongs to; no anchor when the name stands in its own body.</returns>
    public (SKRect Box, SKPoint? Anchor) Place(
        SKSize size, IReadOnlyList<(SKPoint At, SKPoint Outward)> anchors, IReadOnlyList<SKPoint> body, bool keepout)
    {
        SKRect best = default;
        SKPoint? anchor = null;
        float lowest = float.PositiveInfinity;
        if (body.Count > 2)
        {
            float cx = (body.Min(p => p.X) + body.Max(p => p.X)) / 2, cy = (body.Min(p => p.Y) + body.Max(p => p.Y)) / 2;
            SKRect box = Around(cx, cy, size);
            if (Corners(SKRect.Inflate(box, Gap, Gap)).All(c => IsInside(c, body)))
            {
                (best, lowest) = (box, Cost(box, false));
            }
        }

        for (int a = 0; a < anchors.Count && lowest > 0; a++)
        {
            (SKPoint at, SKPoint outward) = anchors[a];
            bool any = outward.Length == 0;
            float first = any ? -MathF.PI / 4 : MathF.Atan2(outward.Y, outward.X);
            foreach (float distance in Distances)
            {
                for (int k = 0; k < (any ? 16 : 9); k++)
                {
                    // Straight ahead, then to either side in turn.
                    float turn = (k % 2 == 0 ? 1 : -1) * ((k + 1) / 2) * (any ? MathF.PI / 8 : MathF.PI / 12);
                    float dx = MathF.Cos(first + turn), dy = MathF.Sin(first + turn);
                    SKRect box = Beside(new(at.X + (distance * dx), at.Y + (distance * dy)), dx, dy, size);
                    float cost = Cost(box, keepout) + distance - Distances[0] + (4 * MathF.Abs(turn)) + (2 * a);
                    if (cost < lowest)
                    {
                        (best, anchor, lowest) = (box, at, cost);
                    }
                }
            }
        }

        taken.Add(best);
        return (best, anchor);
    }

    /// <summary>True when a point lies inside a closed outline (even-odd rule).</summary>
    public static bool IsInside(SKPoint p, IReadOnlyList<SKPoint> outline)
    {
        bool inside = false;
        for (int i = 0, j = outline.Count - 1; i < outline.Count; j = i++)
        {
            SKPoint a = outline[i], b = outline[j];
            inside ^= a.Y > p.Y != b.Y > p.Y && p.X < a.X + ((b.X - a.X) * (p.Y - a.Y) / (b.Y - a.Y));
        }

        return inside;
    }

    private float Cost(SKRect box, bool keepout)
    {
        SKRect wide = SKRect.Inflate(box, Gap, 1);
        float cost = frame.Contains(wide) ? 0 : OutsideCost;
        cost += CoverCost * taken.Count(t => t.IntersectsWith(wide));
        cost += LineCost * lines.Sum(l => Enumerable.Range(1, l.Length - 1).Count(k => Touches(wide, l[k - 1], l[k])));
        return cost + (keepout && sheet(new(box.MidX, box.MidY)) ? SheetCost : 0);
    }

    private static SKRect Around(float x, float y, SKSize size) =>
        new(x - (size.Width / 2), y - (size.Height / 2), x + (size.Width / 2), y + (size.Height / 2));

    // The box touches the point with the side or corner that faces it.
    private static SKRect Beside(SKPoint p, float dx, float dy, SKSize size)
    {
        float sx = Math.Clamp(1.3f * dx, -1, 1), sy = Math.Clamp(1.3f * dy, -1, 1);
        return Around(p.X + (sx * size.Width / 2), p.Y + (sy * size.Height / 2), size);
    }

    private static SKPoint[] Corners(SKRect r) => [new(r.Left, r.Top), new(r.Right, r.Top), new(r.Right, r.Bottom), new(r.Left, r.Bottom)];

    // Clips the segment to the box (Liang and Barsky, 1984).
    private static bool Touches(SKRect box, SKPoint a, SKPoint b)
    {
        float from = 0, to = 1;
        bool Cut(float p, float q)
        {
            if (p == 0)
            {
                return q >= 0;
            }

            float r = q / p;
            (from, to) = p < 0 ? (MathF.Max(from, r), to) : (from, MathF.Min(to, r));
            return from <= to;
        }

        float dx = b.X - a.X, dy = b.Y - a.Y;
        return Cut(-dx, a.X - box.Left) && Cut(dx, box.Right - a.X) && Cut(-dy, a.Y - box.Top) && Cut(dy, box.Bottom - a.Y);
    }
}
