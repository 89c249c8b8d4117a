using System.Diagnostics;
using System.Globalization;
using FieldSolve.Geometry;
using FieldSolve.Sessions;

namespace FieldSolve.Benchmarks;

/// <summary>
/// How long does the layout page's engine take from a move of a contact to the coarse and to the accurate answer, by the wall clock and by the processor's, and does memory
/// stay flat over many moves? The page adds a frame of the screen and the time to paint.
/// </summary>
internal static class LayoutTimes
{
    private const int Coarse = 60, Accurate = 6;

    /// <summary>Prints the times.</summary>
    /// <param name="output">Where to.</param>
    /// <param name="drags">Moves for the look at memory.</param>
    public static void Print(TextWriter output, int drags)
    {
        foreach ((string file, string contact, Func<int, Point2> path) in new (string, string, Func<int, Point2>)[]
        {
            ("disc-12.toml", "c4", k => new Point2(4e-6, 0).Turned((90 + (4 * Math.Sin(0.1 * k))) * Math.PI / 180)),
            ("flake.toml", "tip", k => new Point2(-2.8e-6 + (2e-7 * Math.Sin(0.1 * k)), 0.4e-6)),
        })
        {
            string folder = Directory.CreateTempSubdirectory("fieldsolve").FullName;
            try
            {
                foreach (string from in Directory.GetFiles(Path.GetDirectoryName(Sample.Path)!))
                {
                    File.Copy(from, Path.Combine(folder, Path.GetFileName(from)));
                }

                EditSession session = EditSession.Open(Path.Combine(folder, file)).Session!;
                QuickAnswer quick = new();
                HashSet<string> first = [session.State.Device.Wirings[0].Name];
                LayoutAnswer Move(int k)
                {
                    session.Apply((t, d) => LayoutEdit.Move(t, d, contact, path(k)), "drag");
                    SessionState state = session.State;
                    return quick.Of(state.Device, state.Version, first, CancellationToken.None);
                }

                for (int k = 0; k < 40; k++)
                {
                    Move(k);
                }

                (double[] wall, double[] work) = Times(Coarse, k => Move(40 + k));
                output.WriteLine(Line($"{file}, move to coarse answer: median {Median(wall):F0} ms, 95 % {At95(wall):F0} ms; processor time median {Median(work):F0} ms, 95 % {At95(work):F0} ms"));
                (wall, work) = Times(Accurate, k =>
                {
                    session.Apply((t, d) => LayoutEdit.Move(t, d, contact, path(200 + k)), null);
                    Runs.DriveRun.Execute(session.State.Device, new Runs.DriveOptions { Maps = Runs.MapChoice.None, ForPictures = false, Frames = true }, null, CancellationToken.None);
                });
                output.WriteLine(Line($"{file}, move to accurate answer: median {Median(wall):F0} ms, 95 % {At95(wall):F0} ms; processor time median {Median(work):F0} ms, 95 % {At95(work):F0} ms"));
                if (drags > 0)
                {
                    long before = GC.GetTotalMemory(true);
                    for (int k = 0; k < drags; k++)
                    {
                        Move(1000 + k);
                    }

                    output.WriteLine(Line($"{file}, managed memory kept: {before / 1e6:F1} MB before, {GC.GetTotalMemory(true) / 1e6:F1} MB after {drags} moves"));
                }
            }
            finally
            {
                Directory.Delete(folder, true);
            }
        }
    }

    private static (double[] Wall, double[] Work) Times(int count, Action<int> run)
    {
        double[] wall = new double[count], work = new double[count];
        using Process self = Process.GetCurrentProcess();
        for (int k = 0; k < count; k++)
        {
            TimeSpan start = self.TotalProcessorTime;
            Stopwatch watch = Stopwatch.StartNew();
            run(k);
            wall[k] = watch.Elapsed.TotalMilliseconds;
            self.Refresh();
            work[k] = (self.TotalProcessorTime - start).TotalMilliseconds;
        }

        Array.Sort(wall);
        Array.Sort(work);
        return (wall, work);
    }

    private static double Median(double[] sorted) => sorted[sorted.Length / 2];

    private static double At95(double[] sorted) => sorted[Math.Min(sorted.Length - 1, (int)Math.Ceiling(0.95 * sorted.Length) - 1)];

    private static string Line(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
