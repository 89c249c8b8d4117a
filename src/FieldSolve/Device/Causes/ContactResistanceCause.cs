namespace FieldSolve.Device;

/// <summary>What causes share that change the resistance between a contact and the sheet.</summary>
public abstract class ContactResistanceCause : CauseKind
{
    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Contact;

    /// <inheritdoc/>
    public override CauseEffect Effect => CauseEffect.Resistance;

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) => draft.AddToResistance(target.Contacts[0], by);
}
