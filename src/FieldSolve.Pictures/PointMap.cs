using FieldSolve.Geometry;
using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>Measured points as small filled squares in the colours of a scale.</summary>
/// <param name="points">Places in metres and values in plot units.</param>
/// <param name="side">Side of a square, metres.</param>
/// <param name="scale">Multiplies metres to give plot units.</param>
/// <param name="colours">Colours.</param>
/// <param name="low">Value at the lower end.</param>
/// <param name="high">Value at the upper end.</param>
internal sealed class PointMap(IReadOnlyList<(Point2 Place, double Value)> points, double side, double scale, IColormap colours, double low, double high)
    : FrameDrawing, IHasColorAxis
{
    /// <inheritdoc/>
    public IColormap Colormap { get; set; } = colours;

    /// <inheritdoc/>
    public ScottPlot.Range GetRange() => new(low, high);

    /// <inheritdoc/>
    public override void Render(RenderPack rp)
    {
        ArgumentNullException.ThrowIfNull(rp);
        using SKPaint paint = new() { IsAntialias = false };
        double half = 0.5 * side * scale, span = high > low ? high - low : 1;
        foreach ((Point2 place, double value) in points)
        {
            Pixel a = Axes.GetPixel(new((scale * place.X) - half, (scale * place.Y) - half)), b = Axes.GetPixel(new((scale * place.X) + half, (scale * place.Y) + half));
            paint.Color = Colormap.GetColor(Math.Clamp((value - low) / span, 0, 1)).ToSKColor();
            rp.Canvas.DrawRect(new SKRect(Math.Min(a.X, b.X), Math.Min(a.Y, b.Y), Math.Max(a.X, b.X), Math.Max(a.Y, b.Y)), paint);
        }
    }
}
