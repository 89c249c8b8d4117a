using System.Globalization;
using FieldSolve.Cli.Open;
using FieldSolve.Sessions;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>A device file served by the program in a window of the browser, for one test.</summary>
public abstract class LayoutPageBase : IAsyncLifetime
{
    private readonly ReportFixture shared;
    private readonly string text;
    private readonly string folder = Directory.CreateTempSubdirectory("layout-").FullName;
    private IBrowserContext context = null!;

    private protected LayoutPageBase(ReportFixture shared, string text) => (this.shared, this.text) = (shared, text);

    private protected List<string> Complaints { get; } = [];

    private protected EditSession Session { get; private set; } = null!;

    private protected OpenServer Server { get; private set; } = null!;

    private protected string Folder => folder;

    private protected string Device => Path.Combine(folder, "device.toml");

    /// <inheritdoc/>
    public async Task InitializeAsync()
    {
        if (Chromium.Missing is not null)
        {
            return;
        }

        await File.WriteAllTextAsync(Device, text);
        Prepare();
        Session = EditSession.Open(Device).Session!;
        Server = await OpenServer.Start(Session, new OpenOptions());
        context = await shared.Window(new() { ViewportSize = new() { Width = 1400, Height = 1000 }, ReducedMotion = ReducedMotion.Reduce });
    }

    /// <inheritdoc/>
    public async Task DisposeAsync()
    {
        if (Chromium.Missing is null)
        {
            await context.DisposeAsync();
            await Server.DisposeAsync();
        }

        Directory.Delete(folder, recursive: true);
    }

    /// <summary>Writes what the device file names.</summary>
    private protected virtual void Prepare()
    {
    }

    private protected async Task<IPage> Open()
    {
        IPage page = await context.NewPageAsync();
        page.SetDefaultTimeout(120_000);
        page.Console += (_, m) => Complain(m.Type, m.Text);
        page.PageError += (_, m) => Complain("error", m);
        await page.GotoAsync(Server.Address);
        await Accurate(page);
        return page;
    }

    // A refused change is an answer of 422, which the browser also writes to its console.
    private void Complain(string kind, string text)
    {
        if (kind is "error" or "warning" && !text.Contains("status of 422", StringComparison.Ordinal))
        {
            Complaints.Add($"{kind}: {text}");
        }
    }

    // The accurate answer of the newest layout stands.
    private protected async Task Accurate(IPage page)
    {
        await page.WaitForFunctionAsync(
            "version => { const a = window.fieldsolve?.app; return a?.answer?.complete && a.answer.version === version && a.state?.version === version && a.badge.dataset.accuracy === 'accurate'; }",
            Session.State.Version);
    }

    // Nothing is on its way to the program, and the page shows its newest layout.
    private protected static Task Settled(IPage page) =>
        page.WaitForFunctionAsync("() => !fieldsolve.app.link.busy && !fieldsolve.app.link.queue.length && fieldsolve.app.state.version >= fieldsolve.app.link.version");

    private protected static async Task<double> Shown(IPage page, string pair, string what = "value") =>
        double.Parse((await page.GetAttributeAsync($"tr[data-pair='{pair}']", "data-" + what))!, CultureInfo.InvariantCulture);

    private protected static async Task Drag(IPage page, ILocator what, float dx, float dy, int moves)
    {
        LocatorBoundingBoxResult box = (await what.BoundingBoxAsync())!;
        (float x, float y) = (box.X + (box.Width / 2), box.Y + (box.Height / 2));
        await page.Mouse.MoveAsync(x, y);
        await page.Mouse.DownAsync();
        await page.Mouse.MoveAsync(x + dx, y + dy, new() { Steps = moves });
        await page.Mouse.UpAsync();
        await Settled(page);
    }
}
