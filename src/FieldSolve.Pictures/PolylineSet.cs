using FieldSolve.Geometry;
using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>Many polylines of one style as one drawing, with an optional lighter or darker halo and arrow heads.</summary>
/// <param name="lines">Points in metres.</param>
/// <param name="scale">Multiplies metres to give plot units.</param>
internal sealed class PolylineSet(IReadOnlyList<Point2[]> lines, double scale) : FrameDrawing
{
    private const float ArrowLength = 9, ArrowHalfWidth = 3.6f, LeastForArrow = 60;

    /// <summary>Colour of the lines.</summary>
    public Color Colour { get; init; } = Look.Ink;

    /// <summary>Width of the lines.</summary>
    public float Width { get; init; } = 1;

    /// <summary>Colour drawn under the lines, somewhat wider; null for none.</summary>
    public Color? Halo { get; init; }

    /// <summary>Dashed instead of solid.</summary>
    public bool Dashed { get; init; }

    /// <summary>An arrow head in the middle of each line.</summary>
    public bool Arrows { get; init; }

    /// <inheritdoc/>
    public override void Render(RenderPack rp)
    {
        ArgumentNullException.ThrowIfNull(rp);
        Draw(rp.Canvas);
    }

    private void Draw(SKCanvas canvas)
    {
        SKPoint[][] pixels = [.. lines.Select(l => l.Select(At).ToArray())];
        Strokes.Draw(canvas, pixels, Colour, Width, Dashed ? [6, 4] : null, Halo);
        if (Arrows)
        {
            using SKPath heads = new();
            foreach (SKPoint[] line in pixels.Where(l => l.Length > 8 && LengthOf(l) > LeastForArrow))
            {
                AddHead(heads, line);
            }

            using SKPaint paint = new() { IsAntialias = true, Color = Colour.ToSKColor() };
            canvas.DrawPath(heads, paint);
        }
    }

    private SKPoint At(Point2 p)
    {
        Pixel pixel = Axes.GetPixel(new(scale * p.X, scale * p.Y));
        return new(pixel.X, pixel.Y);
    }

    // A head on a shorter line would be most of what is seen of it.
    private static float LengthOf(SKPoint[] points) => Enumerable.Range(1, points.Length - 1).Sum(k => SKPoint.Distance(points[k - 1], points[k]));

    private static void AddHead(SKPath heads, SKPoint[] points)
    {
        SKPoint tip = points[(points.Length / 2) + 1], back = points[(points.Length / 2) - 2];
        float dx = tip.X - back.X, dy = tip.Y - back.Y, length = MathF.Sqrt((dx * dx) + (dy * dy));
        if (length > 0)
        {
            (dx, dy) = (dx / length, dy / length);
            SKPoint root = new(tip.X - (ArrowLength * dx), tip.Y - (ArrowLength * dy));
            heads.AddPoly(
            [
                tip,
                new(root.X - (ArrowHalfWidth * dy), root.Y + (ArrowHalfWidth * dx)),
                new(root.X + (ArrowHalfWidth * dy), root.Y - (ArrowHalfWidth * dx)),
            ]);
        }
    }
}
