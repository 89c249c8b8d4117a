using System.Collections.Concurrent;
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
        using ManualResetEventSlim done = new();
        using (AnswerLoop loop = new(session, () => new HashSet<string>(), answer =>
        {
            answers.Enqueue(answer);
            if (answer.IsAccurate && answer.Version == session.State.Version && answer.Version > 200)
            {
                done.Set();
            }
        }))
        {
            for (int k = 1; k <= 200; k++)
            {
                double angle = (120 + (0.05 * k)) * Math.PI / 180;
                Assert.Empty(session.Apply((t, d) => LayoutEdit.Move(t, d, "c3", new Point2(4e-6, 0).Turned(angle)), "drag"));
            }

            Assert.True(done.Wait(Long));
        }

        // Passed over, not queued: far fewer answers than moves, none older after a newer.
        LayoutAnswer[] all = [.. answers];
        Assert.True(all.Length < 150, $"{all.Length} answers");
        Assert.Equal(all.Select(a => a.Version).Order(), all.Select(a => a.Version));
        LayoutAnswer last = all[^1];
        Assert.Equal(session.State.Version, last.Version);
        Assert.Null(last.Failure);
        Assert.Equal(SaveOutcome.Saved, session.Save(overwrite: false));
        DriveResult saved = DriveRun.Execute(Device.DeviceFile.Read(folder["round.toml"]).Device!, new DriveOptions(), null, CancellationToken.None);
        Assert.Equal(saved.Rows.Count, last.Rows.Count);
        Assert.All(saved.Rows.Zip(last.Rows), p => Assert.Equal(p.First.Readings, p.Second.Readings));
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
