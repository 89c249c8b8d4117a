using FieldSolve.Quantities;

namespace FieldSolve.Device;

/// <summary>One number of a device that a fit may change.</summary>
/// <param name="Kind">What it does to the device; the same kinds that [tolerance] knows.</param>
/// <param name="Target">Which contact, or the sheet.</param>
/// <param name="Designed">Its value in the device file, SI; 0 for what counts as an offset from the drawing (position, width, growth …).</param>
/// <param name="Start">Where a fit begins, SI.</param>
/// <param name="Least">Lower bound, SI; may be minus infinity.</param>
/// <param name="Most">Upper bound, SI; may be infinity.</param>
/// <param name="PriorMean">What is known of it beforehand, SI.</param>
/// <param name="PriorSigma">How well, one standard deviation, SI; null without a prior.</param>
/// <param name="Interval">A 95 % interval by profile likelihood is wanted.</param>
public sealed record FitParameter(
    CauseKind Kind, CauseTarget Target, double Designed, double Start, double Least, double Most, double PriorMean, double? PriorSigma, bool Interval)
{
    /// <summary>Where it is left free in the device file: line and column, 1-based.</summary>
    public (int Line, int Column) At { get; init; } = (1, 1);

    /// <summary>"a", "axis", "position of c4".</summary>
    public string Label => Target.Name.Length == 0 ? Kind.Key : $"{Kind.Key} of {Target.Name}";

    /// <summary>"a", "axis", "c4.position".</summary>
    public string Key => Target.Name.Length == 0 ? Kind.Key : $"{Target.Name}.{Kind.Key}";

    /// <summary>Unit of tables: SI, angles in degrees.</summary>
    public string Unit => CauseUnits.Of(Kind.Dimension);

    /// <summary>SI per unit of tables.</summary>
    public double UnitSize => Kind.Dimension == Dimension.Angle ? Math.PI / 180 : 1;

    /// <summary>A number that is positive by its nature, so that its logarithm is the natural measure.</summary>
    public bool IsPositive => Kind.Effect is CauseEffect.Resistance || (Kind is LawCause law && law.IsPositive);
}

/// <summary>What [fit] of a device file leaves free.</summary>
/// <param name="Parameters">Free numbers, the sheet's first.</param>
/// <param name="NumericalShare">Largest numerical error of a computed voltage, as a share of the standard deviation of the measured one.</param>
/// <param name="Notes">What was left out, in words.</param>
public sealed record FitSpec(IReadOnlyList<FitParameter> Parameters, double NumericalShare, IReadOnlyList<string> Notes);
