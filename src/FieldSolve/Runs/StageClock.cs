using System.Diagnostics;
using FieldSolve.Readings;

namespace FieldSolve.Runs;

/// <summary>Adds up the wall time of the stages of a run, in the order in which they first began.</summary>
public sealed class StageClock
{
    private readonly List<string> names = [];
    private readonly List<double> seconds = [];

    /// <summary>Runs a stage.</summary>
    public T Time<T>(string stage, Func<T> work)
    {
        ArgumentNullException.ThrowIfNull(work);
        int k = names.IndexOf(stage);
        if (k < 0)
        {
            k = names.Count;
            names.Add(stage);
            seconds.Add(0);
        }

        long start = Stopwatch.GetTimestamp();
        try
        {
            return work();
        }
        finally
        {
            seconds[k] += Stopwatch.GetElapsedTime(start).TotalSeconds;
        }
    }

    /// <summary>Runs a stage without a result.</summary>
    public void Time(string stage, Action work) => Time(stage, () =>
    {
        work();
        return 0;
    });

    /// <summary>The times so far.</summary>
    public IReadOnlyList<StageTime> Times => [.. names.Select((n, k) => new StageTime(n, seconds[k]))];
}
