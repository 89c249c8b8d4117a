using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>
/// Strokes polylines. Dashes are cut from the line itself, because the SVG canvas knows no dash effect and would draw
/// a solid line.
/// </summary>
internal static class Strokes
{
    /// <summary>Draws polylines in pixels.</summary>
    /// <param name="canvas">Target.</param>
    /// <param name="lines">Points in pixels.</param>
    /// <param name="colour">Colour.</param>
    /// <param name="width">Width.</param>
    /// <param name="dash">Lengths of dash, gap, dash, gap …; null for a solid line.</param>
    /// <param name="halo">Colour under the line, 0.8 pixels wider on each side; null for none.</param>
    public static void Draw(
        SKCanvas canvas, IEnumerable<SKPoint[]> lines, Color colour, float width, float[]? dash = null, Color? halo = null)
    {
        using SKPath path = new();
        foreach (SKPoint[] line in lines)
        {
            if (dash is null)
            {
                path.AddPoly(line, close: false);
            }
            else
            {
                AddDashes(path, line, dash);
            }
        }

        using SKPaint paint = new() { IsAntialias = true, IsStroke = true, StrokeJoin = SKStrokeJoin.Round };
        paint.StrokeCap = dash is null ? SKStrokeCap.Round : SKStrokeCap.Butt;
        if (halo is { } under)
        {
            paint.Color = under.ToSKColor();
            paint.StrokeWidth = width + 1.6f;
            canvas.DrawPath(path, paint);
        }

        paint.Color = colour.ToSKColor();
        paint.StrokeWidth = width;
        canvas.DrawPath(path, paint);
    }

    private static void AddDashes(SKPath path, SKPoint[] line, float[] dash)
    {
        int part = 0;
        float left = dash[0];
        for (int k = 1; k < line.Length; k++)
        {
            SKPoint from = line[k - 1];
            float dx = line[k].X - from.X, dy = line[k].Y - from.Y, length = MathF.Sqrt((dx * dx) + (dy * dy)), at = 0;
            if (k == 1)
            {
                path.MoveTo(from);
            }

            while (length - at > left)
            {
                at += left;
                SKPoint p = new(from.X + (dx * at / length), from.Y + (dy * at / length));
                if (part % 2 == 0)
                {
                    path.LineTo(p);
                }
                else
                {
                    path.MoveTo(p);
                }

                part = (part + 1) % dash.Length;
                left = dash[part];
            }

            left -= length - at;
            if (part % 2 == 0)
            {
                path.LineTo(line[k]);
            }
        }
    }
}
