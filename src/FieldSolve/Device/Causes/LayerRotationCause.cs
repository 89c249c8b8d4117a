using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A lithography layer is turned against the sheet about a point, counter-clockwise.</summary>
public sealed class LayerRotationCause : CauseKind
{
    /// <inheritdoc/>
    public override string Key => "layer_rotation";

    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Layer;

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Angle;

    /// <inheritdoc/>
    public override string Meaning => "common rotation of a layer";

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by)
    {
        foreach (int c in target.Contacts)
        {
            EdgeMoves.Displace(draft, c, p => target.About + (p - target.About).Turned(by));
        }
    }
}
