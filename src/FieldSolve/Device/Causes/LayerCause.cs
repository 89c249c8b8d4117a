namespace FieldSolve.Device;

/// <summary>What causes share that befall all contacts of a lithography layer at once.</summary>
public abstract class LayerCause : CauseKind
{
    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Layer;

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by)
    {
        foreach (int contact in target.Contacts)
        {
            Apply(draft, target, contact, by);
        }
    }

    /// <summary>Changes one contact of the layer.</summary>
    /// <param name="draft">The device under change.</param>
    /// <param name="layer">The layer.</param>
    /// <param name="contact">Index of the contact.</param>
    /// <param name="by">SI.</param>
    protected abstract void Apply(DeviceDraft draft, CauseTarget layer, int contact, double by);
}
