using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Geometry;
using FieldSolve.Measured;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>A number of a registration.</summary>
/// <param name="Value">SI (rad, m, or plain).</param>
/// <param name="StandardError">0 when it was not free.</param>
public readonly record struct Registered(double Value, double StandardError)
{
    /// <summary>Share of the noise in the standard error, scaled where the residuals have a pattern.</summary>
    public double Noise { get; init; }

    /// <summary>Share of the computed map's own error.</summary>
    public double Numerical { get; init; }

    /// <summary>How far another weighting of the points moves the number, where the misfit has a pattern, and another width of the patch, where there is one; else 0.</summary>
    public double Weighting { get; init; }
}

/// <summary>One point of the map laid on the sheet.</summary>
/// <param name="Point">As measured.</param>
/// <param name="Place">Where it lies on the sheet, metres.</param>
/// <param name="Model">What the probe would show there, in the unit of the map; null outside the sheet.</param>
/// <param name="Sigma">Standard deviation used.</param>
/// <param name="Weight">Near 1, less for what the registration took for an outlier, 0 where it counts nothing.</param>
public sealed record OverlaidPoint(MapPoint Point, Point2 Place, double? Model, double Sigma, double Weight)
{
    /// <summary>Error that the computed map may have here, in the unit of the map; 0 outside the sheet.</summary>
    public double MapError { get; init; }

    /// <summary>What the patch found adds to the computed map, in the unit of the map; not part of <see cref="Model"/>.</summary>
    public double OfPatch { get; init; }

    /// <summary>Measured less model; null outside the sheet.</summary>
    public double? Residual => Point.Value - Model;
}

/// <summary>A patch of other conductance in the sheet, as far from outside of it one can tell: a dipole of missing current.</summary>
/// <param name="X">Middle, m.</param>
/// <param name="Y">Middle, m.</param>
/// <param name="Missing">Missing current times area along the undisturbed current, A m; negative for a patch that conducts better.</param>
/// <param name="Radius">Radius of a disc without any conductance that would do the same in a wide isotropic sheet, m; 0 for a patch that conducts better.</param>
public sealed record OverlayPatch(Registered X, Registered Y, Registered Missing, double Radius);

/// <summary>A place where the map differs from the sheet by more than its noise.</summary>
/// <param name="Place">Metres, on the sheet.</param>
/// <param name="Mean">Mean residual of the points around, in the unit of the map.</param>
/// <param name="Significance">The same in standard deviations of that mean.</param>
/// <param name="Radius">Distance of the farthest of these points, metres.</param>
public sealed record OverlayPlace(Point2 Place, double Mean, double Significance, double Radius);

/// <summary>How well one wiring describes the map.</summary>
/// <param name="Wiring">Name.</param>
/// <param name="Current">A.</param>
/// <param name="Misfit">Robust root mean square of the residuals over sigma.</param>
public sealed record OverlayCandidate(string Wiring, double Current, double Misfit);

/// <summary>What an overlay produced.</summary>
public sealed record OverlayResult
{
    /// <summary>The device.</summary>
    public required SheetDevice Device { get; init; }

    /// <summary>The measured map.</summary>
    public required MeasuredMap Measured { get; init; }

    /// <summary>The computed map it was matched with.</summary>
    public required FieldMap Map { get; init; }

    /// <summary>Row of the drive behind it, with the numerical errors of its voltages.</summary>
    public required CurveRow Row { get; init; }

    /// <summary>Wirings tried, the best first.</summary>
    public required IReadOnlyList<OverlayCandidate> Candidates { get; init; }

    /// <summary>Shift along x that carries the map onto the sheet, m.</summary>
    public required Registered ShiftX { get; init; }

    /// <summary>Shift along y, m.</summary>
    public required Registered ShiftY { get; init; }

    /// <summary>Counter-clockwise turn about <see cref="Centre"/>, rad.</summary>
    public required Registered Turn { get; init; }

    /// <summary>Magnification about the same point.</summary>
    public required Registered Scale { get; init; }

    /// <summary>Gain of the probe.</summary>
    public required Registered Gain { get; init; }

    /// <summary>Offset of the probe, in the unit of the map.</summary>
    public required Registered Offset { get; init; }

    /// <summary>What shift, turn and scale refer to: the middle of the sheet's bounding box, metres. A point p of the map lies at c + scale R(turn)(p - c) + shift.</summary>
    public required Point2 Centre { get; init; }

    /// <summary>The points on the sheet.</summary>
    public required IReadOnlyList<OverlaidPoint> Points { get; init; }

    /// <summary>Root mean square of the residuals, in the unit of the map.</summary>
    public required double Rms { get; init; }

    /// <summary>Root mean square of the standard deviations.</summary>
    public required double Noise { get; init; }

    /// <summary>The noise was not given and follows from the residuals themselves.</summary>
    public required bool NoiseIsEstimated { get; init; }

    /// <summary>A patch that was fitted along, since the residuals of the sheet without one had its pattern; null for none.</summary>
    public OverlayPatch? Patch { get; init; }

    /// <summary>Share of the points on the sheet that count nothing in the registration.</summary>
    public required double Rejected { get; init; }

    /// <summary>Residuals of the others over what noise and the computed map's error make of them.</summary>
    public required double Misfit { get; init; }

    /// <summary>How much larger means over neighbouring points scatter than noise makes them; the share of the noise in the errors is scaled by it.</summary>
    public required double Structure { get; init; }

    /// <summary>The misfit has a pattern (a fault of the sheet or of the file's law): the numbers depend on the weights, which their errors say.</summary>
    public required bool IsStructured { get; init; }

    /// <summary>Places beyond the noise, the worst first.</summary>
    public required IReadOnlyList<OverlayPlace> Places { get; init; }

    /// <summary>Registration came to rest inside its bounds.</summary>
    public required bool Converged { get; init; }

    /// <summary>Warnings.</summary>
    public required IReadOnlyList<string> Warnings { get; init; }

    /// <summary>Wall times.</summary>
    public required IReadOnlyList<StageTime> Stages { get; init; }

    /// <summary>Unit of the map's values.</summary>
    public string Unit => Measured.Quantity == MapQuantity.Potential ? "V" : "V/m";
}
