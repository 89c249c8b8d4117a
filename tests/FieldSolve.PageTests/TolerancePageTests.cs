using System.Globalization;
using FieldSolve.Runs;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>The report of a tolerance run in a real browser with the network off.</summary>
[Collection(ReportCollection.Name)]
public class TolerancePageTests(ReportFixture report)
{
    [BrowserFact]
    public async Task Budget_and_samples_hold_the_numbers_of_the_run()
    {
        (ToleranceResult result, string path) = report.Tolerance;
        await using OpenReport open = await report.Open(path: path);
        IPage page = open.Page;
        Assert.Equal(ReportFixture.Title, await page.InnerTextAsync("h1"));
        Assert.Null(await page.EvaluateAsync<string?>("document.body.dataset.broken ?? null"));
        string wiring = result.Device.Wirings[0].Name;
        async Task<string[][]> Kept(string chart)
        {
            IDownload file = await page.RunAndWaitForDownloadAsync(
                () => page.Locator($"[data-chart={chart}]").GetByRole(AriaRole.Button, new() { Name = "CSV", Exact = true }).ClickAsync());
            return [.. (await File.ReadAllTextAsync((await file.PathAsync())!)).Split("\r\n", StringSplitOptions.RemoveEmptyEntries).Skip(1).Select(l => l.Split(','))];
        }

        BudgetEntry[] entries = [.. result.Budget.Where(e => e.Quantity.Wiring == wiring && e.Quantity.Pair == "across" && e.Quantity.Part == ReadingPart.Odd && e.Contribution != 0)];
        string[][] bars = await Kept("budget-0");
        Assert.Equal(Math.Min(12, entries.Length), bars.Length);
        foreach (string[] bar in bars)
        {
            BudgetEntry entry = entries.Single(e => e.Cause.Label == bar[1]);
            Assert.Equal((entry.Contribution, entry.Error), (double.Parse(bar[2], CultureInfo.InvariantCulture), double.Parse(bar[3], CultureInfo.InvariantCulture)));
        }

        // Every bar of the histogram counts the samples between its edges.
        int q = result.Quantities.ToList().FindIndex(s => s.Wiring == wiring && s.Pair == "across" && s.Part == ReadingPart.Odd);
        double[] values = [.. result.Samples.Where(s => s.Values.Length > 0).Select(s => s.Values[q])];
        double[][] bins = [.. (await Kept("samples-0")).Select(b => b.Skip(1).Select(c => double.Parse(c, CultureInfo.InvariantCulture)).ToArray())];
        Assert.Equal(values.Length, bins.Sum(b => b[2]));
        double least = 1e-9 * (values.Max() - values.Min());
        Assert.All(bins, b => Assert.InRange(b[2], values.Count(v => v > b[0] + least && v < b[1] - least), values.Count(v => v >= b[0] - least && v <= b[1] + least)));
        Assert.Equal(["5 %", "50 %", "95 %", "designed"], (await page.Locator("[data-chart=samples-0] .plot text").AllTextContentsAsync()).Where(t => t.EndsWith('%') || t == "designed").Order(StringComparer.Ordinal));
        await page.Locator("[data-chart=samples-0] select").SelectOptionAsync("1");
        await page.WaitForTimeoutAsync(200);
        Assert.Empty(open.Complaints);
        Assert.All(open.Requests, url => Assert.Matches("^(file:.*tolerance\\.html|data:image/)", url));
        string again = report.Other("again-tolerance.html");
        report.WriteTolerance(again);
        Assert.Equal(await File.ReadAllBytesAsync(path), await File.ReadAllBytesAsync(again));
    }

    [BrowserFact]
    public async Task The_device_reads_the_share_of_each_contact()
    {
        (ToleranceResult result, string path) = report.Tolerance;
        await using OpenReport open = await report.Open(path: path);
        IPage page = open.Page;
        ILocator section = page.Locator("[data-share]"), plot = section.Locator(".plot"), spoken = section.Locator(".spoken");

        // From the budget itself: the contact's own squared contributions over all.
        double Share(string wiring, string quantity, int contact)
        {
            BudgetEntry[] entries = [.. result.Budget.Where(e => e.Quantity.Wiring == wiring && e.Quantity.Label == quantity && e.Order == 1)];
            return entries.Where(e => e.Cause.Target.Contacts.Count == 1 && e.Cause.Target.Contacts[0] == contact).Sum(e => e.Contribution * e.Contribution) / entries.Sum(e => e.Contribution * e.Contribution);
        }

        void Same(double share, string text, string contact)
        {
            Assert.StartsWith(contact + ": ", text, StringComparison.Ordinal);
            if (share is > 0 and < 1e-5)
            {
                Assert.StartsWith(contact + ": less than 0.001 %", text, StringComparison.Ordinal);
                return;
            }

            double shown = double.Parse(text[(contact.Length + 2)..].Split(" %")[0], CultureInfo.InvariantCulture);
            Assert.Equal(100 * share, shown, 0.6 * Math.Pow(10, Math.Floor(Math.Log10(Math.Max(100 * share, 1e-6))) - 2));
        }

        string wiring = result.Device.Wirings[0].Name, other = result.Device.Wirings[1].Name;
        await plot.FocusAsync();
        for (int contact = 0; contact < result.Device.Contacts.Count; contact++)
        {
            await page.Keyboard.PressAsync("ArrowRight");
            Same(Share(wiring, "across odd", contact), await spoken.InnerTextAsync(), result.Device.Contacts[contact].Name);
        }

        // Another wiring and reading, by the pointer.
        await section.Locator("select").Nth(0).SelectOptionAsync(other);
        await section.Locator("select").Nth(1).SelectOptionAsync("along odd");
        double[] place = await page.EvaluateAsync<double[]>("[fieldsolve.shares[0].places[4].u, fieldsolve.shares[0].places[4].v]");
        await plot.HoverAsync(new() { Position = new() { X = (float)place[0], Y = (float)place[1] } });
        Same(Share(other, "along odd", 4), await spoken.InnerTextAsync(), result.Device.Contacts[4].Name);
        IDownload file = await page.RunAndWaitForDownloadAsync(() => section.GetByRole(AriaRole.Button, new() { Name = "CSV", Exact = true }).ClickAsync());
        string[][] rows = [.. (await File.ReadAllTextAsync((await file.PathAsync())!)).Split("\r\n", StringSplitOptions.RemoveEmptyEntries).Skip(1).Select(l => l.Split(','))];
        string[] row = rows.Single(r => r[0] == other && r[1] == "along odd" && r[2] == result.Device.Contacts[4].Name);
        Assert.Equal(Share(other, "along odd", 4), double.Parse(row[3], CultureInfo.InvariantCulture), 1e-12);
        Assert.Empty(open.Complaints);
    }
}
