using System.Diagnostics;
using System.Globalization;
using BenchmarkDotNet.Attributes;
using FieldSolve.Device;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Turning;

namespace FieldSolve.Benchmarks;

/// <summary>
/// What does a direction cost? disc-12 at default error: turn over 12 directions, 5 currents and 2 signs (mesh, refinement, solves and fits) beside a drive of 3 wirings
/// over its 10 currents that are not zero. The set-up prints both per solved point, in wall and in processor time.
/// </summary>
public class TurnBenchmark
{
    private readonly SheetDevice device = Sample.Device();
    private SheetDevice ring = Sample.Device();

    [GlobalSetup]
    public void Prepare()
    {
        DriveSpec drive = device.Drive!;
        int[] contacts = [.. Enumerable.Range(0, device.Contacts.Count)];
        ring = device with { Turn = new TurnSpec("c", contacts), Drive = new DriveSpec(drive.To / 5, drive.To, 5, true, [], 0) };
        int drivePoints = device.Wirings.Count * drive.Currents.Count(c => c != 0) * 2;
        for (int round = 0; round < 3; round++)
        {
            (double wall, double cpu) = Timed(() => Drive());
            (double turnWall, double turnCpu) = Timed(() => Turn());
            int turnPoints = 12 * 5 * 2;
            Console.WriteLine(string.Create(
                CultureInfo.InvariantCulture,
                $"// per solved point: drive {1000 * wall / drivePoints:F1} ms wall, {1000 * cpu / drivePoints:F1} ms processor; turn {1000 * turnWall / turnPoints:F1} ms wall, {1000 * turnCpu / turnPoints:F1} ms processor; ratio {turnWall / turnPoints / (wall / drivePoints):F2} wall, {turnCpu / turnPoints / (cpu / drivePoints):F2} processor"));
        }
    }

    [Benchmark(Baseline = true, Description = "drive: 3 wirings, 60 solved points")]
    public DriveResult Drive() => DriveRun.Execute(device, new DriveOptions { Maps = MapChoice.None, ForPictures = false }, null, CancellationToken.None);

    [Benchmark(Description = "turn: 12 directions, 120 solved points, and fits")]
    public TurnResult Turn() => TurnRun.Execute(ring, new TurnOptions { ForPictures = false }, null, CancellationToken.None);

    private static (double Wall, double Processor) Timed(Action work)
    {
        using Process self = Process.GetCurrentProcess();
        TimeSpan before = self.TotalProcessorTime;
        long start = Stopwatch.GetTimestamp();
        work();
        double wall = Stopwatch.GetElapsedTime(start).TotalSeconds;
        self.Refresh();
        return (wall, (self.TotalProcessorTime - before).TotalSeconds);
    }
}
