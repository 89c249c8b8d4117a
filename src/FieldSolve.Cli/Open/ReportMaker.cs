using FieldSolve.Pictures;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Sessions;

namespace FieldSolve.Cli.Open;

/// <summary>The report of a layout, saved or not; what is drawn on the way stays in a temporary folder that is removed.</summary>
internal static class ReportMaker
{
    /// <summary>The bytes of the page, those that <c>drive</c> would write for a file of this text.</summary>
    /// <exception cref="OperationCanceledException">The reader went away.</exception>
    public static byte[] Of(SessionState state, CancellationToken cancel)
    {
        DriveResult result = DriveRun.Execute(state.Device, new DriveOptions { Maps = MapChoice.None }, null, cancel);
        cancel.ThrowIfCancellationRequested();
        string folder = Directory.CreateTempSubdirectory("fieldsolve-").FullName;
        try
        {
            IReadOnlyList<PictureFile> drawn = DrivePictures.Write(result, Path.Combine(folder, "pictures"), cancel);
            string path = Path.Combine(folder, "report.html");
            ReportPage.Write(result, drawn, path);
            return File.ReadAllBytes(path);
        }
        finally
        {
            Directory.Delete(folder, recursive: true);
        }
    }
}
