using FieldSolve.Geometry;
using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>The names of contacts and tips, placed clear of lines and of one another, with a thin leader where a name stands away.</summary>
/// <param name="tags">The names.</param>
/// <param name="lines">Lines that names should not cover, metres.</param>
/// <param name="rim">The sheet's closed loops, metres.</param>
/// <param name="scale">Multiplies metres to give plot units.</param>
internal sealed class NameTags(IReadOnlyList<NameTag> tags, IReadOnlyList<Point2[]> lines, IReadOnlyList<Point2[]> rim, double scale) : FrameDrawing
{
    private const float FontSize = 13, Height = 15, LeaderFrom = 17;

    /// <inheritdoc/>
    public override void Render(RenderPack rp)
    {
        ArgumentNullException.ThrowIfNull(rp);
        SKPoint[][] loops = [.. rim.Select(l => l.Select(At).ToArray())];
        bool OnSheet(SKPoint p) => loops.Count(l => TagPlacement.IsInside(p, l)) % 2 == 1;
        PixelRect data = rp.DataRect;
        TagPlacement placement = new(
            new SKRect(data.Left + 2, data.Top + 2, data.Right - 2, data.Bottom - 2), [.. lines.Select(l => l.Select(At).ToArray())], OnSheet);
        placement.Take(Compass.Place(data));
        using SKFont font = new(EmbeddedFont.Typeface, FontSize) { Edging = SKFontEdging.Antialias };
        using SKPaint paint = new() { IsAntialias = true, StrokeWidth = 0.8f };
        foreach (NameTag tag in tags)
        {
            (SKRect box, SKPoint? anchor) = placement.Place(
                new SKSize(font.MeasureText(tag.Text), Height), [.. tag.Anchors.Select(a => (At(a.At), new SKPoint((float)a.Outward.X, (float)-a.Outward.Y)))],
                [.. tag.Body.Select(At)], tag.Keepout);
            paint.Color = tag.Colour.ToSKColor();
            if (anchor is { } root)
            {
                SKPoint near = new(Math.Clamp(root.X, box.Left - 2, box.Right + 2), Math.Clamp(root.Y, box.Top, box.Bottom));
                if (SKPoint.Distance(root, near) > LeaderFrom)
                {
                    rp.Canvas.DrawLine(root, near, paint);
                }
            }

            rp.Canvas.DrawText(tag.Text, box.MidX, box.MidY + (0.36f * FontSize), SKTextAlign.Center, font, paint);
        }
    }

    private SKPoint At(Point2 p)
    {
        Pixel pixel = Axes.GetPixel(new(scale * p.X, scale * p.Y));
        return new(pixel.X, pixel.Y);
    }
}
