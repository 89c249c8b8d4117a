using System.Globalization;
using System.Text.RegularExpressions;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Measured;
using FieldSolve.Pictures;
using FieldSolve.Runs;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>The report of an overlay in a real browser with the network off: three maps, one cursor.</summary>
[Collection(ReportCollection.Name)]
public class OverlayPageTests(ReportFixture report)
{
    private static (OverlayResult Result, string Path)? made;

    // A raster over the fixture's disc, moved a little, every value from the map itself with a pattern of deviations instead of noise.
    private (OverlayResult Result, string Path) Made()
    {
        if (made is null)
        {
            SheetDevice device = report.Result.Device with { Drive = report.Result.Device.Drive! with { BothSigns = false } };
            FieldMap map = report.Result.Maps.First(m => m.Wiring == device.Wirings[0].Name);
            var sampler = new MapSampler(map);
            var points = new List<MapPoint>();
            for (int k = 0; k < 900; k++)
            {
                double x = ((k % 30) - 14.5) * 0.26e-6, y = ((k / 30) - 14.5) * 0.26e-6;
                if (sampler.Value(map.Potential, x + 0.1e-6, y) is { } v)
                {
                    points.Add(new(x, y, (1.2 * v) + (1e-4 * Math.Sin(17 * k)), 1e-4, k + 2));
                }
            }

            OverlayResult result = OverlayRun.Execute(device, new("map <b>one</b>.csv", "", MapQuantity.Potential, points), new() { Wiring = map.Wiring }, null, CancellationToken.None);
            made = (result, report.Other("overlay.html"));
            Write(made.Value.Path);
        }

        return made.Value;
    }

    private void Write(string path) => OverlayReport.Write(made!.Value.Result, OverlayPictures.Write(made.Value.Result, report.Other("pictures-of-overlay"), CancellationToken.None), path);

    private static async Task<ILocator> Stage(IPage page, int k)
    {
        ILocator stage = page.Locator("[data-comparison] .stage").Nth(k);
        await stage.ScrollIntoViewIfNeededAsync();
        return stage;
    }

    private static double Number(string text)
    {
        Match m = Regex.Match(text.Replace('−', '-'), @"^\s*(-?[0-9.]+)\s+([afpnµmkMGT]?)V\s*$");
        Assert.True(m.Success, $"'{text}' is no voltage.");
        int place = "afpnµm kMGT".IndexOf(m.Groups[2].Value.Length == 0 ? " " : m.Groups[2].Value, StringComparison.Ordinal) - 6;
        return double.Parse(m.Groups[1].Value, CultureInfo.InvariantCulture) * Math.Pow(10, 3 * place);
    }

    private static void SameDigits(double expected, string shown, int digits) => Assert.True(
        Math.Abs(Number(shown) - expected) <= 0.501 * Math.Pow(10, Math.Floor(Math.Log10(Math.Abs(expected))) - digits + 1), $"The page shows {shown}, the run has {expected:G9}.");

    private static async Task AssertReading(IPage page, OverlayResult result)
    {
        int point = await page.EvaluateAsync<int>("fieldsolve.comparison.cursor.point");
        Assert.True(point >= 0, "No point lies under the cursor.");
        int line = await page.EvaluateAsync<int>("fieldsolve.comparison.spec.lines[fieldsolve.comparison.cursor.point]");
        OverlaidPoint p = result.Points.Single(q => q.Point.Line == line);
        IReadOnlyList<string> shown = await page.Locator("[data-comparison] h3 output").AllInnerTextsAsync();
        SameDigits(p.Point.Value, shown[0], 5);
        SameDigits(p.Model!.Value, shown[1], 5);
        SameDigits(p.Residual!.Value, shown[2], 4);

        // The crosshair stands in all three, at one place of the sheet.
        Assert.Equal(3, await page.Locator("[data-comparison] .hair").CountAsync());
        Assert.Single((await page.Locator("[data-comparison] .hair").EvaluateAllAsync<string[]>("all => all.map(h => h.getAttribute('d'))")).Distinct());
    }

    [BrowserTheory]
    [InlineData(0)]
    [InlineData(1)]
    [InlineData(2)]
    public async Task A_pointer_over_one_map_reads_all_three(int k)
    {
        (OverlayResult result, string path) = Made();
        await using OpenReport open = await report.Open(path: path);
        IPage page = open.Page;
        Assert.Equal(ReportFixture.Title, await page.InnerTextAsync("h1"));
        Assert.Null(await page.EvaluateAsync<string?>("document.body.dataset.broken ?? null"));
        Assert.Equal(0, await page.Locator("h1 img, header b").CountAsync());
        ILocator stage = await Stage(page, k);
        var box = (await stage.BoundingBoxAsync())!;
        foreach ((double u, double v) in new[] { (0.5, 0.4), (0.62, 0.55), (0.45, 0.3) })
        {
            await page.Mouse.MoveAsync(box.X + (float)(u * box.Width), box.Y + (float)(v * box.Height));
            await page.WaitForFunctionAsync("() => document.querySelectorAll('[data-comparison] .hair').length === 3");
            await AssertReading(page, result);
        }

        // The nodes' values are those of the run: the computed map where nothing was measured.
        double[] at = await page.EvaluateAsync<double[]>("(() => { const c = fieldsolve.comparison, m = c.mesh; return [m.x[77], m.y[77], c.nodes[77]]; })()");
        int node = Enumerable.Range(0, result.Map.X.Length).First(i => result.Map.X[i] == at[0] && result.Map.Y[i] == at[1]);
        Assert.Equal((result.Gain.Value * result.Map.Potential[node]) + result.Offset.Value, at[2], 1e-9);
        await page.Mouse.MoveAsync(2, 2);
        await page.WaitForFunctionAsync("() => document.querySelectorAll('[data-comparison] .hair').length === 0");
        Assert.Empty(open.Complaints);
        Assert.All(open.Requests, url => Assert.Matches("^(file:.*overlay\\.html|data:image/)", url));
    }

    [BrowserFact]
    public async Task Keys_and_touch_move_the_cursor()
    {
        (OverlayResult result, string path) = Made();
        await using OpenReport open = await report.Open(path: path, options: new() { ViewportSize = new() { Width = 390, Height = 800 }, HasTouch = true });
        IPage page = open.Page;
        ILocator stage = await Stage(page, 2);
        await stage.FocusAsync();
        await page.Keyboard.PressAsync("Home");
        await page.Keyboard.PressAsync("ArrowRight");
        await page.Keyboard.PressAsync("ArrowUp");
        await page.WaitForFunctionAsync("() => document.querySelectorAll('[data-comparison] .hair').length === 3");
        double[] place = await page.EvaluateAsync<double[]>("(() => { const c = fieldsolve.comparison, b = c.mesh.box; return [c.cursor.x - b.cx, c.cursor.y - b.cy, b.diagonal / 50]; })()");
        Assert.Equal(place[2], place[0], 1e-12);
        Assert.Equal(place[2], place[1], 1e-12);
        await AssertReading(page, result);
        Assert.Equal("polite", await page.GetAttributeAsync("[data-comparison] .readout", "aria-live"));
        await page.Keyboard.PressAsync("Escape");
        await page.WaitForFunctionAsync("() => document.querySelectorAll('[data-comparison] .hair').length === 0");
        var box = (await (await Stage(page, 0)).BoundingBoxAsync())!;
        await page.Touchscreen.TapAsync(box.X + (0.5f * box.Width), box.Y + (0.45f * box.Height));
        await page.WaitForFunctionAsync("() => document.querySelectorAll('[data-comparison] .hair').length === 3");
        await AssertReading(page, result);

        // Nothing is wider than a narrow screen.
        Assert.True(await page.EvaluateAsync<bool>("document.documentElement.scrollWidth <= innerWidth"));
        Assert.Empty(open.Complaints);
    }

    [BrowserFact]
    public async Task The_table_kept_from_the_page_is_that_of_the_run_and_its_bytes_are_always_the_same()
    {
        (OverlayResult result, string path) = Made();
        await using OpenReport open = await report.Open(path: path);
        IPage page = open.Page;
        IDownload file = await page.RunAndWaitForDownloadAsync(() => page.Locator("[data-comparison]").GetByRole(AriaRole.Button, new() { Name = "CSV", Exact = true }).ClickAsync());
        string[][] rows = [.. (await File.ReadAllTextAsync((await file.PathAsync())!)).Split("\r\n", StringSplitOptions.RemoveEmptyEntries).Select(l => l.Split(','))];
        OverlaidPoint[] on = [.. result.Points.Where(p => p.Model is not null)];
        Assert.Equal(on.Length, rows.Length - 1);
        Assert.Equal(["sheet_x_m", "sheet_y_m", "value_V", "sigma_V", "model_V", "residual_V", "residual_sigma", "weight", "line"], rows[0]);
        Assert.All(on.Zip(rows.Skip(1)), pair => Assert.Equal(
            [pair.First.Place.X, pair.First.Place.Y, pair.First.Point.Value, pair.First.Sigma, pair.First.Model!.Value, pair.First.Residual!.Value, pair.First.Residual.Value / pair.First.Sigma, pair.First.Weight, pair.First.Point.Line],
            pair.Second.Select(c => double.Parse(c, CultureInfo.InvariantCulture))));
        IDownload picture = await page.RunAndWaitForDownloadAsync(() => page.Locator("[data-comparison]").GetByRole(AriaRole.Button, new() { Name = "SVG", Exact = true }).ClickAsync());
        Assert.Equal(3, Regex.Count(await File.ReadAllTextAsync((await picture.PathAsync())!), "<image "));

        // Another span of the residual's colours gives another picture, and only of the residual.
        const string Pixels = "k => { const c = fieldsolve.comparison.panels[k].canvas; return Array.from(c.getContext('2d').getImageData(0, 0, c.width, c.height).data.filter((v, i) => i % 101 === 0)); }";
        int[] residual = await page.EvaluateAsync<int[]>(Pixels, 2), measured = await page.EvaluateAsync<int[]>(Pixels, 0);
        Assert.True(residual.Distinct().Count() > 10);
        await page.Locator("[data-comparison] select").SelectOptionAsync("maps");
        await page.WaitForFunctionAsync("() => fieldsolve.comparison.panels[2].legend.getAttribute('aria-label').includes('measured − computed') && fieldsolve.comparison.residual === 'maps'");
        await page.EvaluateAsync("fieldsolve.comparison.drawNow()");
        Assert.NotEqual(residual, await page.EvaluateAsync<int[]>(Pixels, 2));
        Assert.Equal(measured, await page.EvaluateAsync<int[]>(Pixels, 0));
        Assert.Empty(open.Complaints);
        string again = report.Other("again-overlay.html");
        Write(again);
        Assert.Equal(await File.ReadAllBytesAsync(path), await File.ReadAllBytesAsync(again));
    }
}
