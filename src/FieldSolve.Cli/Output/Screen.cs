using System.Diagnostics;
using System.Globalization;
using System.Runtime.InteropServices;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>What goes to the terminal: progress to standard error when it is one, the summary to standard output.</summary>
internal sealed class Screen : IProgress<RunProgress>
{
    private static readonly TimeSpan Tick = TimeSpan.FromSeconds(1);

    private readonly bool quiet;
    private readonly bool live;
    private readonly Lock gate = new();
    private readonly Timer? life;
    private readonly PosixSignalRegistration? stop;
    private volatile bool stopping;
    private string? shown;
    private long since;
    private int width;

    /// <param name="quiet">Show nothing.</param>
    public Screen(bool quiet)
    {
        this.quiet = quiet;
        live = !quiet && !Console.IsErrorRedirected;
        life = live ? new(_ => Live(), null, Tick, Tick) : null;

        // Ctrl-C is answered at once, though a large sheet may take a moment to come to rest. Who ends the run is not decided here.
        stop = live ? PosixSignalRegistration.Create(PosixSignal.SIGINT, _ => Stop()) : null;
    }

    /// <summary>Overwrites the progress line.</summary>
    public void Report(RunProgress value)
    {
        if (!live || stopping)
        {
            return;
        }

        string text = value.Total > 0 && value.Done > 0 ? $"{value.Stage}: {value.Done} of {value.Total} rows" : value.Stage;
        lock (gate)
        {
            (shown, since) = (text, Stopwatch.GetTimestamp());
            Write(text);
        }
    }

    private void Stop()
    {
        Report(new("stopping", 0, 0));
        stopping = true;
    }

    // A step that takes long shows for how long it has been at it.
    private void Live()
    {
        lock (gate)
        {
            if (shown is not null && Stopwatch.GetElapsedTime(since) is { TotalSeconds: >= 2 } time)
            {
                Write(string.Create(CultureInfo.InvariantCulture, $"{shown}, {time.TotalSeconds:F0} s"));
            }
        }
    }

    private void Write(string text)
    {
        Console.Error.Write('\r' + text.PadRight(width));
        width = Math.Max(width, text.Length);
    }

    /// <summary>Removes the progress line.</summary>
    public void Clear()
    {
        lock (gate)
        {
            shown = null;
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
