using System.Globalization;
using System.Text.RegularExpressions;
using FieldSolve.Fields;
using FieldSolve.Pictures;
using FieldSolve.Readings;
using Microsoft.Playwright;
using static FieldSolve.PageTests.PageReader;

namespace FieldSolve.PageTests;

/// <summary>The report of a drive in a real browser with the network off.</summary>
[Collection(ReportCollection.Name)]
public class PageTests(ReportFixture report)
{
    [BrowserTheory]
    [InlineData("")]
    [InlineData("webgl")]
    public async Task It_opens_without_a_request_or_a_complaint_and_the_title_stays_text(string draw)
    {
        await using OpenReport open = await report.Open(draw);
        IPage page = open.Page;
        Assert.Equal(ReportFixture.Title, await page.InnerTextAsync("h1"));
        Assert.Contains("0 <b>deg</b>", await page.InnerTextAsync("[data-maps] select"), StringComparison.Ordinal);
        Assert.Equal(0, await page.Locator("h1 img, [data-maps] b:not(.readout b)").CountAsync());
        Assert.Null(await page.EvaluateAsync<string?>("document.body.dataset.broken ?? null"));
        Assert.Equal(draw.Length > 0 ? draw : "plain", await page.EvaluateAsync<string>("fieldsolve.map.view.kind"));
        await page.WaitForTimeoutAsync(200);
        Assert.Empty(open.Complaints);
        Assert.All(open.Requests, url => Assert.Matches("^(file:.*report\\.html|data:image/)", url));
    }

    [BrowserFact]
    public async Task The_policy_stops_scripts_and_requests_that_are_not_its_own()
    {
        await using OpenReport open = await report.Open();
        IPage page = open.Page;
        string outcome = await page.EvaluateAsync<string>("""
            async () => {
              const script = document.createElement('script');
              script.textContent = 'document.body.dataset.broken = "yes"';
              document.body.append(script);
              let fetched = 'blocked';
              try { await fetch('https://example.org/'); fetched = 'went out'; } catch { }
              return `${document.body.dataset.broken ?? 'not run'}, ${fetched}`;
            }
            """);
        Assert.Equal("not run, blocked", outcome);
        Assert.Contains(open.Complaints, c => c.Contains("Content Security Policy", StringComparison.Ordinal));
    }

    [BrowserTheory]
    [InlineData("plain")]
    [InlineData("webgl")]
    public async Task The_slider_and_the_quantity_change_the_map(string draw)
    {
        await using OpenReport open = await report.Open(draw);
        IPage page = open.Page;
        int[] last = await page.EvaluateAsync<int[]>(Picture);
        Assert.True(last.Distinct().Count() > 20, "The map is empty.");
        await page.FocusAsync(".slide");
        await page.Keyboard.PressAsync("ArrowLeft");
        Assert.Equal("current 150 µA", await page.InnerTextAsync(".value"));
        await page.WaitForTimeoutAsync(300);
        int[] before = await page.EvaluateAsync<int[]>(Picture);
        Assert.NotEqual(last, before);
        await page.Locator("[data-maps] select").Nth(1).SelectOptionAsync("e");
        await page.WaitForTimeoutAsync(300);
        Assert.NotEqual(before, await page.EvaluateAsync<int[]>(Picture));
        Assert.Empty(open.Complaints);
    }

    [BrowserFact]
    public async Task Both_ways_of_drawing_show_the_same_colours()
    {
        // Level lines off: they are drawn differently, thin either way.
        const string Plain = "() => { fieldsolve.map.levels = false; fieldsolve.map.drawNow(); return (" + Picture + ")(); }";
        await using OpenReport a = await report.Open("plain");
        await using OpenReport b = await report.Open("webgl");
        int[] p = await a.Page.EvaluateAsync<int[]>(Plain), q = await b.Page.EvaluateAsync<int[]>(Plain);
        Assert.Equal(p.Length, q.Length);
        Assert.InRange(p.Zip(q, (x, y) => Math.Abs(x - y)).Count(d => d > 8), 0, p.Length / 100);
    }

    [BrowserFact]
    public async Task The_reading_under_the_pointer_is_the_solvers()
    {
        await using OpenReport open = await report.Open();
        await AssertReadingsAsync(
            open.Page, report.Result.Frames.Last(f => f.Wiring == report.Result.Device.Wirings[0].Name), new(report.Result.Device.Law, report.Result.Device.Axis));
    }

    [BrowserFact]
    public async Task Dragged_lines_show_the_profiles_of_the_run()
    {
        await using OpenReport open = await report.Open();
        IPage page = open.Page;
        await page.Locator(".stage").ScrollIntoViewIfNeededAsync();
        var move = (await page.Locator(".handle").Nth(0).BoundingBoxAsync())!;
        await page.Mouse.MoveAsync(move.X + (move.Width / 2), move.Y + (move.Height / 2));
        await page.Mouse.DownAsync();
        await page.Mouse.MoveAsync(move.X + 60, move.Y - 45, new() { Steps = 4 });
        await page.Mouse.UpAsync();
        await page.WaitForTimeoutAsync(100);
        var turn = (await page.Locator(".handle").Nth(1).BoundingBoxAsync())!;
        await page.Mouse.MoveAsync(turn.X + (turn.Width / 2), turn.Y + (turn.Height / 2));
        await page.Mouse.DownAsync();
        await page.Mouse.MoveAsync(turn.X - 30, turn.Y - 90, new() { Steps = 4 });
        await page.Mouse.UpAsync();
        await page.WaitForTimeoutAsync(100);
        double[] at = await page.EvaluateAsync<double[]>("[fieldsolve.map.crossing.x, fieldsolve.map.crossing.y, fieldsolve.map.crossing.angle]");
        Assert.True(at[0] > 3e-7 && at[1] > 2e-7 && at[2] is > 10 and < 170, $"The lines did not follow: {string.Join(", ", at)}.");
        PotentialFrame[] frames = [.. report.Result.Frames.Where(f => f.Wiring == report.Result.Device.Wirings[0].Name)];
        double range = frames[^1].Potential.Max() - frames[^1].Potential.Min();
        for (int line = 0; line < 2; line++)
        {
            double?[][] rows = await page.EvaluateAsync<double?[][]>($"fieldsolve.map.profileRows({line}).filter((r, k) => k % 40 === 5)");
            Assert.Contains(rows, r => r[^1] is not null);
            double angle = (at[2] + (90 * line)) * Math.PI / 180;
            foreach (double?[] row in rows)
            {
                Assert.Equal(at[0] + (row[1]!.Value * Math.Cos(angle)), row[2]!.Value, 1e-12);
                Assert.Equal(at[1] + (row[1]!.Value * Math.Sin(angle)), row[3]!.Value, 1e-12);
                for (int k = 0; k < frames.Length; k++)
                {
                    double? expected = ElementReader.At(frames[k], row[2]!.Value, row[3]!.Value)?.Phi;
                    Assert.Equal(expected is null, row[4 + k] is null);
                    Assert.Equal(expected ?? 0, row[4 + k] ?? 0, 1e-9 * range);
                }
            }
        }
    }

    [BrowserFact]
    public async Task The_keyboard_alone_reaches_everything()
    {
        await using OpenReport open = await report.Open();
        IPage page = open.Page;
        HashSet<string> reached = [];
        for (int k = 0; k < 120; k++)
        {
            await page.Keyboard.PressAsync("Tab");
            string what = await page.EvaluateAsync<string>("""
                () => { const e = document.activeElement; e.dataset.seen = 'yes';
                  return e.matches('.stage, .handle, .plot, .slide, .play') ? e.getAttribute('class') : e.tagName; }
                """);
            reached.Add(what);
        }

        Assert.Superset(new HashSet<string>(["stage", "handle screen", "plot", "slide", "play", "SELECT", "INPUT", "BUTTON", "SUMMARY"]), reached);
        string missed = await page.EvaluateAsync<string>("""
            () => [...document.querySelectorAll('button, select, input, summary, [tabindex]')].filter(e => e.dataset.seen !== 'yes' && e.getClientRects().length)
              .map(e => e.outerHTML.slice(0, 80)).join(' | ')
            """);
        Assert.Equal("", missed);

        // The reading point, a handle and a point of a curve by keys.
        await page.FocusAsync(".stage");
        await page.Keyboard.PressAsync("ArrowRight");
        await page.Keyboard.PressAsync("ArrowUp");
        Assert.Contains("φ", await page.InnerTextAsync(".readout"), StringComparison.Ordinal);
        await page.Locator(".handle").Nth(1).FocusAsync();
        await page.Keyboard.PressAsync("ArrowLeft");
        await page.Keyboard.PressAsync("ArrowLeft");
        await page.WaitForTimeoutAsync(100);
        Assert.Equal(2, await page.EvaluateAsync<double>("fieldsolve.map.crossing.angle"), 1e-9);
        Assert.Contains("handle", await page.EvaluateAsync<string>("document.activeElement.getAttribute('class') ?? ''"), StringComparison.Ordinal);
        await page.FocusAsync(".plot");
        await page.Keyboard.PressAsync("ArrowDown");
        await page.Keyboard.PressAsync("End");
        await page.Keyboard.PressAsync("ArrowLeft");
        await page.Keyboard.PressAsync("Enter");
        Assert.Equal("current 150 µA", await page.InnerTextAsync(".value"));
        Assert.Equal(1, await page.EvaluateAsync<int>("fieldsolve.map.mapIndex"));
        string unnamed = await page.EvaluateAsync<string>("""
            () => [...document.querySelectorAll('button, select, input, [role]')].filter(e => !(e.getAttribute('aria-label') || e.textContent.trim() || e.closest('label')?.textContent.trim()))
              .map(e => e.outerHTML.slice(0, 80)).join(' | ')
            """);
        Assert.Equal("", unnamed);
    }

    [BrowserFact]
    public async Task A_click_on_a_point_selects_its_map()
    {
        await using OpenReport open = await report.Open();
        IPage page = open.Page;
        await page.Locator("[data-chart=even] .hit[data-map=map-1][data-frame='3']").ClickAsync(new() { Force = true });
        Assert.Equal("current 150 µA", await page.InnerTextAsync(".value"));
        Assert.Equal("1", await page.Locator("[data-maps] select").Nth(0).InputValueAsync());
        Assert.Equal(1, await page.Locator("[data-chart=even] .now").CountAsync());
    }

    [BrowserFact]
    public async Task Files_kept_from_the_page_hold_the_numbers_of_the_run()
    {
        await using OpenReport open = await report.Open();
        IPage page = open.Page;
        async Task<string> Keep(string place, string button)
        {
            IDownload file = await page.RunAndWaitForDownloadAsync(() => page.Locator(place).GetByRole(AriaRole.Button, new() { Name = button, Exact = true }).First.ClickAsync());
            return await File.ReadAllTextAsync((await file.PathAsync())!);
        }

        string[] lines = (await Keep("[data-chart=curves]", "CSV")).Split("\r\n", StringSplitOptions.RemoveEmptyEntries);
        CurveRow[] rows = [.. report.Result.Rows.Concat(report.Result.ReversedRows)];
        Assert.Equal(1 + rows.DistinctBy(r => (r.Wiring, r.Current)).Count(), lines.Length);
        foreach (string line in lines.Skip(1))
        {
            string[] cells = line.Split(',');
            double current = double.Parse(cells[1], CultureInfo.InvariantCulture);
            Reading along = rows.First(r => r.Wiring == cells[0] && r.Current == current).Of("along")!;
            Assert.Equal(along.Value, double.Parse(cells[2], CultureInfo.InvariantCulture));
            Assert.Equal(along.Error, double.Parse(cells[3], CultureInfo.InvariantCulture));
        }

        string map = await Keep("[data-maps] .tools", "CSV");
        PotentialFrame frame = report.Result.Frames.Last(f => f.Wiring == report.Result.Device.Wirings[0].Name);
        double range = frame.Potential.Max() - frame.Potential.Min();
        double[][] nodes = [.. map.Split("\r\n", StringSplitOptions.RemoveEmptyEntries).Skip(1).Select(l => l.Split(',').Select(c => double.Parse(c, CultureInfo.InvariantCulture)).ToArray())];
        Assert.Equal(frame.X.Length, nodes.Length);
        var byPlace = nodes.ToDictionary(n => (n[0], n[1]), n => n[2]);
        for (int i = 0; i < frame.X.Length; i++)
        {
            Assert.Equal(frame.Potential[i], byPlace[(frame.X[i], frame.Y[i])], 3e-10 * range);
        }

        foreach (string place in (string[])["[data-chart=even]", "[data-maps] .tools", "[data-maps] .right"])
        {
            string picture = await Keep(place, "SVG");
            System.Xml.Linq.XDocument svg = System.Xml.Linq.XDocument.Parse(picture);
            Assert.Equal("svg", svg.Root!.Name.LocalName);
            Assert.Contains(svg.Descendants(), e => e.Name.LocalName == "path");
            IDownload png = await page.RunAndWaitForDownloadAsync(() => page.Locator(place).GetByRole(AriaRole.Button, new() { Name = "PNG", Exact = true }).First.ClickAsync());
            byte[] bytes = await File.ReadAllBytesAsync((await png.PathAsync())!);
            Assert.True(bytes.Length > 4000 && bytes[1] == 'P' && bytes[2] == 'N' && bytes[3] == 'G');
        }

        Assert.Empty(open.Complaints);
    }

    [BrowserFact]
    public async Task Bars_and_histograms_stand_where_their_numbers_are()
    {
        LiveSeries Series(string name, double[] x, double[] y) => new(name, 0, x, y, [], [], null, []);
        LiveData data = new()
        {
            Charts =
            {
                new("bars", "Budget", "", [new("share", "contact", "", "share", "V", [Series("shift", [0, 1, 2], [1e-6, -2e-6, 4e-6])]) { Kind = "bars", Categories = ["c1", "<i>c2</i>", "c3"] }]),
                new("histogram", "Spread", "", [new("spread", "V_along", "V", "runs", "", [Series("runs", [0, 1e-3, 2e-3], [30, 10])]) { Kind = "histogram", Marks = [(5e-4, "median")] }]),
            },
        };
        await using OpenReport open = await report.Open();
        double[][] boxes = await open.Page.EvaluateAsync<double[][]>(
            """
            json => JSON.parse(json).charts.map(spec => {
              const host = document.createElement('section');
              document.querySelector('main').prepend(host);
              host.chart = new fieldsolve.Chart(host, spec, () => {});
              return [...host.querySelectorAll('.plot rect')].flatMap(r => ['x', 'y', 'width', 'height'].map(a => Number(r.getAttribute(a))));
            })
            """,
            data.Json());
        double[] b = boxes[0], h = boxes[1];
        Assert.Equal(12, b.Length);
        Assert.Equal(2 * b[2], b[6], 0.1);   // lengths as 1 : 2 : 4, the second below zero
        Assert.Equal(4 * b[2], b[10], 0.1);
        Assert.Equal(b[0], b[4] + b[6], 0.1);
        Assert.Equal(8, h.Length);
        Assert.Equal(h[0] + h[2], h[4], 0.1);
        Assert.Equal(3 * h[7], h[3], 0.1);
        Assert.Equal("<i>c2</i>", await open.Page.EvaluateAsync<string>("[...document.querySelectorAll('.plot text')].map(t => t.textContent).find(t => t.includes('c2'))"));
        Assert.Empty(open.Complaints);
    }

    [BrowserFact]
    public async Task Without_scripts_the_page_shows_answer_tables_and_still_pictures()
    {
        await using OpenReport open = await report.Open(options: new() { JavaScriptEnabled = false });
        IPage page = open.Page;
        Assert.Contains("along", await page.InnerTextAsync(".answer"), StringComparison.Ordinal);
        Assert.True(await page.Locator("figure img").CountAsync() >= 9);
        Assert.True(await page.Locator("table").CountAsync() >= 5);
        Assert.Equal(0, await page.Locator(".live:visible").CountAsync());
    }

    [BrowserTheory]
    [InlineData(320)]
    [InlineData(768)]
    [InlineData(1600)]
    public async Task No_width_makes_the_page_scroll_sideways(int width)
    {
        await using OpenReport open = await report.Open(options: new() { ViewportSize = new() { Width = width, Height = 800 }, ColorScheme = ColorScheme.Dark });
        Assert.Equal("dark", await open.Page.EvaluateAsync<string>("document.documentElement.dataset.theme"));
        Assert.InRange(await open.Page.EvaluateAsync<int>("document.documentElement.scrollWidth"), 1, width);
    }

    [BrowserFact]
    public async Task On_paper_the_page_is_light_and_its_parts_fit()
    {
        await using OpenReport open = await report.Open(options: new() { ViewportSize = new() { Width = 703, Height = 1000 }, ColorScheme = ColorScheme.Dark });
        IPage page = open.Page;
        await page.EmulateMediaAsync(new() { Media = Media.Print });
        await page.WaitForTimeoutAsync(300);
        Assert.Equal("rgb(255, 255, 255)", await page.EvaluateAsync<string>("getComputedStyle(document.body).backgroundColor"));
        Assert.InRange(await page.EvaluateAsync<double>("Math.max(...[...document.querySelectorAll('.live, .live div, .live > * > svg, .live canvas')].map(e => e.getBoundingClientRect().right))"), 100, 704);
        byte[] pdf = await page.PdfAsync(new() { Format = "A4" });
        Assert.InRange(Regex.Count(System.Text.Encoding.Latin1.GetString(pdf), @"/Type\s*/Page[^s]"), 3, 12);
    }

    [BrowserFact]
    public void Two_renderings_of_a_run_are_the_same_bytes()
    {
        string again = report.Other("again.html");
        report.Write(again);
        Assert.Equal(File.ReadAllBytes(report.Path), File.ReadAllBytes(again));
    }
}
