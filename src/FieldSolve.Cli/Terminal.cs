using FieldSolve.Runs;

namespace FieldSolve.Cli;

/// <summary>What goes to the terminal: progress to standard error when it is one, the summary to standard output.</summary>
internal sealed class Terminal(bool quiet) : IProgress<RunProgress>
{
    private readonly bool live = !quiet && !Console.IsErrorRedirected;
    private readonly Lock gate = new();
    private int width;

    /// <summary>Overwrites the progress line.</summary>
    public void Report(RunProgress value)
    {
        if (!live)
        {
            return;
        }

        string text = value.Total > 0 && value.Done > 0 ? $"{value.Stage}: {value.Done} of {value.Total} rows" : value.Stage;
        lock (gate)
        {
            Console.Error.Write('\r' + text.PadRight(width));
            width = Math.Max(width, text.Length);
        }
    }

    /// <summary>Removes the progress line.</summary>
    public void Clear()
    {
        lock (gate)
        {
            if (live && width > 0)
            {
                Console.Error.Write('\r' + new string(' ', width) + '\r');
                width = 0;
            }
        }
    }

    /// <summary>Writes to standard output unless quiet; a closed pipe is no fault.</summary>
    public void Print(string text)
    {
        if (quiet)
        {
            return;
        }

        try
        {
            Console.Out.Write(text);
            Console.Out.Flush();
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            // The reader went away, for example "| head", or standard output was closed from the start; the results are in the files.
        }
    }
}
