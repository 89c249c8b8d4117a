using FieldSolve.Geometry;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A pad sits elsewhere.</summary>
/// <param name="alongX">Along lab x, else along y.</param>
public sealed class PadShiftCause(bool alongX) : PadCause
{
    /// <inheritdoc/>
    public override string Key => alongX ? "x" : "y";

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Length;

    /// <inheritdoc/>
    public override string Meaning => alongX ? "shift of a pad along x" : "shift of a pad along y";

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) =>
        EdgeMoves.Displace(draft, target.Contacts[0], p => p + (alongX ? new Point2(by, 0) : new Point2(0, by)));
}
