using ScottPlot;

namespace FieldSolve.Pictures;

/// <summary>Something drawn in the frame of a picture, without an entry in the legend and, as a rule, without a say in how far the axes reach.</summary>
internal abstract class FrameDrawing : IPlottable
{
    /// <inheritdoc/>
    public bool IsVisible { get; set; } = true;

    /// <inheritdoc/>
    public IAxes Axes { get; set; } = new Axes();

    /// <inheritdoc/>
    public IEnumerable<LegendItem> LegendItems => LegendItem.None;

    /// <inheritdoc/>
    public virtual AxisLimits GetAxisLimits() => AxisLimits.NoLimits;

    /// <inheritdoc/>
    public abstract void Render(RenderPack rp);
}
