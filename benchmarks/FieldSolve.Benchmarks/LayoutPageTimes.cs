using System.Globalization;
using FieldSolve.Cli.Open;
using FieldSolve.Sessions;
using Microsoft.Playwright;

namespace FieldSolve.Benchmarks;

/// <summary>From a move of the mouse on the layout page to the painted coarse and accurate answer, in Chromium.</summary>
internal static class LayoutPageTimes
{
    private const int Warm = 8, Moves = 40, EachRest = 10;

    private static readonly string[] Both = ["coarse", "accurate"], Accurate = ["accurate"];

    // Asks the page to say when it is so far: a question at every frame would take time from the answer.
    private const string Wait = "enough => new Promise(done => { const told = () => { if (enough.some(k => watched.kinds.has(k))) { watched.told = null; done(); } }; watched.told = told; told(); })";

    // Keeps the time of the last move of the mouse and, for the first answer of each kind that is painted for the newest state after it, how long that took.
    private const string Watch = """
        () => {
          const app = fieldsolve.app, inner = app.stage.painted, w = window.watched = { at: null, from: 0, coarse: [], accurate: [], kinds: new Set() };
          window.addEventListener('pointermove', () => { w.at = performance.now(); w.from = app.state.version; w.kinds.clear(); }, true);
          app.stage.painted = answer => {
            inner(answer);
            const kind = answer?.accurate ? 'accurate' : 'coarse';
            if (answer && w.at !== null && answer.version > w.from && answer.version === app.state.version && !w.kinds.has(kind)) {
              w.kinds.add(kind);
              w[kind].push(performance.now() - w.at);
              w.told?.();
            }
          };
        }
        """;

    /// <summary>Prints the times.</summary>
    public static async Task Print(TextWriter output)
    {
        if (PageTimes.ChromiumProgram() is not { } program)
        {
            await output.WriteLineAsync("no Chromium on the PATH: no times in the browser");
            return;
        }

        using IPlaywright playwright = await Playwright.CreateAsync();
        await using IBrowser browser = await PageTimes.Launch(playwright, program);
        foreach ((string file, string contact) in new[] { ("disc-12.toml", "c4"), ("flake.toml", "tip") })
        {
            string folder = LayoutTimes.Copy();
            try
            {
                EditSession session = EditSession.Open(Path.Combine(folder, file)).Session!;
                await using OpenServer server = await OpenServer.Start(session, new OpenOptions());
                IPage page = await browser.NewPageAsync(new() { ViewportSize = new() { Width = 1400, Height = 1000 } });
                page.SetDefaultTimeout(300_000);
                await page.GotoAsync(server.Address);
                await page.WaitForFunctionAsync("() => window.fieldsolve?.app?.answer?.complete");
                await page.EvaluateAsync(Watch);
                LocatorBoundingBoxResult box = (await page.Locator($"[data-contact='{contact}'] .grip").BoundingBoxAsync())!;
                (float x, float y) = (box.X + (box.Width / 2), box.Y + (box.Height / 2));
                await page.Mouse.MoveAsync(x, y);
                await page.Mouse.DownAsync();
                for (int k = 1; k <= Warm + Moves; k++)
                {
                    if (k == Warm + 1)
                    {
                        await page.EvaluateAsync("watched.coarse.length = watched.accurate.length = 0");
                    }

                    // To another of seven places, three pixels apart; every tenth move the hand rests.
                    await page.Mouse.MoveAsync(x + (3 * (k * 5 % 7)) - 9, y);
                    await page.EvaluateAsync(Wait, Both);
                    if (k % EachRest == 0)
                    {
                        await page.EvaluateAsync(Wait, Accurate);
                        await page.WaitForFunctionAsync("() => fieldsolve.app.answer.complete");
                    }
                }

                await page.Mouse.UpAsync();
                foreach (string kind in (string[])["coarse", "accurate"])
                {
                    double[] times = await page.EvaluateAsync<double[]>($"watched.{kind}.sort((a, b) => a - b)");
                    await output.WriteLineAsync(string.Create(
                        CultureInfo.InvariantCulture, $"{file}, move of the mouse to painted {kind} answer in the browser, {times.Length} times: median {LayoutTimes.Median(times):F0} ms, 95 % {LayoutTimes.At95(times):F0} ms"));
                }

                await page.CloseAsync();
            }
            finally
            {
                Directory.Delete(folder, true);
            }
        }
    }
}
