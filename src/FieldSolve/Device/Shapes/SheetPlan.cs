using FieldSolve.Geometry;

namespace FieldSolve.Device;

/// <summary>What a sheet shape makes of its keys: the rim as drawn and the places on it that contacts can name.</summary>
/// <param name="Shape">The shape's key.</param>
/// <param name="Drawn">The rim before any dead edge.</param>
internal sealed record SheetPlan(string Shape, Outline Drawn)
{
    /// <summary>The outer rim is a circle about the origin, so that contacts can sit at an angle.</summary>
    public bool IsRound { get; init; }

    /// <summary>Middles of the straight ends by the name that <c>end</c> takes, metres.</summary>
    public IReadOnlyList<(string Name, Point2 Middle)> Ends { get; init; } = [];

    /// <summary>Middles of the ends of the arms, in listed order, metres.</summary>
    public IReadOnlyList<(Point2 Top, Point2 Bottom)> Arms { get; init; } = [];

    /// <summary>Loops of the rim by the name that <c>rim</c> takes.</summary>
    public IReadOnlyList<(string Name, int Loop)> Rims { get; init; } = [];

    /// <summary>Unit of the file an outline came from, in which files of pads are read by default; null for other shapes.</summary>
    public Quantities.Unit? FileUnit { get; init; }
}
