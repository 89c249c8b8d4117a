namespace FieldSolve.Measured;

/// <summary>What a measured map shows.</summary>
public enum MapQuantity
{
    /// <summary>Potential, V.</summary>
    Potential,

    /// <summary>Magnitude of the field, V/m.</summary>
    Field,
}

/// <summary>One point of a measured map.</summary>
/// <param name="X">In the map's own frame, metres.</param>
/// <param name="Y">Metres.</param>
/// <param name="Value">V or V/m.</param>
/// <param name="Sigma">Standard deviation, same unit; null when nothing is said about it.</param>
/// <param name="Line">Line of the table.</param>
public sealed record MapPoint(double X, double Y, double Value, double? Sigma, int Line);

/// <summary>A measured map: irregular points or a raster.</summary>
/// <param name="Path">As given.</param>
/// <param name="Sha256">Of the file's bytes.</param>
/// <param name="Quantity">What it shows.</param>
/// <param name="Points">In the order of the table.</param>
public sealed record MeasuredMap(string Path, string Sha256, MapQuantity Quantity, IReadOnlyList<MapPoint> Points);
