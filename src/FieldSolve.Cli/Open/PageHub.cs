using System.Text;
using System.Text.Json;
using FieldSolve.Pictures;
using FieldSolve.Sessions;
using Microsoft.AspNetCore.Http;

namespace FieldSolve.Cli.Open;

/// <summary>
/// What all pages are told, as server-sent events. Only the newest state and the newest answer are kept: a page that is slow, or comes back, gets these and nothing
/// older, so nothing piles up.
/// </summary>
internal sealed class PageHub : IDisposable
{
    private static readonly TimeSpan Beat = TimeSpan.FromSeconds(10);

    private readonly Lock gate = new();
    private readonly Dictionary<string, (int Count, string Wiring)> pages = new(StringComparer.Ordinal);
    private readonly TimeSpan grace;
    private readonly Action last;
    private readonly Timer leave;
    private TaskCompletionSource news = new(TaskCreationOptions.RunContinuationsAsynchronously);
    private byte[] state = [];
    private readonly LayoutAnswers answers = new();
    private IReadOnlyList<(int Number, byte[] Json)> triangles = [];
    private byte[] answer = [];
    private int stateNumber;
    private int answerNumber;
    private LayoutAnswer? shown;

    /// <param name="grace">How long to wait for another page.</param>
    /// <param name="last">Called when the last page went and none came back.</param>
    public PageHub(TimeSpan grace, Action last)
    {
        (this.grace, this.last) = (grace, last);
        leave = new Timer(_ =>
        {
            lock (gate)
            {
                if (pages.Count > 0)
                {
                    return;
                }
            }

            last();
        });
    }

    /// <summary>The newest answer.</summary>
    public LayoutAnswer? Answer
    {
        get
        {
            lock (gate)
            {
                return shown;
            }
        }
    }

    /// <summary>Wirings that pages look at.</summary>
    public IReadOnlySet<string> LookedAt
    {
        get
        {
            lock (gate)
            {
                return pages.Values.Select(p => p.Wiring).ToHashSet(StringComparer.Ordinal);
            }
        }
    }

    /// <summary>Tells all pages of a state.</summary>
    public void Tell(SessionState now)
    {
        byte[] made = Json(w => LayoutPage.WriteState(w, now));
        Publish(() =>
        {
            state = made;
            stateNumber++;
        });
    }

    /// <summary>Tells all pages of an answer; one at a time.</summary>
    public void Tell(LayoutAnswer now)
    {
        byte[] made = answers.Json(now);
        IReadOnlyList<(int, byte[])> used = answers.Triangles;
        Publish(() =>
        {
            (answer, shown, triangles) = (made, now, used);
            answerNumber++;
        });
    }

    /// <summary>Sets the wiring that a page looks at; true when the newest answer lacks it.</summary>
    public bool Look(string page, string wiring)
    {
        lock (gate)
        {
            if (pages.TryGetValue(page, out (int Count, string Wiring) known))
            {
                pages[page] = (known.Count, wiring);
            }

            return shown is not null && shown.Frames.All(f => f.Wiring != wiring) && shown.Device.Wirings.Any(w => w.Name == wiring);
        }
    }

    /// <summary>Serves one page until it goes.</summary>
    public async Task Serve(HttpContext context, string page, string wiring, CancellationToken stop)
    {
        using CancellationTokenSource gone = CancellationTokenSource.CreateLinkedTokenSource(context.RequestAborted, stop);
        context.Response.ContentType = "text/event-stream";
        lock (gate)
        {
            pages[page] = (pages.GetValueOrDefault(page).Count + 1, wiring);
        }

        try
        {
            (int sentState, int sentAnswer) = (0, 0);
            int[] sentTriangles = [0, 0];
            while (!gone.IsCancellationRequested)
            {
                Task next;
                (byte[] Data, string Kind)[] send;
                lock (gate)
                {
                    next = news.Task;
                    send =
                    [
                        .. stateNumber != sentState ? [(state, "state")] : Array.Empty<(byte[], string)>(),
                        .. triangles.Where((t, k) => t.Number != sentTriangles[k]).Select(t => (t.Json, "triangles")),
                        .. answerNumber != sentAnswer ? [(answer, "answer")] : Array.Empty<(byte[], string)>(),
                    ];
                    (sentState, sentAnswer) = (stateNumber, answerNumber);
                    sentTriangles = triangles.Count == 0 ? sentTriangles : [.. triangles.Select(t => t.Number)];
                }

                foreach ((byte[] data, string kind) in send)
                {
                    await context.Response.Body.WriteAsync(Encoding.ASCII.GetBytes($"event: {kind}\ndata: "), gone.Token);
                    await context.Response.Body.WriteAsync(data, gone.Token);
                    await context.Response.Body.WriteAsync("\n\n"u8.ToArray(), gone.Token);
                }

                await context.Response.Body.FlushAsync(gone.Token);
                if (await Task.WhenAny(next, Task.Delay(Beat, gone.Token)) != next)
                {
                    // Finds out that a page has gone.
                    await context.Response.Body.WriteAsync(": still here\n\n"u8.ToArray(), gone.Token);
                }
            }
        }
        catch (Exception e) when (e is OperationCanceledException or IOException)
        {
            // The page went, or the server ends.
        }
        finally
        {
            Left(page);
        }
    }

    /// <inheritdoc/>
    public void Dispose() => leave.Dispose();

    private void Left(string page)
    {
        lock (gate)
        {
            (int count, string wiring) = pages[page];
            if (count > 1)
            {
                pages[page] = (count - 1, wiring);
                return;
            }

            pages.Remove(page);
            if (pages.Count == 0)
            {
                try
                {
                    leave.Change(grace, Timeout.InfiniteTimeSpan);
                }
                catch (ObjectDisposedException)
                {
                    // The server has ended.
                }
            }
        }
    }

    private void Publish(Action change)
    {
        TaskCompletionSource before;
        lock (gate)
        {
            change();
            before = news;
            news = new(TaskCreationOptions.RunContinuationsAsynchronously);
        }

        before.SetResult();
    }

    private static byte[] Json(Action<Utf8JsonWriter> write)
    {
        using MemoryStream memory = new();
        using (Utf8JsonWriter w = new(memory))
        {
            write(w);
        }

        return memory.ToArray();
    }
}
