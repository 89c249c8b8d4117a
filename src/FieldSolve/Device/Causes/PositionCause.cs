using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>An edge contact sits elsewhere along the edge; counter-clockwise round the sheet (or round the hole) as 'shift'.</summary>
public sealed class PositionCause : CauseKind
{
    /// <inheritdoc/>
    public override string Key => "position";

    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Contact;

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Length;

    /// <inheritdoc/>
    public override string Meaning => "position along the edge";

    /// <inheritdoc/>
    public override bool Fits(ContactKind contact) => contact == ContactKind.Edge;

    /// <inheritdoc/>
    public override string? Refuse(SheetDevice device, CauseTarget target) => EdgeMoves.Refuse(device, target.Contacts[0]);

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) =>
        EdgeMoves.Move(draft, target.Contacts[0], draft.Contacts[target.Contacts[0]].Span!.Value.Loop == 0 ? by : -by, 0);
}
