using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>All contacts of a lithography layer are wider by the same amount (exposure): edge contacts along the edge, pads across.</summary>
public sealed class LayerWidthCause : LayerCause
{
    /// <inheritdoc/>
    public override string Key => "layer_width";

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Length;

    /// <inheritdoc/>
    public override string Meaning => "common extra width of a layer's contacts";

    /// <inheritdoc/>
    protected override void Apply(DeviceDraft draft, CauseTarget layer, int contact, double by)
    {
        if (draft.Contacts[contact].Pad is not null)
        {
            PadGrowthCause.Grow(draft, contact, by / 2);
        }
        else if (EdgeMoves.Refuse(draft.Designed, contact) is null)
        {
            EdgeMoves.Move(draft, contact, 0, by);
        }
    }
}
