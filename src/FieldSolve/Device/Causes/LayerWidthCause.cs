using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>All contacts of a lithography layer are wider by the same amount (exposure): edge contacts along the edge, pads across.</summary>
public sealed class LayerWidthCause : CauseKind
{
    /// <inheritdoc/>
    public override string Key => "layer_width";

    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Layer;

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Length;

    /// <inheritdoc/>
    public override string Meaning => "common extra width of a layer's contacts";

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by)
    {
        foreach (int c in target.Contacts)
        {
            if (draft.Contacts[c].Pad is not null)
            {
                PadGrowthCause.Grow(draft, c, by / 2);
            }
            else if (EdgeMoves.Refuse(draft.Designed, c) is null)
            {
                EdgeMoves.Move(draft, c, 0, by);
            }
        }
    }
}
