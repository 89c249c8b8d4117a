using System.Diagnostics;
using System.Globalization;
using FieldSolve.Device;
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
            string folder = Copy();
            try
            {
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
                AccurateAnswer accurate = new();
                SheetDevice Rest(int k)
                {
                    session.Apply((t, d) => LayoutEdit.Move(t, d, contact, path(k)), null);
                    return session.State.Device;
                }

                accurate.Drive(Rest(200), session.State.Device, 0, CancellationToken.None);
                accurate.Prepare();
                int served = 0;
                (wall, work) = Times(Accurate, k => served += accurate.Moved(Rest(201 + k), [session.State.Device.Wirings[0]], 0, CancellationToken.None) is null ? 0 : 1);
                output.WriteLine(Line($"{file}, move to accurate answer of the wiring on show, {served} of {Accurate} on the moved mesh: median {Median(wall):F0} ms, 95 % {At95(wall):F0} ms; processor time median {Median(work):F0} ms, 95 % {At95(work):F0} ms"));
                (wall, work) = Times(Accurate, k => accurate.Drive(Rest(220 + k), session.State.Device, 0, CancellationToken.None));
                output.WriteLine(Line($"{file}, move to the whole drive: median {Median(wall):F0} ms, 95 % {At95(wall):F0} ms; processor time median {Median(work):F0} ms, 95 % {At95(work):F0} ms"));
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

    /// <summary>A folder of its own with the sample devices, since a session belongs to a file.</summary>
    internal static string Copy()
    {
        string folder = Directory.CreateTempSubdirectory("fieldsolve").FullName;
        foreach (string from in Directory.GetFiles(Path.GetDirectoryName(Sample.Path)!))
        {
            File.Copy(from, Path.Combine(folder, Path.GetFileName(from)));
        }

        return folder;
    }

    private static (double[] Wall, double[] Work) Times(int count, Action<int> run)
    {
        double[] wall = new double[count], work = new double[count];
        for (int k = 0; k < count; k++)
        {
            TimeSpan start = Environment.CpuUsage.TotalTime;
            Stopwatch watch = Stopwatch.StartNew();
            run(k);
            wall[k] = watch.Elapsed.TotalMilliseconds;
            work[k] = (Environment.CpuUsage.TotalTime - start).TotalMilliseconds;
        }

        Array.Sort(wall);
        Array.Sort(work);
        return (wall, work);
    }

    internal static double Median(double[] sorted) => sorted[sorted.Length / 2];

    internal static double At95(double[] sorted) => sorted[Math.Min(sorted.Length - 1, (int)Math.Ceiling(0.95 * sorted.Length) - 1)];

    private static string Line(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
