using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A lithography layer is turned against the sheet about a point, counter-clockwise.</summary>
public sealed class LayerRotationCause : LayerCause
{
    /// <inheritdoc/>
    public override string Key => "layer_rotation";

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Angle;

    /// <inheritdoc/>
    public override string Meaning => "common rotation of a layer";

    /// <inheritdoc/>
    protected override void Apply(DeviceDraft draft, CauseTarget layer, int contact, double by) =>
        EdgeMoves.Displace(draft, contact, p => layer.About + (p - layer.About).Turned(by));
}
