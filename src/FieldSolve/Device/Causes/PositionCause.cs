namespace FieldSolve.Device;

/// <summary>An edge contact sits elsewhere along the edge; counter-clockwise round the sheet (or round the hole) as 'shift'.</summary>
public sealed class PositionCause : EdgeCause
{
    /// <inheritdoc/>
    public override string Key => "position";

    /// <inheritdoc/>
    public override string Meaning => "position along the edge";

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) =>
        EdgeMoves.Move(draft, target.Contacts[0], draft.Contacts[target.Contacts[0]].Span!.Value.Loop == 0 ? by : -by, 0);
}
