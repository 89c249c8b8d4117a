using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>The specific contact resistivity of a pad.</summary>
public sealed class ResistivityCause : ContactResistanceCause
{
    /// <inheritdoc/>
    public override string Key => "resistivity";

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.ContactResistivity;

    /// <inheritdoc/>
    public override string Meaning => "specific contact resistivity";

    /// <inheritdoc/>
    public override bool Fits(ContactKind contact) => contact == ContactKind.Pad;

    /// <inheritdoc/>
    public override string? Refuse(SheetDevice device, CauseTarget target) => device.Contacts[target.Contacts[0]] switch
    {
        { Kind: ContactKind.Edge } => "is an edge contact; give it 'resistance'",
        { Resistivity: 0 } => "is ideal; give the pad a 'resistivity' for the tolerance to vary",
        _ => null,
    };
}
