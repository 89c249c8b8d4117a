using System.Diagnostics;
using System.Globalization;
using FieldSolve.Runs;

namespace FieldSolve.Cli.Output;

/// <summary>Progress of a tolerance run with a rate and a time left.</summary>
internal sealed class SampleProgress(Screen screen) : IProgress<RunProgress>
{
    private readonly Stopwatch clock = new();
    private int first;

    public void Report(RunProgress value)
    {
        if (value.Total == 0)
        {
            screen.Report(value);
            return;
        }

        if (!clock.IsRunning)
        {
            first = value.Done;
            clock.Start();
        }

        double rate = (value.Done - first) / Math.Max(clock.Elapsed.TotalSeconds, 1e-3);
        string left = rate > 0 ? string.Create(CultureInfo.InvariantCulture, $", {rate:F1} per second, about {Math.Ceiling((value.Total - value.Done) / rate):F0} s left") : "";
        screen.Report(new(string.Create(CultureInfo.InvariantCulture, $"{value.Stage}: {value.Done} of {value.Total} samples{left}"), 0, 0));
    }
}
