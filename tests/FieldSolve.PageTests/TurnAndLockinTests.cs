using System.Globalization;
using System.Text.RegularExpressions;
using FieldSolve.Device;
using FieldSolve.Fields;
using FieldSolve.Lockin;
using FieldSolve.Turning;
using Microsoft.Playwright;
using static FieldSolve.PageTests.PageReader;

namespace FieldSolve.PageTests;

/// <summary>The reports of a turn and of an AC run in a real browser with the network off.</summary>
[Collection(ReportCollection.Name)]
public class TurnAndLockinTests(ReportFixture report)
{
    private string PathOf(string kind) => kind switch { "ring" => report.Ring.Path, "axis" => report.Axis.Path, _ => report.Lockin.Path };

    private static double[] Numbers(string line, int from) => [.. line.Split(',').Skip(from).Take(3).Select(c => double.Parse(c, CultureInfo.InvariantCulture))];

    private static async Task<string[]> Kept(IPage page, string chart)
    {
        IDownload file = await page.RunAndWaitForDownloadAsync(
            () => page.Locator($"[data-chart={chart}]").GetByRole(AriaRole.Button, new() { Name = "CSV", Exact = true }).ClickAsync());
        return (await File.ReadAllTextAsync((await file.PathAsync())!)).Split("\r\n", StringSplitOptions.RemoveEmptyEntries)[1..];
    }

    [BrowserTheory]
    [InlineData("ring", "direction")]
    [InlineData("axis", "axis")]
    [InlineData("lockin", "phase")]
    public async Task They_open_quietly_and_the_slider_changes_the_map(string kind, string word)
    {
        string path = PathOf(kind);
        await using OpenReport open = await report.Open(path: path);
        IPage page = open.Page;
        Assert.Equal(ReportFixture.Title, await page.InnerTextAsync("h1"));
        Assert.Null(await page.EvaluateAsync<string?>("document.body.dataset.broken ?? null"));
        Assert.Equal(0, await page.Locator(".live b:not(.readout b)").CountAsync());
        int[] first = await page.EvaluateAsync<int[]>(Picture);
        Assert.True(first.Distinct().Count() > 20, "The map is empty.");
        string before = await page.InnerTextAsync(".value");
        Assert.StartsWith(word + " ", before, StringComparison.Ordinal);
        await page.FocusAsync(".slide");
        await page.Keyboard.PressAsync("ArrowRight");
        await page.WaitForTimeoutAsync(300);
        Assert.NotEqual(before, await page.InnerTextAsync(".value"));
        Assert.NotEqual(first, await page.EvaluateAsync<int[]>(Picture));
        await page.Locator("label:has-text('current lines') input").CheckAsync();
        await page.Locator(".live label:has-text('Quantity') select").SelectOptionAsync("k");
        await page.WaitForTimeoutAsync(300);

        // Played, it goes round: the last frame is followed by the first.
        int last = await page.EvaluateAsync<int>("() => { const m = fieldsolve.map; m.show(m.map.id, m.map.frames.length - 1); m.play(true); return m.timer ? m.frameIndex : -1; }");
        Assert.InRange(last, 0, 1);
        await page.WaitForFunctionAsync("from => fieldsolve.map.frameIndex > from", last);
        await page.ClickAsync(".play");
        Assert.Empty(open.Complaints);
        Assert.All(open.Requests, url => Assert.Matches("^(file:.*" + kind + "\\.html|data:image/)", url));
        Assert.InRange(await page.EvaluateAsync<int>("document.documentElement.scrollWidth"), 1, 1200);
    }

    [BrowserFact]
    public async Task Every_phase_of_the_cycle_reads_as_solved_and_a_click_on_a_wave_shows_it()
    {
        (LockinResult result, string path) = report.Lockin;
        await using OpenReport open = await report.Open(path: path);
        IPage page = open.Page;
        Assert.Equal("phase 90°, I = 283 µA", await page.InnerTextAsync(".value"));
        await page.Locator("[data-chart=waves] .hit[data-map=map-1][data-frame='21']").ClickAsync(new() { Force = true });
        Assert.Equal("phase 315°, I = −200 µA", await page.InnerTextAsync(".value"));
        Assert.Equal(1, await page.Locator("[data-chart=waves] .now").CountAsync());
        CycleFrame frame = result.Frames.Single(f => f.Wiring == result.Device.Wirings[1].Name && f.Phase == 315);
        await AssertReadingsAsync(page, PotentialFrame.Of(frame.Map), new(result.Device.Law, result.Device.Axis));

        // 135 degrees has the current of 45 and is not sent twice.
        await page.EvaluateAsync("fieldsolve.map.show('map-1', 9)");
        Assert.Equal("phase 135°, I = 200 µA", await page.InnerTextAsync(".value"));
        frame = result.Frames.Single(f => f.Wiring == result.Device.Wirings[1].Name && f.Phase == 135);
        await AssertReadingsAsync(page, PotentialFrame.Of(frame.Map), new(result.Device.Law, result.Device.Axis));
    }

    [BrowserFact]
    public async Task Harmonics_and_waves_hold_the_numbers_of_the_run()
    {
        (LockinResult result, string path) = report.Lockin;
        await using OpenReport open = await report.Open(path: path);
        string wiring = result.Device.Wirings[0].Name;
        LockinPoint[] points = [.. result.Points.Where(p => p.Wiring == wiring).OrderBy(p => p.CurrentRms)];
        string[] lines = await Kept(open.Page, "harmonics");
        HarmonicReading[] expected = [.. Enumerable.Range(1, 3).SelectMany(h => points.Select(p => p.Of("along", h)!)).Where(r => r.R > r.Error)];
        Assert.Equal(expected.Length, lines.Length);
        for (int k = 0; k < lines.Length; k++)
        {
            double[] cells = Numbers(lines[k], 1);
            Assert.Equal(points.Single(p => p.Readings.Contains(expected[k])).CurrentRms, cells[0]);
            Assert.Equal((expected[k].R, expected[k].Error), (cells[1], cells[2]));
        }

        // On logarithmic axes the expected lines rise by one, two and three decades per decade.
        double[] slopes = await open.Page.EvaluateAsync<double[]>("""
            () => {
              const chart = fieldsolve.charts.find(c => c.spec.id === 'harmonics');
              const ends = s => [[s.curve[0][0], s.curve[1][0]], [s.curve[0].at(-1), s.curve[1].at(-1)]];
              return chart.view.series.map(s => { const [[a, b], [c, d]] = ends(s); return Math.log(d / b) / Math.log(c / a); });
            }
            """);
        Assert.All(slopes.Select((s, k) => s - (k + 1)), d => Assert.Equal(0, d, 1e-9));
        Assert.True(await open.Page.Locator("[data-chart=harmonics] .tick input").First.IsCheckedAsync());
        Assert.Contains("fitted slope 2.0", await open.Page.InnerTextAsync("[data-chart=harmonics] .key"), StringComparison.Ordinal);

        // V(t) from the harmonics as tabled: RMS along sin and cos.
        string[] waves = [.. (await Kept(open.Page, "waves")).Where(l => !l.StartsWith("60 deg", StringComparison.Ordinal))];
        Assert.Equal(24, waves.Length);
        foreach (string line in waves)
        {
            double[] cells = Numbers(line, 1);
            double sum = points[^1].Readings.Where(r => r.Pair == "along").Sum(r =>
            {
                double angle = r.Harmonic * cells[0] * Math.PI / 180;
                return r.Harmonic == 0 ? r.X : Math.Sqrt(2) * ((r.X * Math.Sin(angle)) + (r.Y * Math.Cos(angle)));
            });
            Assert.Equal(sum, cells[1], 1e-4 * Math.Sqrt(2) * points[^1].Of("along", 1)!.R);
        }

        Assert.Empty(open.Complaints);
    }

    [BrowserFact]
    public async Task A_click_on_a_direction_shows_its_map_and_its_contacts()
    {
        (TurnResult result, string path) = report.Ring;
        Assert.Equal(6, result.Frames.Count);
        await using OpenReport open = await report.Open(path: path);
        IPage page = open.Page;
        for (int k = 1; k < 6; k += 3)
        {
            TurnFrame frame = result.Frames.OrderBy(f => f.DirectionDegrees).ElementAt(k);
            await page.Locator($"[data-chart=angles] .hit[data-frame='{k}']").First.ClickAsync(new() { Force = true });
            Assert.StartsWith($"direction {60 * k}°", await page.InnerTextAsync(".value"), StringComparison.Ordinal);
            await page.WaitForTimeoutAsync(100);
            Wiring wiring = result.Drive.Device.Wirings.Single(w => w.Name == frame.Frame.Wiring);
            string[] names = await page.Locator(".stage .names text").AllTextContentsAsync() is { } all ? [.. all] : [];
            Assert.Contains(result.Drive.Device.Contacts[wiring.Source].Name + " I+", names);
            Assert.Contains(result.Drive.Device.Contacts[wiring.Drain].Name + " I−", names);
            await AssertReadingsAsync(page, frame.Frame, new(result.Drive.Device.Law, result.Drive.Device.Axis));
        }

        // The curve over the direction, as in angles.csv.
        string[] lines = await Kept(page, "angles");
        TurnRow[] rows = [.. result.Rows.Where(r => r.Row.Current != 0).OrderByDescending(r => r.Row.Current).ThenBy(r => r.DirectionDegrees)];
        Assert.Equal(rows.Length, lines.Length);
        for (int k = 0; k < rows.Length; k++)
        {
            Assert.Equal([rows[k].DirectionDegrees, rows[k].Row.Of("along")!.Odd!.Value, rows[k].Row.Of("along")!.Error], Numbers(lines[k], 1));
        }

        Assert.Equal(["ratio 1", "ratio 4"], (await page.Locator("[data-chart=ratios] .key button").AllInnerTextsAsync()).Select(t => t.Trim()));
        Assert.Matches(new Regex("strip formulas"), await page.InnerTextAsync("[data-chart=angles] .key"));
        Assert.Empty(open.Complaints);
    }

    [BrowserFact]
    public async Task With_the_crystal_the_law_of_the_map_turns()
    {
        (TurnResult result, string path) = report.Axis;
        Assert.Equal(6, result.Frames.Count);
        await using OpenReport open = await report.Open(path: path);

        // The first half is solved, the second follows from the reversed current.
        foreach (int k in (int[])[1, 4])
        {
            double axis = await open.Page.EvaluateAsync<double>("k => { const m = fieldsolve.map; m.show(m.map.id, k); return m.map.frames[k].value; }", k);
            TurnFrame frame = result.Frames.Single(f => Math.Abs(f.AxisDegrees - axis) < 1e-9);
            await AssertReadingsAsync(open.Page, frame.Frame, new(result.Drive.Device.Law, axis * Math.PI / 180));
        }

        // A frame that was not solved for carries no current out of nowhere: its probes read what the table says.
        foreach (TurnFrame frame in result.Frames)
        {
            Wiring wiring = result.Drive.Device.Wirings[0];
            double along = frame.Frame.ContactPotential[wiring.Along!.Plus.Index] - frame.Frame.ContactPotential[wiring.Along.Minus.Index];
            double tabled = result.Rows.Single(r => r.AxisDegrees == frame.AxisDegrees && r.Row.Current == frame.Frame.Current).Row.Of("along")!.Value;
            Assert.Equal(tabled, along, 1e-2 * Math.Abs(tabled));
        }

        Assert.Empty(open.Complaints);
    }

    [BrowserFact]
    public void Their_renderings_are_the_same_bytes_every_time()
    {
        string again = report.Other("again-turn.html");
        report.WriteTurn(report.Axis, again);
        Assert.Equal(File.ReadAllBytes(report.Axis.Path), File.ReadAllBytes(again));
        string cycle = report.Lockin.Path;
        report.WriteLockin(again);
        Assert.Equal(File.ReadAllBytes(cycle), File.ReadAllBytes(again));
    }
}
