namespace FieldSolve.Device;

/// <summary>What causes share that move a pad.</summary>
public abstract class PadCause : CauseKind
{
    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Contact;

    /// <inheritdoc/>
    public override bool Fits(ContactKind contact) => contact == ContactKind.Pad;

    /// <inheritdoc/>
    public override string? Refuse(SheetDevice device, CauseTarget target) =>
        device.Contacts[target.Contacts[0]].Kind == ContactKind.Edge ? "is an edge contact; give it 'position' or 'width'" : null;
}
