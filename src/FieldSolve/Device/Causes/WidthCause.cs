using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>An edge contact covers more of the edge, equally on both sides.</summary>
public sealed class WidthCause : CauseKind
{
    /// <inheritdoc/>
    public override string Key => "width";

    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Contact;

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Length;

    /// <inheritdoc/>
    public override string Meaning => "width along the edge";

    /// <inheritdoc/>
    public override bool Fits(ContactKind contact) => contact == ContactKind.Edge;

    /// <inheritdoc/>
    public override string? Refuse(SheetDevice device, CauseTarget target) => EdgeMoves.Refuse(device, target.Contacts[0]);

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) => EdgeMoves.Move(draft, target.Contacts[0], 0, by);
}
