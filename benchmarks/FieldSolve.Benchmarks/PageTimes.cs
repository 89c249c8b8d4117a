using System.Diagnostics;
using System.Globalization;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Meshing;
using FieldSolve.Pictures;
using FieldSolve.Readings;
using FieldSolve.Runs;
using Microsoft.Playwright;

namespace FieldSolve.Benchmarks;

/// <summary>How long does the report take to write, to show and to follow the slider? Needs Chromium for the last two.</summary>
internal static class PageTimes
{
    private const int Rounds = 5, Triangles = 50_000, Dragged = 90;

    // One move of the slider per frame of the screen, back and forth over all values; times between frames.
    private const string Drag = """
        async frames => {
          const map = fieldsolve.map, slider = document.querySelector('.slide'), last = map.map.frames.length - 1, times = [];
          const next = () => new Promise(requestAnimationFrame);
          document.querySelector('[data-maps]').scrollIntoView();
          for (let k = 0; k <= last; k++) { slider.value = k; slider.dispatchEvent(new Event('input')); await next(); await next(); }
          let before = await next();
          for (let k = 0; k < frames; k++) {
            slider.value = Math.abs(k % (2 * last) - last);
            slider.dispatchEvent(new Event('input'));
            const now = await next();
            times.push(now - before);
            before = now;
          }
          return times.sort((a, b) => a - b);
        }
        """;

    /// <summary>Prints the times.</summary>
    public static async Task Print(TextWriter output)
    {
        string folder = Directory.CreateTempSubdirectory("fieldsolve").FullName;
        try
        {
            SheetDevice device = Sample.Device();
            DriveResult all = DriveRun.Execute(device, new(), null, CancellationToken.None);
            DriveResult one = DriveRun.Execute(device with { Wirings = [device.Wirings[0]] }, new(), null, CancellationToken.None);
            string allPath = Path.Combine(folder, "all.html"), onePath = Path.Combine(folder, "one.html"), largePath = Path.Combine(folder, "large.html");
            await output.WriteLineAsync(Line($"disc-12, {all.Figures.Triangles} triangles, {all.Frames.Count} frames: written in {Write(all, folder, allPath):F3} s, {new FileInfo(allPath).Length / 1e6:F2} MB"));
            await output.WriteLineAsync(Line($"one wiring of it, {one.Figures.Triangles} triangles, {one.Frames.Count} frames: written in {Write(one, folder, onePath):F3} s, {new FileInfo(onePath).Length / 1e6:F2} MB"));
            DriveResult large = Large(device, one);
            await output.WriteLineAsync(Line($"{large.Frames[0].Nodes.Length / 6} triangles, {large.Frames.Count} frames: written in {Write(large, folder, largePath):F3} s, {new FileInfo(largePath).Length / 1e6:F2} MB"));
            await InBrowser(output, [onePath, allPath, largePath]);
        }
        finally
        {
            Directory.Delete(folder, true);
        }
    }

    private static string Line(FormattableString text) => text.ToString(CultureInfo.InvariantCulture);

    // Median time of the page alone, the pictures being drawn already.
    private static double Write(DriveResult result, string folder, string path)
    {
        IReadOnlyList<PictureFile> drawn = DrivePictures.Write(result, Path.Combine(folder, "pictures"), CancellationToken.None);
        double[] times = new double[Rounds];
        for (int k = 0; k < Rounds; k++)
        {
            var clock = Stopwatch.StartNew();
            ReportPage.Write(result, drawn, path);
            times[k] = clock.Elapsed.TotalSeconds;
        }

        Array.Sort(times);
        return times[Rounds / 2];
    }

    // A drive on a mesh of the wanted size, with a smooth potential in place of a solution: drawing does not know the difference.
    private static DriveResult Large(SheetDevice device, DriveResult small)
    {
        TriangleMesh mesh = Sample.Mesh(device, Triangles);
        FieldSpace space = FieldSpace.Build(device, mesh);
        PotentialFrame[] frames = [.. small.Frames.Select(f => new PotentialFrame
        {
            X = space.NodeX,
            Y = space.NodeY,
            Nodes = space.Nodes,
            Potential = [.. space.NodeX.Zip(space.NodeY, (x, y) => f.Current * (Math.Atan(3e5 * (y - (0.3 * x))) + (4e10 * x * y)))],
            ContactPotential = f.ContactPotential,
            Wiring = f.Wiring,
            Current = f.Current,
            CurrentIndex = f.CurrentIndex,
        })];
        return small with { Frames = frames };
    }

    /// <summary>Chromium on the PATH, or null.</summary>
    internal static string? ChromiumProgram()
    {
        string[] names = ["chromium", "chromium-browser", "google-chrome"];
        return (Environment.GetEnvironmentVariable("PATH") ?? "").Split(Path.PathSeparator)
            .SelectMany(p => names.Select(n => Path.Combine(p, n))).FirstOrDefault(File.Exists);
    }

    /// <summary>Starts it without a window.</summary>
    internal static Task<IBrowser> Launch(IPlaywright playwright, string program) => playwright.Chromium.LaunchAsync(new()
    {
        ExecutablePath = program,
        Headless = true,
        Args = ["--headless", "--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking", "--disable-component-update", "--disable-sync"],
    });

    private static async Task InBrowser(TextWriter output, string[] pages)
    {
        if (ChromiumProgram() is not { } program)
        {
            await output.WriteLineAsync("no Chromium on the PATH: no times in the browser");
            return;
        }

        using IPlaywright playwright = await Playwright.CreateAsync();
        await using IBrowser browser = await Launch(playwright, program);
        foreach (string path in pages)
        {
            foreach (string draw in (string[])["plain", "webgl"])
            {
                IPage page = await browser.NewPageAsync(new() { ViewportSize = new() { Width = 1280, Height = 900 } });
                await page.GotoAsync(new Uri(path).AbsoluteUri + "#draw=" + draw);
                await page.WaitForFunctionAsync("() => document.documentElement.dataset.ready === 'yes'");
                double[] start = await page.EvaluateAsync<double[]>("[performance.getEntriesByName('first-contentful-paint')[0].startTime, performance.now()]");
                double[] times = await page.EvaluateAsync<double[]>(Drag, Dragged);
                await output.WriteLineAsync(Line(
                    $"{Path.GetFileNameWithoutExtension(path)}, {draw}: first paint {start[0]:F0} ms, live after {start[1]:F0} ms; slider, per frame: median {times[Dragged / 2]:F1} ms, worst {times[^1]:F1} ms"));
                await page.CloseAsync();
            }
        }
    }
}
