namespace FieldSolve.Device;

/// <summary>An edge contact covers more of the edge, equally on both sides.</summary>
public sealed class WidthCause : EdgeCause
{
    /// <inheritdoc/>
    public override string Key => "width";

    /// <inheritdoc/>
    public override string Meaning => "width along the edge";

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) => EdgeMoves.Move(draft, target.Contacts[0], 0, by);
}
