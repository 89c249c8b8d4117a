using System.Globalization;
using FieldSolve.Runs;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>The report of a fit in a real browser with the network off.</summary>
[Collection(ReportCollection.Name)]
public class FitPageTests(ReportFixture report)
{
    private static double Number(string text) => double.Parse(text.Replace('−', '-'), CultureInfo.InvariantCulture);

    [BrowserFact]
    public async Task Correlations_and_profiles_are_those_of_the_fit()
    {
        (FitResult result, string path) = report.Fit;
        await using OpenReport open = await report.Open(path: path);
        IPage page = open.Page;
        Assert.Equal(ReportFixture.Title, await page.InnerTextAsync("h1"));
        Assert.Null(await page.EvaluateAsync<string?>("document.body.dataset.broken ?? null"));
        ILocator matrix = page.Locator("[data-chart=fit-correlations]"), profile = page.Locator("[data-chart=fit-profiles]");
        async Task<string[][]> Kept(ILocator chart)
        {
            IDownload file = await page.RunAndWaitForDownloadAsync(() => chart.GetByRole(AriaRole.Button, new() { Name = "CSV", Exact = true }).ClickAsync());
            return [.. (await File.ReadAllTextAsync((await file.PathAsync())!)).Split("\r\n", StringSplitOptions.RemoveEmptyEntries).Skip(1).Select(l => l.Split(','))];
        }

        string[] names = [.. result.Parameters.Select(p => p.Parameter.Label)];
        string[][] cells = await Kept(matrix);
        Assert.Equal(names.Length * names.Length, cells.Length);
        foreach (string[] cell in cells)
        {
            int i = Array.IndexOf(names, cell[0]), j = Array.IndexOf(names, cell[1]);
            Assert.Equal(i == j ? 1 : result.Correlation[i, j], Number(cell[2]));
        }

        // By keys to the third field of the second row, by the pointer to the first of the third.
        await matrix.Locator(".plot").FocusAsync();
        foreach (string key in (string[])["Home", "ArrowDown", "ArrowRight", "ArrowRight"])
        {
            await page.Keyboard.PressAsync(key);
        }

        async Task Reads(int i, int j)
        {
            string text = await matrix.Locator(".spoken").InnerTextAsync();
            Assert.StartsWith($"{names[i]} with {names[j]}: ", text, StringComparison.Ordinal);
            Assert.Equal(100 * result.Correlation[i, j], Number(text.Split(": ")[1].Split(' ')[0]), 0.006 * Math.Max(1, Math.Abs(100 * result.Correlation[i, j])));
        }

        await Reads(1, 2);
        const string Place = "(i => { const c = fieldsolve.charts.find(c => c.spec.id === i[0]), p = c.placed[i[1]][i[2]]; return [p.u, p.v]; })";
        double[] place = await page.EvaluateAsync<double[]>(Place, new object[] { "fit-correlations", 2, 0 });
        await matrix.Locator(".plot").HoverAsync(new() { Position = new() { X = (float)place[0], Y = (float)place[1] } });
        await Reads(2, 0);

        // The one number whose interval was asked for: its points, and the ends where chi squared has risen by its 95 % point.
        FittedParameter a = result.Parameters.Single(p => p.Profile.Count > 0);
        Assert.Equal("a", a.Parameter.Label);
        string[][] points = [.. (await Kept(profile)).Where(r => r[0] == "profile")];
        Assert.Equal([.. a.Profile.Select(p => (p.Value, p.Rise))], [.. points.Select(r => (Number(r[1]), Number(r[2])))]);
        Assert.True(a.Profile.Count >= 5);
        foreach (double? end in (double?[])[a.Interval!.Value.Low, a.Interval.Value.High])
        {
            Assert.Equal(3.84, a.Profile.Single(p => p.Value == end).Rise, 0.05);
        }

        int best = a.Profile.ToList().FindIndex(p => p.Rise == 0);
        place = await page.EvaluateAsync<double[]>(Place, new object[] { "fit-profiles", 0, best });
        await profile.Locator(".plot").HoverAsync(new() { Position = new() { X = (float)place[0], Y = (float)place[1] } });
        Assert.StartsWith("profile: a ", await profile.Locator(".spoken").InnerTextAsync(), StringComparison.Ordinal);
        Assert.Equal(["low", "fit", "high"], (await profile.Locator(".plot text").AllTextContentsAsync()).Where(t => t is "low" or "fit" or "high"));
        foreach (ILocator chart in (ILocator[])[matrix, profile])
        {
            IDownload svg = await page.RunAndWaitForDownloadAsync(() => chart.GetByRole(AriaRole.Button, new() { Name = "SVG", Exact = true }).ClickAsync());
            Assert.Equal("svg", System.Xml.Linq.XDocument.Load((await svg.PathAsync())!).Root!.Name.LocalName);
        }

        Assert.Empty(open.Complaints);
        Assert.All(open.Requests, url => Assert.Matches("^(file:.*fit\\.html|data:image/)", url));
        string again = report.Other("again-fit.html");
        report.WriteFit(again);
        Assert.Equal(await File.ReadAllBytesAsync(path), await File.ReadAllBytesAsync(again));
    }
}
