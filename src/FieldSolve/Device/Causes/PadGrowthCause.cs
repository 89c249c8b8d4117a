using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>Every side of a pad moves outwards.</summary>
public sealed class PadGrowthCause : PadCause
{
    /// <inheritdoc/>
    public override string Key => "growth";

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Length;

    /// <inheritdoc/>
    public override string Meaning => "growth of a pad on every side";

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) => Grow(draft, target.Contacts[0], by);

    internal static void Grow(DeviceDraft draft, int contact, double by)
    {
        IReadOnlyList<Point2> pad = draft.Contacts[contact].Pad!;
        bool clockwise = Outline.SignedArea(OutlinePolygons.Segments(pad)) < 0;
        draft.Place(contact, draft.Contacts[contact] with { Pad = [.. OutlineGrowth.Polygon(pad, clockwise ? -by : by).Select(c => c.Start)] });
    }
}
