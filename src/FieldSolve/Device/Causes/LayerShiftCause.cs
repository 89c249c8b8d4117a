using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A lithography layer is shifted against the sheet: pads move with it, edge contacts by the part along the edge at their middle.</summary>
/// <param name="alongX">Along lab x, else along y.</param>
public sealed class LayerShiftCause(bool alongX) : LayerCause
{
    /// <inheritdoc/>
    public override string Key => alongX ? "layer_x" : "layer_y";

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Length;

    /// <inheritdoc/>
    public override string Meaning => alongX ? "common shift of a layer along x" : "common shift of a layer along y";

    /// <inheritdoc/>
    protected override void Apply(DeviceDraft draft, CauseTarget layer, int contact, double by) =>
        EdgeMoves.Displace(draft, contact, p => p + (alongX ? new Point2(by, 0) : new Point2(0, by)));
}
