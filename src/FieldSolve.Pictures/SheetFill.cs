using FieldSolve.Geometry;
using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>Paints the inside of loops with one colour: the sheet, its holes left out, or the metal of pads.</summary>
/// <param name="loops">Closed loops in metres.</param>
/// <param name="scale">Multiplies metres to give plot units.</param>
internal sealed class SheetFill(IReadOnlyList<Point2[]> loops, double scale) : FrameDrawing
{
    /// <summary>The colour.</summary>
    public Color Colour { get; init; } = Look.Sheet;

    /// <inheritdoc/>
    public override void Render(RenderPack rp)
    {
        ArgumentNullException.ThrowIfNull(rp);
        using SKPath path = new() { FillType = SKPathFillType.EvenOdd };
        foreach (Point2[] loop in loops)
        {
            path.AddPoly([.. loop.Select(p => Axes.GetPixel(new(scale * p.X, scale * p.Y))).Select(p => new SKPoint(p.X, p.Y))]);
        }

        using SKPaint paint = new() { IsAntialias = true, Color = Colour.ToSKColor() };
        rp.Canvas.DrawPath(path, paint);
    }
}
