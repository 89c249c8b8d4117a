using System.Collections.Concurrent;
using FieldSolve.Device;
using FieldSolve.Geometry;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Sessions;
using FieldSolve.Tests.EndToEndTests;

namespace FieldSolve.Tests.SessionsTests;

/// <summary>Coarse and accurate answers.</summary>
public sealed class AnswerLoopTests : IDisposable
{
    private static readonly TimeSpan Long = TimeSpan.FromMinutes(2);
    private readonly TempFolder folder = new("answers");

    public void Dispose() => folder.Dispose();

    private static readonly string Round = """
        [sheet]
        disc = { diameter = "8 um" }
        [law]
        kind = "quadratic"
        axis = "20 deg"
        a = "4 mS"
        b = "1 mS"
        d12 = "4e-10 A m/V^2"
        field_limit = "400 kV/m"
        [[contacts]]
        ring = 6
        width = "0.9 um"
        prefix = "c"
        [[wiring]]
        name = "w"
        source = "c4"
        drain = "c1"
        along = ["c3", "c2"]
        across = ["c3", "c5"]
        [drive]
        current = { from = "0 uA", to = "200 uA", steps = 3 }
        both_signs = true
        [mesh]
        error = 2e-4
        even_error = 5e-3
        """;

    [Fact]
    public void Two_hundred_moves_leave_one_answer_the_last_and_it_is_that_of_drive()
    {
        EditSession session = EditSession.Open(folder.Write("round.toml", Round)).Session!;
        ConcurrentQueue<LayoutAnswer> answers = [];
        using ManualResetEventSlim moved = new(), done = new();
        using (AnswerLoop loop = new(session, () => new HashSet<string>(), answer =>
        {
            answers.Enqueue(answer);

            // The first answer is still on its way while all the moves are made.
            moved.Wait(Long);
            if (answer.Drive is not null && answer.Version > 200)
            {
                done.Set();
            }
        }))
        {
            while (answers.IsEmpty)
            {
                Thread.Sleep(5);
            }

            for (int k = 1; k <= 200; k++)
            {
                double angle = (120 + (0.05 * k)) * Math.PI / 180;
                Assert.Empty(session.Apply((t, d) => LayoutEdit.Move(t, d, "c3", new Point2(4e-6, 0).Turned(angle)), "drag"));
            }

            moved.Set();
            Assert.True(done.Wait(Long));
        }

        // Passed over, not queued: the coarse answer that was under way, then the last layout's two.
        Assert.Equal([(1, false), (201, false), (201, true)], answers.Select(a => (a.Version, a.IsAccurate)));
        LayoutAnswer last = answers.Last();
        Assert.Null(last.Failure);
        Assert.Equal(SaveOutcome.Saved, session.Save(overwrite: false));
        DriveResult saved = DriveRun.Execute(DeviceFile.Read(folder["round.toml"]).Device!, new DriveOptions(), null, CancellationToken.None);
        Assert.Equal(saved.Rows.Count, last.Rows.Count);
        Assert.All(saved.Rows.Zip(last.Rows), p => Assert.Equal(p.First.Readings, p.Second.Readings));
    }

    /// <summary>
    /// The first accurate answer after a drag comes from the mesh of the last drive with its nodes moved. It lies within the bars of what the drive command
    /// says for the saved file with the same shift, and the drag changed more than the bars.
    /// </summary>
    [Fact]
    public void A_drag_changes_the_readings_by_what_drive_with_a_shift_gives()
    {
        string file = folder.Write("round.toml", Round.Replace("error = 2e-4", "error = 1e-3", StringComparison.Ordinal).Replace("even_error = 5e-3", "even_error = 2e-2", StringComparison.Ordinal));
        EditSession session = EditSession.Open(file).Session!;
        AccurateAnswer accurate = new();
        Wiring[] shown = [.. session.State.Device.Wirings];
        Assert.Null(accurate.Moved(session.State.Device, shown, 1, CancellationToken.None));
        CurveRow start = accurate.Drive(session.State.Device, session.State.Device, 1, CancellationToken.None).Rows[^1];
        Assert.Empty(session.Apply((t, d) => LayoutEdit.Move(t, d, "c3", new Point2(4e-6, 0).Turned(122.5 * Math.PI / 180)), null));
        LayoutAnswer answer = accurate.Moved(session.State.Device, shown, 2, CancellationToken.None)!;
        Assert.True(answer.IsAccurate);
        Assert.Null(answer.Drive);
        Assert.Equal(3, answer.Rows.Count);
        CurveRow after = answer.Rows[^1];

        // The arc of 2.5 degrees on a radius of 4 um.
        string shift = string.Create(System.Globalization.CultureInfo.InvariantCulture, $"c3={4e3 * 2.5 * Math.PI / 180:F6}nm");
        Assert.Equal(0, Command.Run("drive", file, "--shift", shift, "--no-pictures", "--maps", "none", "--out", folder["out"]).Exit);
        CsvTable curves = CsvTable.Read(folder["out/curves.csv"]);
        int row = curves.Rows - 1;
        Assert.Equal(after.Current, curves.Number(row, "current_A"), 1e-12);
        foreach (string pair in new[] { "along", "across" })
        {
            Reading now = after.Of(pair)!, before = start.Of(pair)!;
            double change = curves.Number(row, $"v_{pair}_V") - before.Value, bars = now.Error + curves.Number(row, $"v_{pair}_err_V");
            Assert.Equal(change, now.Value - before.Value, bars);
            Assert.True(Math.Abs(change) > 4 * bars, $"{pair} changed by {change} with bars of {bars}");
        }

        // A tensor of its own is another sheet: nothing is trusted then.
        Assert.Empty(session.Apply((t, _) => t.With("law.a", "\"8 mS\""), null));
        Assert.Null(accurate.Moved(session.State.Device, shown, 3, CancellationToken.None));
    }

    [Fact]
    public void Nothing_of_earlier_layouts_is_kept_over_many_drags()
    {
        EditSession session = EditSession.Open(folder.Write("round.toml", Round)).Session!;
        QuickAnswer quick = new();
        List<WeakReference> made = [];
        for (int k = 1; k <= Drags; k++)
        {
            Drag(session, quick, made, k);
        }

        GC.Collect();
        GC.WaitForPendingFinalizers();
        GC.Collect();

        // The mesh that is moved, its last place, and what the runtime has not let go of yet.
        int alive = made.Count(m => m.IsAlive);
        Assert.InRange(alive, 1, 6);
    }

    private const int Drags = 300;

    [System.Runtime.CompilerServices.MethodImpl(System.Runtime.CompilerServices.MethodImplOptions.NoInlining)]
    private static void Drag(EditSession session, QuickAnswer quick, List<WeakReference> made, int k)
    {
        Assert.Empty(session.Apply((t, d) => LayoutEdit.Move(t, d, "c3", new Point2(4e-6, 0).Turned((120 + (5 * Math.Sin(0.1 * k))) * Math.PI / 180)), $"drag {k}"));
        LayoutAnswer answer = quick.Of(session.State.Device, k, new HashSet<string>(), CancellationToken.None);
        Assert.Null(answer.Failure);
        made.Add(new(answer));
        made.Add(new(answer.Frames[0].X));  // of the fine space
    }

    [Theory]
    [InlineData(0)]
    [InlineData(4)]
    [InlineData(9)]
    public void A_coarse_answer_lies_within_its_bars_of_the_accurate_one_also_after_moves(int moves)
    {
        EditSession session = EditSession.Open(folder.Write("round.toml", Round)).Session!;
        QuickAnswer quick = new();
        LayoutAnswer coarse = quick.Of(session.State.Device, 1, new HashSet<string> { "w" }, CancellationToken.None);
        for (int k = 1; k <= moves; k++)
        {
            Assert.Empty(session.Apply((t, d) => LayoutEdit.Move(t, d, "c3", new Point2(4e-6, 0).Turned((120 + k) * Math.PI / 180)), "drag"));
            coarse = quick.Of(session.State.Device, k + 1, new HashSet<string> { "w" }, CancellationToken.None);
        }

        Assert.False(coarse.IsAccurate);
        CurveRow fast = coarse.Rows.MaxBy(r => r.Current)!;
        CurveRow good = DriveRun.Execute(session.State.Device, new DriveOptions { ForPictures = false }, null, CancellationToken.None).Rows.MaxBy(r => r.Current)!;
        Assert.Equal(good.Current, fast.Current);
        Assert.All(good.Readings.Zip(fast.Readings), p =>
        {
            Assert.Equal(p.First.Pair, p.Second.Pair);
            Assert.True(Math.Abs(p.First.Value - p.Second.Value) <= p.First.Error + p.Second.Error, $"{p.First.Pair}: {p.First.Value} ± {p.First.Error}, coarse {p.Second.Value} ± {p.Second.Error}");
            Assert.True(Math.Abs(p.First.Even!.Value - p.Second.Even!.Value) <= p.First.EvenError + p.Second.EvenError, $"{p.First.Pair}, even: {p.First.Even} ± {p.First.EvenError}, coarse {p.Second.Even} ± {p.Second.EvenError}");

            // And it is worth looking at.
            Assert.True(p.Second.Error < 0.02 * fast.Readings.Max(r => Math.Abs(r.Value)));
        });
    }
}
