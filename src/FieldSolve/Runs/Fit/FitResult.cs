using FieldSolve.Device;
using FieldSolve.Measured;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>A fitted number.</summary>
/// <param name="Parameter">Which.</param>
/// <param name="Value">SI; null when the data do not determine it.</param>
/// <param name="StandardError">From the curvature of the sum of squares, with the stated sigmas, SI; null when not determined.</param>
/// <param name="Interval">95 % interval by profile likelihood, SI; null when none was asked for; an end is null where the profile stays below its limit up to the bound, or up to where the model says nothing.</param>
/// <param name="AtBound">It ended at a bound.</param>
public sealed record FittedParameter(FitParameter Parameter, double? Value, double? StandardError, (double? Low, double? High)? Interval, bool AtBound)
{
    /// <summary>Where the fit ended, SI, determined or not.</summary>
    public required double Ended { get; init; }

    /// <summary>Points of the profile likelihood that the interval was found from, by value; empty when none was asked for.</summary>
    public IReadOnlyList<LikelihoodPoint> Profile { get; init; } = [];

    /// <summary>By how much the model's numerical errors may have moved it, SI: errors of one reading go together along the currents, those of all readings at their worst.</summary>
    public double NumericalError { get; init; }
}

/// <summary>A point of a profile likelihood.</summary>
/// <param name="Value">Where the number was held, SI.</param>
/// <param name="Rise">By how much the least sum of squares over sigma rises above that of the fit (robust fits: in units that make 3.84 the 95 % point).</param>
public sealed record LikelihoodPoint(double Value, double Rise);

/// <summary>One datum beside the model.</summary>
/// <param name="Datum">As measured.</param>
/// <param name="Circuit">What it was read in.</param>
/// <param name="Pair">Pair read.</param>
/// <param name="Model">V.</param>
/// <param name="NumericalError">Estimated numerical error of <paramref name="Model"/>, V.</param>
/// <param name="Weight">1, or less for what a robust fit takes for an outlier.</param>
public sealed record FittedVoltage(MeasuredVoltage Datum, MeasuredCircuit Circuit, Pair Pair, double Model, double NumericalError, double Weight)
{
    /// <summary>Measured less model, in standard deviations.</summary>
    public double Residual => (Datum.Value - Model) / Datum.Sigma;
}

/// <summary>How well the model describes the data.</summary>
/// <param name="ChiSquared">Sum of the squared residuals over sigma, priors left out.</param>
/// <param name="Freedom">Data less parameters without prior that the data determine.</param>
/// <param name="Probability">That chance alone makes chi squared this large; null without freedom.</param>
/// <param name="RunsZ">Runs of equal signs along the currents of each pair: deviation from chance in standard deviations (negative: too few runs, the model misses a trend); null when too few data.</param>
/// <param name="Largest">Largest residual, in standard deviations, with sign.</param>
/// <param name="LargestProbability">That chance alone makes one of so many residuals this large.</param>
/// <param name="LargestLine">Its line in the table.</param>
public sealed record FitQuality(
    double ChiSquared, int Freedom, double? Probability, double? RunsZ, double Largest, double LargestProbability, int LargestLine);

/// <summary>A direction in the space of the parameters with how well the data fix it.</summary>
/// <param name="SingularValue">Of the sensitivities over sigma, in the natural scales of the parameters: one over the standard deviation along the direction.</param>
/// <param name="Direction">Unit vector in the natural scales.</param>
/// <param name="Determined">False when the deviation along it is larger than half a natural scale.</param>
/// <param name="Words">For an undetermined direction.</param>
public sealed record FitDirection(double SingularValue, double[] Direction, bool Determined, string Words);

/// <summary>A reading worth taking next.</summary>
/// <param name="Source">Contact.</param>
/// <param name="Drain">Contact.</param>
/// <param name="Plus">Contact.</param>
/// <param name="Minus">Contact.</param>
/// <param name="Current">A.</param>
/// <param name="Sigma">Assumed standard deviation, V.</param>
/// <param name="Gain">By how much it shrinks the volume of the joint uncertainty: a factor above 1.</param>
/// <param name="Helped">Parameter whose standard error shrinks most.</param>
/// <param name="Before">Its standard error in natural scales before.</param>
/// <param name="After">And after.</param>
public sealed record NextReading(
    string Source, string Drain, string Plus, string Minus, double Current, double Sigma, double Gain, string Helped, double Before, double After);

/// <summary>What textbook formulas make of the same data.</summary>
/// <param name="Method">"uniform strip", "van der Pauw".</param>
/// <param name="Key">Which number.</param>
/// <param name="Unit">Unit of the numbers.</param>
/// <param name="Value">By the formula.</param>
/// <param name="Fitted">By the fit.</param>
/// <param name="Off">Formula less fit in standard errors of the fit; null when the fit has none.</param>
public sealed record FormulaValue(string Method, string Key, string Unit, double Value, double? Fitted, double? Off);

/// <summary>One start of a fit.</summary>
/// <param name="Axis">Where the axis began, rad; null when it is not free.</param>
/// <param name="Objective">Sum of squares (or robust loss) it reached on thinned data; null when it found no solution.</param>
public sealed record FitStart(double? Axis, double? Objective);

/// <summary>What a fit produced.</summary>
public sealed record FitResult
{
    /// <summary>The device as in its file.</summary>
    public required SheetDevice Device { get; init; }

    /// <summary>The device with the fitted numbers.</summary>
    public required SheetDevice Fitted { get; init; }

    /// <summary>The table.</summary>
    public required MeasuredVoltages Measured { get; init; }

    /// <summary>Parameters in the order of [fit].</summary>
    public required IReadOnlyList<FittedParameter> Parameters { get; init; }

    /// <summary>Correlations of the parameters; empty rows for those that are not determined.</summary>
    public required double[,] Correlation { get; init; }

    /// <summary>Covariance with the stated sigmas, SI.</summary>
    public required double[,] Covariance { get; init; }

    /// <summary>The data beside the model.</summary>
    public required IReadOnlyList<FittedVoltage> Data { get; init; }

    /// <summary>How well it fits.</summary>
    public required FitQuality Quality { get; init; }

    /// <summary>Singular values and directions, the best determined first.</summary>
    public required IReadOnlyList<FitDirection> Directions { get; init; }

    /// <summary>Readings worth taking next.</summary>
    public required IReadOnlyList<NextReading> Next { get; init; }

    /// <summary>Textbook formulas on the same data.</summary>
    public required IReadOnlyList<FormulaValue> Formulas { get; init; }

    /// <summary>Starts over the axis.</summary>
    public required IReadOnlyList<FitStart> Starts { get; init; }

    /// <summary>Largest numerical error of the model over the datum's sigma.</summary>
    public required double NumericalShare { get; init; }

    /// <summary>What was asked for.</summary>
    public required double WantedShare { get; init; }

    /// <summary>Robust loss.</summary>
    public required bool Robust { get; init; }

    /// <summary>The fit came to rest.</summary>
    public required bool Converged { get; init; }

    /// <summary>Steps of the last fit.</summary>
    public required int Steps { get; init; }

    /// <summary>States solved and adjoints solved in all.</summary>
    public required (int States, int Adjoints) Solves { get; init; }

    /// <summary>Unknowns of the mesh the fit ran on, and of the one its error is known from.</summary>
    public required (int Coarse, int Fine) Unknowns { get; init; }

    /// <summary>Warnings, each one sentence or two.</summary>
    public required IReadOnlyList<string> Warnings { get; init; }

    /// <summary>Cautions for the user.</summary>
    public IReadOnlyList<string> Cautions { get; init; } = [];

    /// <summary>Wall time per stage.</summary>
    public required IReadOnlyList<StageTime> Stages { get; init; }

    /// <summary>The fit came to rest and its numerical error is as small as wanted.</summary>
    public bool AllOk => Converged && NumericalShare <= WantedShare;
}
