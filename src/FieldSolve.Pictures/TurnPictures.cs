using FieldSolve.Turning;

namespace FieldSolve.Pictures;

/// <summary>All pictures of a turn.</summary>
public static class TurnPictures
{
    /// <summary>Draws.</summary>
    public static IReadOnlyList<PictureFile> Write(TurnResult result, string folder, CancellationToken cancel) => [];
}

/// <summary>The report of a turn.</summary>
public static class TurnReport
{
    /// <summary>Writes.</summary>
    public static void Write(TurnResult result, IReadOnlyList<PictureFile> pictures, string path)
    {
    }
}
