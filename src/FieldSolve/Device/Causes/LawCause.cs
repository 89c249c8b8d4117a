using FieldSolve.Laws;
using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>A parameter of the law has another value.</summary>
/// <param name="parameter">The parameter.</param>
public sealed class LawCause(LawParameter parameter) : CauseKind
{
    /// <inheritdoc/>
    public override string Key => parameter.Key;

    /// <summary>The number is greater than zero by its nature.</summary>
    public bool IsPositive => parameter.Bound is ParameterBound.Positive or ParameterBound.AtLeastOne;

    /// <summary>Smallest number the law takes; minus infinity where any will do.</summary>
    public double Least => parameter.Bound switch
    {
        ParameterBound.Positive or ParameterBound.NonNegative => 0,
        ParameterBound.AtLeastOne => 1,
        _ => double.NegativeInfinity,
    };

    /// <inheritdoc/>
    public override CauseScope Scope => CauseScope.Sheet;

    /// <inheritdoc/>
    public override Dimension Dimension => parameter.Dimension;

    /// <inheritdoc/>
    public override string Meaning => parameter.Meaning;

    /// <inheritdoc/>
    public override CauseEffect Effect => CauseEffect.Law;

    /// <inheritdoc/>
    public override string? Refuse(SheetDevice device, CauseTarget target)
    {
        IReadOnlyList<LawParameter> known = LawSensitivity.Parameters(device.Law);
        return known.Any(p => p.Key == Key) ? null
            : known.Count == 0 ? $"is no parameter of the law '{device.Law.Kind}'"
            : $"is no parameter with a value of the law '{device.Law.Kind}'; it has {string.Join(", ", known.Select(p => p.Key))}";
    }

    /// <inheritdoc/>
    public override void Apply(DeviceDraft draft, CauseTarget target, double by) => draft.AddToLaw(Key, by);
}
