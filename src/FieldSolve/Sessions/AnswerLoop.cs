using System.Diagnostics;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Meshing;
using FieldSolve.Readings;
using FieldSolve.Runs;
using FieldSolve.Sparse;

namespace FieldSolve.Sessions;

/// <summary>
/// Answers the layouts of a session on a thread of its own: a coarse answer at once for the newest text (those that came meanwhile are passed over), and, when the layout
/// rests, the accurate one. A new text stops an accurate answer that is under way.
/// </summary>
public sealed class AnswerLoop : IDisposable
{
    // A hand that moves a contact pauses no longer than this.
    private const int RestMilliseconds = 120;

    private readonly EditSession session;
    private readonly Action<LayoutAnswer> publish;
    private readonly Func<IReadOnlySet<string>> lookedAt;
    private readonly QuickAnswer quick = new();
    private readonly SemaphoreSlim wake = new(0);
    private readonly CancellationTokenSource stop = new();
    private readonly Lock gate = new();
    private readonly Thread thread;
    private CancellationTokenSource? accurate;
    private int solved;

    /// <summary>Starts answering.</summary>
    /// <param name="session">The device file.</param>
    /// <param name="lookedAt">Names of the wirings that pages show; the coarse answer holds these.</param>
    /// <param name="publish">Receives every answer, on the loop's thread.</param>
    public AnswerLoop(EditSession session, Func<IReadOnlySet<string>> lookedAt, Action<LayoutAnswer> publish)
    {
        ArgumentNullException.ThrowIfNull(session);
        (this.session, this.lookedAt, this.publish) = (session, lookedAt, publish);
        session.Changed += Poke;
        thread = new Thread(Run) { IsBackground = true, Name = "answers" };
        thread.Start();
        wake.Release();
    }

    /// <summary>Answers the present layout once more, for example for another wiring.</summary>
    public void Again()
    {
        lock (gate)
        {
            solved = 0;
        }

        Poke(this, EventArgs.Empty);
    }

    /// <summary>Stops the thread and waits for it.</summary>
    public void Dispose()
    {
        session.Changed -= Poke;
        stop.Cancel();
        wake.Release();
        lock (gate)
        {
            accurate?.Cancel();
        }

        thread.Join();
        stop.Dispose();
        wake.Dispose();
    }

    private void Poke(object? sender, EventArgs e)
    {
        lock (gate)
        {
            if (session.State.Version != solved)
            {
                accurate?.Cancel();
            }
        }

        wake.Release();
    }

    private void Run()
    {
        while (!stop.IsCancellationRequested)
        {
            wake.Wait();
            Drain();
            SessionState state = session.State;
            lock (gate)
            {
                if (state.Version == solved || stop.IsCancellationRequested)
                {
                    continue;
                }

                solved = state.Version;
            }

            try
            {
                publish(quick.Of(state.Device, state.Version, lookedAt(), stop.Token));
            }
            catch (OperationCanceledException)
            {
                return;
            }

            // A newer text goes first; the accurate answer waits until the hand rests.
            if (wake.Wait(RestMilliseconds))
            {
                wake.Release();
                if (session.State.Version != state.Version || stop.IsCancellationRequested)
                {
                    continue;
                }
            }

            // The wirings that are looked at come first; the whole drive, whose numbers are those of the drive command, follows.
            Wiring[] shown = [.. state.Device.Wirings.Where(w => lookedAt().Contains(w.Name))];
            shown = shown.Length > 0 ? shown : [.. state.Device.Wirings.Take(1)];
            if (shown.Length < state.Device.Wirings.Count && Accurate(state, state.Device with { Wirings = shown }) is { } first)
            {
                publish(first with { Drive = null });
            }

            if (Accurate(state, state.Device) is { } answer)
            {
                publish(answer);
            }
        }
    }

    private void Drain()
    {
        while (wake.Wait(0))
        {
        }
    }

    // Null when a newer text came.
    private LayoutAnswer? Accurate(SessionState state, SheetDevice device)
    {
        Stopwatch watch = Stopwatch.StartNew();
        using CancellationTokenSource cancel = CancellationTokenSource.CreateLinkedTokenSource(stop.Token);
        lock (gate)
        {
            if (session.State.Version != state.Version)
            {
                return null;
            }

            accurate = cancel;
        }

        try
        {
            DriveResult result = DriveRun.Execute(device, new DriveOptions { Maps = MapChoice.None, ForPictures = false, Frames = true }, null, cancel.Token);
            if (result.Cancelled)
            {
                return null;
            }

            int last = device.Drive!.Currents.Select((c, k) => (Math.Abs(c), k)).Max().k;
            return new(
                state.Version, state.Device, true, result.Rows, [.. result.Frames.Where(f => f.CurrentIndex == last)], null, watch.Elapsed.TotalMilliseconds, result);
        }
        catch (OperationCanceledException)
        {
            return null;
        }
        catch (Exception e) when (e is FieldSpaceException or MeshException or PivotException)
        {
            return new(state.Version, state.Device, true, [], [], e.Message.ReplaceLineEndings(" "), watch.Elapsed.TotalMilliseconds, null);
        }
        finally
        {
            lock (gate)
            {
                accurate = null;
            }
        }
    }
}
