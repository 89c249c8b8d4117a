using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Pictures and the report: drawn when all numbers are written, so that a cancelled run lacks nothing else.</summary>
internal static class PictureStage
{
    /// <summary>Draws.</summary>
    /// <param name="clock">Adds up the stages.</param>
    /// <param name="screen">Is told.</param>
    /// <param name="draw">What to draw; ends early with an <see cref="OperationCanceledException"/>.</param>
    /// <returns>True when it was cancelled.</returns>
    public static bool IsCancelled(StageClock clock, Screen screen, Action draw)
    {
        screen.Report(new("drawing pictures", 0, 0));
        try
        {
            clock.Time("pictures", draw);
            return false;
        }
        catch (OperationCanceledException)
        {
            return true;
        }
    }
}
