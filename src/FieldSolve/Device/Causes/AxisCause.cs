using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>The crystal lies at another angle.</summary>
public sealed class AxisCause : CauseKind
{
    /// <inheritdoc/>
    public override string Key => "axis";

    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Sheet;

    /// <inheritdoc/>
    public override Dimension Dimension => Dimension.Angle;

    /// <inheritdoc/>
    public override string Meaning => "angle of the crystal axis";

    /// <inheritdoc/>
    public override CauseEffect Effect => CauseEffect.Axis;

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) => draft.Axis += by;
}
