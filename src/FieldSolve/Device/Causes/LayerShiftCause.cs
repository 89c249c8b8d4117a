using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A lithography layer is shifted against the sheet: pads move with it, edge contacts by the part along the edge at their middle.</summary>
/// <param name="alongX">Along lab x, else along y.</param>
public sealed class LayerShiftCause(bool alongX) : CauseKind
{
    /// <inheritdoc/>
    public override string Key => alongX ? "layer_x" : "layer_y";

    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Layer;

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Length;

    /// <inheritdoc/>
    public override string Meaning => alongX ? "common shift of a layer along x" : "common shift of a layer along y";

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by)
    {
        Point2 d = alongX ? new(by, 0) : new(0, by);
        foreach (int c in target.Contacts)
        {
            EdgeMoves.Displace(draft, c, p => p + d);
        }
    }
}
