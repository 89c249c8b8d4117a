using ScottPlot;
using SkiaSharp;

namespace FieldSolve.Pictures;

/// <summary>A curve in plot units, possibly in several runs with gaps between, with dashes and markers.</summary>
/// <param name="runs">Each run is drawn as one connected line.</param>
internal sealed class CurveLine(IReadOnlyList<Coordinates[]> runs) : FrameDrawing
{
    /// <summary>How the curve is drawn, and its name.</summary>
    public required KeyEntry Style { get; init; }

    /// <inheritdoc/>
    public override AxisLimits GetAxisLimits()
    {
        Coordinates[] all = [.. runs.SelectMany(r => r)];
        return all.Length == 0 ? AxisLimits.NoLimits : new(all.Min(c => c.X), all.Max(c => c.X), all.Min(c => c.Y), all.Max(c => c.Y));
    }

    /// <inheritdoc/>
    public override void Render(RenderPack rp)
    {
        ArgumentNullException.ThrowIfNull(rp);
        if (Style.Width > 0)
        {
            Strokes.Draw(rp.Canvas, runs.Select(r => r.Select(Axes.GetPixel).Select(p => new SKPoint(p.X, p.Y)).ToArray()), Style.Colour, Style.Width, Style.Dash);
        }

        foreach (Coordinates c in Style.Shape == MarkerShape.None ? [] : runs.SelectMany(r => r))
        {
            Style.DrawMarker(rp.Canvas, Axes.GetPixel(c));
        }
    }
}
