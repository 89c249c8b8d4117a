using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A pad is turned about its middle, counter-clockwise.</summary>
public sealed class PadRotationCause : PadCause
{
    /// <inheritdoc/>
    public override string Key => "rotation";

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Angle;

    /// <inheritdoc/>
    public override string Meaning => "rotation of a pad about its middle";

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) =>
        EdgeMoves.Displace(draft, target.Contacts[0], p => target.About + (p - target.About).Turned(by));
}
