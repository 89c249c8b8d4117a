using FieldSolve.Geometry;

namespace FieldSolve.Device;

/// <summary>A polygon as a file gives it.</summary>
/// <param name="Name">Its feature's name; null if it has none.</param>
/// <param name="Rings">Outer ring, then holes; in the file's unit, without the repeated last point.</param>
internal sealed record PolygonFeature(string? Name, IReadOnlyList<IReadOnlyList<Point2>> Rings);

/// <summary>A file of polygons cannot be read.</summary>
internal sealed class PolygonFileException : Exception
{
    public PolygonFileException(string message)
        : base(message)
    {
    }

    public PolygonFileException(string message, Place at)
        : base(message) => At = at;

    /// <summary>Where in that file; null if its format does not tell.</summary>
    public Place? At { get; }
}
