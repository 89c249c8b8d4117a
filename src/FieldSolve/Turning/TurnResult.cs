using FieldSolve.Fields;
using FieldSolve.Readings;

namespace FieldSolve.Turning;

/// <summary>How the directions of a turn come about.</summary>
public enum TurnMode
{
    /// <summary>The first wiring stepped round a ring of contacts.</summary>
    Ring,

    /// <summary>Every wiring of the file is one direction.</summary>
    Wirings,

    /// <summary>One wiring; the crystal axis is turned.</summary>
    Axis,
}

/// <summary>One line of angles.csv.</summary>
/// <param name="DirectionDegrees">From source to drain in the lab frame, 0 to 360.</param>
/// <param name="AxisDegrees">From lab x to crystal a, 0 to 360.</param>
/// <param name="Row">The readings.</param>
public sealed record TurnRow(double DirectionDegrees, double AxisDegrees, CurveRow Row)
{
    /// <summary>Direction of the current from crystal a, degrees, 0 to 360.</summary>
    public double AngleDegrees => Degrees.Wrapped(DirectionDegrees - AxisDegrees);
}

/// <summary>The linear response of the same device at another anisotropy ratio.</summary>
/// <param name="Ratio">Conductance of the better over that of the worse crystal axis; sqrt(a b) is the device's.</param>
/// <param name="Points">One per direction.</param>
public sealed record RatioCurve(double Ratio, IReadOnlyList<RatioPoint> Points);

/// <summary>One direction of a <see cref="RatioCurve"/>.</summary>
/// <param name="DirectionDegrees">From source to drain in the lab frame.</param>
/// <param name="AxisDegrees">From lab x to crystal a.</param>
/// <param name="Wiring">Name.</param>
/// <param name="Along">V_along / I and its estimated numerical error, ohm; null without such a pair.</param>
/// <param name="Across">V_across / I likewise.</param>
public sealed record RatioPoint(
    double DirectionDegrees, double AxisDegrees, string Wiring, (double Value, double Error)? Along, (double Value, double Error)? Across)
{
    /// <summary>Direction of the current from crystal a, degrees, 0 to 360.</summary>
    public double AngleDegrees => Degrees.Wrapped(DirectionDegrees - AxisDegrees);
}

/// <summary>What a turn produced.</summary>
public sealed record TurnResult
{
    /// <summary>How the directions came about.</summary>
    public required TurnMode Mode { get; init; }

    /// <summary>The solves as of a drive whose wirings are the directions. When the axis is turned its rows all carry the one wiring's name.</summary>
    public required DriveResult Drive { get; init; }

    /// <summary>Rows by direction, then by current.</summary>
    public required IReadOnlyList<TurnRow> Rows { get; init; }

    /// <summary>Maps at the last current of three directions: the first, and those nearest to 45 and 90 degrees further on.</summary>
    public required IReadOnlyList<TurnMap> Maps { get; init; }

    /// <summary>What the curves say about the sheet; null when the run was cancelled.</summary>
    public required AngleFit? Fit { get; init; }

    /// <summary>Overlays at other anisotropy ratios.</summary>
    public required IReadOnlyList<RatioCurve> Ratios { get; init; }

    /// <summary>Solves asked for: directions times currents that are not zero times signs.</summary>
    public required int SolvedPoints { get; init; }

    /// <summary>Wall time of mesh, factors, error estimate and solves over <see cref="SolvedPoints"/>, s.</summary>
    public required double SecondsPerPoint { get; init; }
}

/// <summary>A map with the direction it belongs to.</summary>
/// <param name="DirectionDegrees">From source to drain in the lab frame.</param>
/// <param name="AxisDegrees">From lab x to crystal a.</param>
/// <param name="Map">At the last current.</param>
public sealed record TurnMap(double DirectionDegrees, double AxisDegrees, FieldMap Map);
