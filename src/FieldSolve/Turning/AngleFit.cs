using FieldSolve.Laws;

namespace FieldSolve.Turning;

/// <summary>A value with its error.</summary>
/// <param name="Value">SI, or degrees.</param>
/// <param name="Error">From the misfit and the numerical errors of the data; not an experimental error.</param>
public readonly record struct Fitted(double Value, double Error);

/// <summary>A conductance tensor recovered from the curves.</summary>
/// <param name="Sheet">The tensor; null when the formula has no passive sheet for these curves.</param>
/// <param name="AnisotropyRatio">Higher over lower principal resistivity, at least 1.</param>
/// <param name="RatioAOverB">Conductance along a over that along b; a is the principal axis nearest to the file's axis.</param>
/// <param name="AxisDegrees">From lab x to a; null when the sheet is isotropic within its errors.</param>
/// <param name="SheetResistance">sqrt(rho_a rho_b), ohm.</param>
/// <param name="HallResistance">ohm.</param>
/// <param name="Misfit">Root mean square of data minus model, ohm.</param>
/// <param name="Signal">Root mean square of the data, ohm.</param>
public sealed record FittedTensor(
    PrincipalSheet? Sheet, Fitted? AnisotropyRatio, Fitted? RatioAOverB, Fitted? AxisDegrees, Fitted? SheetResistance, Fitted? HallResistance,
    double Misfit, double Signal);

/// <summary>Second-order elements recovered from the even parts, in the frame of the tensor they go with.</summary>
/// <param name="Elements">d11, d12, d16, d21, d22, d26 in A m/V²; an element that the curves do not determine is null.</param>
/// <param name="Misfit">Root mean square of data minus model, ohm/A.</param>
/// <param name="Signal">Root mean square of the data, ohm/A.</param>
public sealed record FittedSecondOrder(IReadOnlyList<Fitted?> Elements, double Misfit, double Signal)
{
    /// <summary>Names of the elements.</summary>
    public static IReadOnlyList<string> Names { get; } = ["d11", "d12", "d16", "d21", "d22", "d26"];
}

/// <summary>The published formula for a strip with one mirror line, fitted to V_across_even / V_along_odd².</summary>
/// <param name="AlongA">The mirror line lies along a, else along b; the better of the two fits.</param>
/// <param name="Perpendicular">d12 (mirror line along a) or d21 (along b), A m/V².</param>
/// <param name="Mixed">d11 - 2 r² d26 or d22 - 2 r² d16, A m/V².</param>
/// <param name="ResistivityRatio">r: resistivity across the mirror line over that along it.</param>
/// <param name="Misfit">Root mean square of data minus formula, 1/V.</param>
/// <param name="Signal">Root mean square of the data, 1/V.</param>
public sealed record SingleMirror(bool AlongA, Fitted Perpendicular, Fitted Mixed, double ResistivityRatio, double Misfit, double Signal);

/// <summary>Fourier content of a curve over the angle of the current from crystal a.</summary>
/// <param name="Curve">"along_odd", "across_odd", "along_even", "across_even".</param>
/// <param name="Unit">"ohm" for V/I, "ohm/A" for V/I².</param>
/// <param name="Terms">Order n with the coefficients of cos(n phi) and sin(n phi); n = 0 first.</param>
public sealed record AngleHarmonics(string Curve, string Unit, IReadOnlyList<(int Order, Fitted Cos, Fitted Sin)> Terms);

/// <summary>What the curves of a turn say about the sheet, by the formulas for a uniform strip and by this device's own geometry.</summary>
public sealed record AngleFit
{
    /// <summary>The sheet of the device file.</summary>
    public required PrincipalSheet Law { get; init; }

    /// <summary>Its second-order elements; all zero when it has none.</summary>
    public required SecondOrder LawSecond { get; init; }

    /// <summary>The uniform-strip formulas; null when the data do not suffice.</summary>
    public required FittedTensor? Strip { get; init; }

    /// <summary>The strip fit as formulas; null without the fit, or where the directions have strips of different shape.</summary>
    public required StripFormula? StripCurve { get; init; }

    /// <summary>The finite-element response of this device; null when the data do not suffice.</summary>
    public required FittedTensor? Geometry { get; init; }

    /// <summary>The single-mirror formula of a strip; null without along and across even parts.</summary>
    public required SingleMirror? Mirror { get; init; }

    /// <summary>All six elements by the strip's formula, in the strip fit's frame.</summary>
    public required FittedSecondOrder? StripSecond { get; init; }

    /// <summary>All six elements by this device's response, in the geometry fit's frame.</summary>
    public required FittedSecondOrder? GeometrySecond { get; init; }

    /// <summary>Fourier content of the curves in the limit of small drive.</summary>
    public required IReadOnlyList<AngleHarmonics> Harmonics { get; init; }

    /// <summary>Directions the fits use.</summary>
    public required int Directions { get; init; }
}
