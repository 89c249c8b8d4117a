using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>What causes share that move an edge contact or its ends along the edge.</summary>
public abstract class EdgeCause : CauseKind
{
    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Contact;

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Length;

    /// <inheritdoc/>
    public override bool Fits(ContactKind contact) => contact == ContactKind.Edge;

    /// <inheritdoc/>
    public override string? Refuse(SheetDevice device, CauseTarget target) => EdgeMoves.Refuse(device, target.Contacts[0]);
}
