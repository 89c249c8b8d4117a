using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>The line contact resistance of an edge contact.</summary>
public sealed class ResistanceCause : ContactResistanceCause
{
    /// <inheritdoc/>
    public override string Key => "resistance";

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.LineResistance;

    /// <inheritdoc/>
    public override string Meaning => "line contact resistance";

    /// <inheritdoc/>
    public override bool Fits(ContactKind contact) => contact == ContactKind.Edge;

    /// <inheritdoc/>
    public override string? Refuse(SheetDevice device, CauseTarget target) => device.Contacts[target.Contacts[0]] switch
    {
        { Kind: ContactKind.Pad } => "is a pad; give it 'resistivity'",

        // Near zero the reading changes like r ln r: the current density has no bound at the contact's ends.
        { LineResistance: 0 } => "is ideal; give the contact a 'resistance' for the tolerance to vary",
        _ => null,
    };
}
