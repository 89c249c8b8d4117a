using FieldSolve.Device;

namespace FieldSolve.Sessions;

/// <summary>
/// Answers the layouts of a session on a thread of its own: a coarse answer at once for the newest text (those that came meanwhile are passed over), and, when the layout
/// rests, the accurate one. A new text stops an accurate answer that is under way.
/// </summary>
public sealed class AnswerLoop : IDisposable
{
    // A hand that moves a contact pauses no longer than this.
    private const int RestMilliseconds = 80;

    private readonly EditSession session;
    private readonly Action<LayoutAnswer> publish;
    private readonly Func<IReadOnlySet<string>> lookedAt;
    private readonly QuickAnswer quick = new();
    private readonly AccurateAnswer accurate = new();
    private readonly SemaphoreSlim wake = new(0);
    private readonly CancellationTokenSource stop = new();
    private readonly Lock gate = new();
    private readonly Thread thread;
    private CancellationTokenSource? underWay;
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
            underWay?.Cancel();
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
                underWay?.Cancel();
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

            Rest(state);
        }
    }

    // The wirings that are looked at come first, on the mesh at hand if that serves; the whole drive, whose numbers are those of the drive command, follows. What is left is
    // made ready for the next move.
    private void Rest(SessionState state)
    {
        SheetDevice device = state.Device;
        Wiring[] shown = [.. device.Wirings.Where(w => lookedAt().Contains(w.Name))];
        shown = shown.Length > 0 ? shown : [.. device.Wirings.Take(1)];
        if (!Publish(state, cancel =>
            accurate.Moved(device, shown, state.Version, cancel)
            ?? (shown.Length == device.Wirings.Count ? null : accurate.Drive(device with { Wirings = shown }, device, state.Version, cancel) with { Drive = null })))
        {
            return;
        }

        if (Publish(state, cancel => accurate.Drive(device, device, state.Version, cancel)))
        {
            Publish(state, cancel =>
            {
                accurate.Prepare();
                if (quick.IsWorn)
                {
                    quick.Renew(device, lookedAt(), cancel);
                }

                return null;
            });
        }
    }

    private void Drain()
    {
        while (wake.Wait(0))
        {
        }
    }

    // False when a newer text came.
    private bool Publish(SessionState state, Func<CancellationToken, LayoutAnswer?> make)
    {
        using CancellationTokenSource cancel = CancellationTokenSource.CreateLinkedTokenSource(stop.Token);
        lock (gate)
        {
            if (session.State.Version != state.Version || solved != state.Version)
            {
                return false;
            }

            underWay = cancel;
        }

        try
        {
            if (make(cancel.Token) is { } answer)
            {
                publish(answer);
            }

            return true;
        }
        catch (OperationCanceledException)
        {
            return false;
        }
        finally
        {
            lock (gate)
            {
                underWay = null;
            }
        }
    }
}
