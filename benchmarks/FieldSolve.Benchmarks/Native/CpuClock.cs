using System.Runtime.InteropServices;

namespace FieldSolve.Benchmarks.Native;

/// <summary>Processor seconds of the calling thread, so that other work on the machine counts little.</summary>
internal static unsafe partial class CpuClock
{
    private const int ThreadClock = 3;

    /// <summary>Seconds since some fixed moment; on other systems than Linux those of the whole process.</summary>
    public static double Now()
    {
        if (!OperatingSystem.IsLinux())
        {
            return Environment.CpuUsage.TotalTime.TotalSeconds;
        }

        long* time = stackalloc long[2];
        return clock_gettime(ThreadClock, time) == 0 ? time[0] + (1e-9 * time[1]) : throw new InvalidOperationException("The thread has no clock.");
    }

    /// <summary>Median of the processor seconds of several runs.</summary>
    public static double Median(int runs, Action action)
    {
        double[] seconds = new double[runs];
        for (int i = 0; i < runs; i++)
        {
            double from = Now();
            action();
            seconds[i] = Now() - from;
        }

        return Median(seconds);
    }

    /// <summary>Median of values, which are reordered.</summary>
    public static double Median(double[] values)
    {
        Array.Sort(values);
        return values[(values.Length - 1) / 2];
    }

    [LibraryImport("libc")]
    private static partial int clock_gettime(int clock, long* time);
}
