using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>
/// The whole rim of the sheet lies further out, holes are smaller; negative for an over-etch. Edge contacts keep their middle and their width, those
/// between two corners stay between them; pads stay where they are.
/// </summary>
public sealed class OutlineGrowthCause : CauseKind
{
    /// <inheritdoc/>
    public override string Key => "growth";

    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Sheet;

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Length;

    /// <inheritdoc/>
    public override string Meaning => "growth of the outline on every side (over-etch: less than zero)";

    /// <inheritdoc/>
    public override string? Refuse(SheetDevice device, CauseTarget target)
    {
        try
        {
            OutlineGrowth.Of(device.Layout.Live, 1e-6 * device.Layout.Live.Size);
            OutlineGrowth.Of(device.Layout.Live, -1e-6 * device.Layout.Live.Size);
            return null;
        }
        catch (LayoutException e)
        {
            return "cannot be varied: " + e.Message;
        }
    }

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) => draft.Grow(by);
}
