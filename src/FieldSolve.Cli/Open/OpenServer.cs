using System.Net;
using System.Text;
using System.Text.Json;
using FieldSolve.Device;
using FieldSolve.Pictures;
using FieldSolve.Sessions;
using Microsoft.AspNetCore.Builder;
using Microsoft.AspNetCore.Hosting;
using Microsoft.AspNetCore.Hosting.Server;
using Microsoft.AspNetCore.Hosting.Server.Features;
using Microsoft.AspNetCore.Http;
using Microsoft.AspNetCore.Server.Kestrel.Core;
using Microsoft.Extensions.DependencyInjection;
using Microsoft.Extensions.Logging;

namespace FieldSolve.Cli.Open;

/// <summary>Serves the page of one session on 127.0.0.1 at a free port.</summary>
internal sealed class OpenServer : IAsyncDisposable
{
    private readonly EditSession session;
    private readonly WebApplication app;
    private readonly PageGuard guard;
    private readonly PageHub hub;
    private readonly AnswerLoop answers;
    private readonly Timer disk;
    private readonly Timer tidy;
    private readonly TimeSpan rest;
    private readonly Lock telling = new();
    private readonly CancellationTokenSource stop = new();
    private readonly TaskCompletionSource ended = new(TaskCreationOptions.RunContinuationsAsynchronously);

    private OpenServer(EditSession session, WebApplication app, PageGuard guard, OpenOptions options)
    {
        (this.session, this.app, this.guard) = (session, app, guard);
        tidy = new(_ => GC.Collect(GC.MaxGeneration, GCCollectionMode.Aggressive, blocking: true, compacting: true));
        rest = options.Rest;
        hub = new(options.Grace, () => ended.TrySetResult());
        hub.Tell(session.State);
        // The solve begins before the pages are told.
        answers = new(session, () => hub.LookedAt, Tell);
        session.Changed += TellState;
        disk = new(_ => session.CheckDisk(), null, options.DiskCheck, options.DiskCheck);
    }

    /// <summary>Where the page is.</summary>
    public string Address => $"http://127.0.0.1:{guard.Port}/{guard.Token}/";

    /// <summary>Starts serving.</summary>
    public static async Task<OpenServer> Start(EditSession session, OpenOptions options)
    {
        WebApplicationBuilder builder = WebApplication.CreateEmptyBuilder(new WebApplicationOptions { ContentRootPath = AppContext.BaseDirectory });
        builder.Logging.ClearProviders();
        builder.WebHost.UseKestrelCore().ConfigureKestrel(kestrel =>
        {
            kestrel.Listen(IPAddress.Loopback, 0, listen => listen.Protocols = HttpProtocols.Http1);
            kestrel.AddServerHeader = false;
            kestrel.Limits.MaxRequestBodySize = RequestBody.LargestRead;
        });
        WebApplication app = builder.Build();
        PageGuard guard = new();
        OpenServer server = new(session, app, guard, options);
        app.Run(server.Answer);
        await app.StartAsync();
        string address = app.Services.GetRequiredService<IServer>().Features.Get<IServerAddressesFeature>()!.Addresses.First();
        guard.Port = new Uri(address).Port;
        return server;
    }

    /// <summary>Waits until the last page was closed or the wait is cancelled.</summary>
    public async Task Ended(CancellationToken cancel)
    {
        using CancellationTokenRegistration registration = cancel.Register(() => ended.TrySetResult());
        await ended.Task;
    }

    /// <inheritdoc/>
    public async ValueTask DisposeAsync()
    {
        await disk.DisposeAsync();
        await stop.CancelAsync();
        answers.Dispose();
        await tidy.DisposeAsync();
        using (CancellationTokenSource soon = new(TimeSpan.FromSeconds(2)))
        {
            await app.StopAsync(soon.Token);
        }

        await app.DisposeAsync();
        hub.Dispose();
        stop.Dispose();
    }

    // Two requests may end together; whoever is last tells of the newest state.
    private void TellState(object? sender, EventArgs e)
    {
        lock (telling)
        {
            hub.Tell(session.State);
        }
    }

    // A page stays open for hours and mostly rests; what the solves needed then goes back to the machine. Not between two moves of a hand: fresh memory costs the next answer time.
    private void Tell(LayoutAnswer answer)
    {
        hub.Tell(answer);
        tidy.Change(answer.Drive is null ? Timeout.InfiniteTimeSpan : rest, Timeout.InfiniteTimeSpan);
    }

    private async Task Answer(HttpContext context)
    {
        PageGuard.Harden(context.Response);
        if (guard.Refusal(context.Request) is { } refusal)
        {
            await Send(context, 403, "text/plain; charset=utf-8", refusal);
            return;
        }

        string what = context.Request.Path.Value!.Split('/', 3) is [_, _, var rest] ? rest : "?";
        try
        {
            await (context.Request.Method switch
            {
                "GET" or "HEAD" => Get(context, what),
                "POST" => Post(context, what),
                _ => Send(context, 405, "text/plain; charset=utf-8", "only GET and POST"),
            });
        }
        catch (LayoutEditException e)
        {
            await Refuse(context, [(new Fault(session.State.Path, 1, 1, e.Message), null)]);
        }
        catch (Exception e) when (e is Runs.ToleranceException or Fields.FieldSpaceException or Meshing.MeshException or Sparse.PivotException)
        {
            await Refuse(context, [(new Fault(session.State.Path, 1, 1, e.Message.ReplaceLineEndings(" ")), null)]);
        }
        catch (OperationCanceledException)
        {
            // Whoever asked went away.
        }
        catch (Microsoft.AspNetCore.Http.BadHttpRequestException e)
        {
            await Send(context, e.StatusCode, "text/plain; charset=utf-8", e.StatusCode == 413 ? "the request is too long" : "the request is broken");
        }
        catch (JsonException)
        {
            await Send(context, 400, "text/plain; charset=utf-8", "the request is not what this page sends");
        }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            await Refuse(context, [(new Fault(session.State.Path, 1, 1, e.Message.ReplaceLineEndings(" ")), null)]);
        }
    }

    private async Task Get(HttpContext context, string what)
    {
        switch (what)
        {
            case "":
                await Send(context, 200, "text/html; charset=utf-8", LayoutPage.Html);
                break;
            case "page.js":
                await Send(context, 200, "text/javascript; charset=utf-8", LayoutPage.Script);
                break;
            case "page.css":
                await Send(context, 200, "text/css; charset=utf-8", LayoutPage.Style);
                break;
            case "events":
                await hub.Serve(context, context.Request.Query["page"].ToString(), context.Request.Query["wiring"].ToString(), stop.Token);
                break;
            case "sensitivity":
                string wiring = context.Request.Query["wiring"].ToString();
                SessionState asked = session.State;
                IReadOnlyList<ContactEffect> effects = await Task.Run(() => LayoutSensitivity.Of(asked, wiring, context.RequestAborted));
                await Send(context, 200, "application/json", JsonSerializer.Serialize(new { version = asked.Version, contacts = effects }, EditJson.Options));
                break;
            case "report.html":
                byte[] report = await Task.Run(() => ReportMaker.Of(session.State, context.RequestAborted));
                string name = Path.GetFileNameWithoutExtension(session.State.Path) + "-report.html";
                context.Response.Headers.ContentDisposition = $"attachment; filename*=UTF-8''{Uri.EscapeDataString(name)}";
                context.Response.ContentType = "text/html; charset=utf-8";
                await context.Response.Body.WriteAsync(report, context.RequestAborted);
                break;
            default:
                await Send(context, 404, "text/plain; charset=utf-8", "there is nothing here");
                break;
        }
    }

    private async Task Post(HttpContext context, string what)
    {
        switch (what)
        {
            case "edit":
                EditRequest edit = await RequestBody.Read<EditRequest>(context);
                await Result(context, edit.Apply(session));
                break;
            case "undo":
                session.Undo();
                await Result(context, []);
                break;
            case "redo":
                session.Redo();
                await Result(context, []);
                break;
            case "save":
                SaveRequest save = await RequestBody.Read<SaveRequest>(context);
                SaveOutcome outcome = save.Name is null ? session.Save(save.Overwrite) : session.SaveAs(save.Name, save.Overwrite);
                await Send(context, outcome == SaveOutcome.Saved ? 200 : 409, "application/json", JsonSerializer.Serialize(new { outcome = outcome.ToString() }));
                break;
            case "trace":
                TraceRequest trace = await RequestBody.Read<TraceRequest>(context);
                SaveOutcome traced = LayoutTrace.Save(session.State, trace.Name ?? "", trace.Read(), trace.Overwrite);
                if (traced == SaveOutcome.Saved && session.State.Text.Pieces.Any(p => p.Value == trace.Name) && session.ReadFiles() is { Count: > 0 } faults)
                {
                    await Result(context, [.. faults.Select(f => (f, (string?)null))]);
                    break;
                }

                await Send(context, traced == SaveOutcome.Saved ? 200 : 409, "application/json", JsonSerializer.Serialize(new { outcome = traced.ToString() }));
                break;
            case "reload":
                await Result(context, [.. session.Reload().Select(f => (f, (string?)null))]);
                break;
            case "look":
                LookRequest look = await RequestBody.Read<LookRequest>(context);
                if (hub.Look(look.Page ?? "", look.Wiring ?? ""))
                {
                    answers.Again();
                }

                await Result(context, []);
                break;
            default:
                await Send(context, 404, "text/plain; charset=utf-8", "there is nothing here");
                break;
        }
    }

    private async Task Result(HttpContext context, IReadOnlyList<(Fault Fault, string? Path)> faults)
    {
        if (faults.Count > 0)
        {
            await Refuse(context, faults);
            return;
        }

        await Send(context, 200, "application/json", JsonSerializer.Serialize(new { version = session.State.Version }));
    }

    private static Task Refuse(HttpContext context, IReadOnlyList<(Fault Fault, string? Path)> faults) => Send(
        context, 422, "application/json",
        JsonSerializer.Serialize(new { faults = faults.Select(f => new { text = f.Fault.ToString(), message = f.Fault.Message, path = f.Path }) }));

    private static async Task Send(HttpContext context, int status, string type, string text)
    {
        context.Response.StatusCode = status;
        context.Response.ContentType = type;
        if (!HttpMethods.IsHead(context.Request.Method))
        {
            await context.Response.Body.WriteAsync(Encoding.UTF8.GetBytes(text), context.RequestAborted);
        }
    }

    private sealed record SaveRequest(string? Name, bool Overwrite);

    private sealed record LookRequest(string? Page, string? Wiring);
}
