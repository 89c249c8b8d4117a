using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Sessions;

namespace FieldSolve.Benchmarks;

/// <summary>How far do the coarse answers of the layout page lie from those of the drive, against their error bars, on all samples while every contact is moved about?</summary>
internal static class CoarseAnswers
{
    private const int Moves = 4;

    /// <summary>Prints one row per sample.</summary>
    public static void Print(TextWriter output)
    {
        output.WriteLine("| device | readings compared | difference over bar: median, 95 %, largest | even parts: median, 95 %, largest | bar over the largest reading, median | rows without readings: coarse, drive |");
        output.WriteLine("| --- | --- | --- | --- | --- | --- |");
        string folder = LayoutTimes.Copy();
        try
        {
            foreach (string path in Directory.GetFiles(folder, "*.toml").Order(StringComparer.Ordinal))
            {
                if (EditSession.Open(path).Session is { } session)
                {
                    Device(output, Path.GetFileName(path), session);
                }
            }
        }
        finally
        {
            Directory.Delete(folder, true);
        }
    }

    private static void Device(TextWriter output, string name, EditSession session)
    {
        List<double> values = [], evens = [], bars = [];
        int[] unanswered = [0, 0];
        QuickAnswer quick = new();
        var random = new Random(7);
        string[] contacts = [.. session.State.Device.Contacts.Select(c => c.Name), .. session.State.Device.Tips.Select(t => t.Name)];
        foreach (string contact in contacts)
        {
            double size = session.State.Device.Domain.Size;
            int moved = 0;
            for (int k = 0; k < Moves; k++)
            {
                Point2 at = session.State.Device.Contacts.Where(c => c.Name == contact).Select(c => c.Middle).Concat(session.State.Device.Tips.Where(t => t.Name == contact).Select(t => t.At)).First();
                Point2 to = at + new Point2(0.02 * size * (random.NextDouble() - 0.5), 0.02 * size * (random.NextDouble() - 0.5));
                try
                {
                    moved += session.Apply((t, d) => LayoutEdit.Move(t, d, contact, to), null).Count == 0 ? 1 : 0;
                }
                catch (LayoutEditException)
                {
                    continue;
                }

                // Every move is answered, so that the mesh has gone all the way.
                SheetDevice now = session.State.Device;
                LayoutAnswer answer = quick.Of(now, session.State.Version, now.Wirings.Select(w => w.Name).ToHashSet(StringComparer.Ordinal), CancellationToken.None);
                if (k == Moves - 1 && moved > 0 && answer.Failure is null)
                {
                    Compare(answer, DriveRun.Execute(now, new() { ForPictures = false }, null, CancellationToken.None), values, evens, bars, unanswered);
                }
            }
        }

        string Three(List<double> all)
        {
            double[] sorted = [.. all.Order()];
            return sorted.Length == 0 ? "-" : Line($"{LayoutTimes.Median(sorted):F2}, {LayoutTimes.At95(sorted):F2}, {sorted[^1]:F2}");
        }

        output.WriteLine(Line($"| {name} | {values.Count} | {Three(values)} | {Three(evens)} | {(bars.Count == 0 ? 0 : LayoutTimes.Median([.. bars.Order()])):E1} | {unanswered[0]}, {unanswered[1]} |"));
    }

    private static void Compare(LayoutAnswer coarse, DriveResult good, List<double> values, List<double> evens, List<double> bars, int[] unanswered)
    {
        foreach (IGrouping<string, CurveRow> wiring in coarse.Rows.GroupBy(r => r.Wiring))
        {
            CurveRow fast = wiring.MaxBy(r => Math.Abs(r.Current))!, sure = good.Rows.First(r => r.Wiring == wiring.Key && r.Current == fast.Current);
            if (fast.Readings.Count == 0 || sure.Readings.Count == 0)
            {
                unanswered[0] += fast.Readings.Count == 0 ? 1 : 0;
                unanswered[1] += sure.Readings.Count == 0 ? 1 : 0;
                continue;
            }

            double most = fast.Readings.Max(r => Math.Abs(r.Value));
            foreach ((Reading f, Reading s) in fast.Readings.Zip(sure.Readings))
            {
                values.Add(Math.Abs(f.Value - s.Value) / f.Error);
                bars.Add(f.Error / most);
                if (f.Even is { } fe && s.Even is { } se && f.EvenError > 0)
                {
                    evens.Add(Math.Abs(fe - se) / f.EvenError.Value);
                }
            }
        }
    }

    private static string Line(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);
}
