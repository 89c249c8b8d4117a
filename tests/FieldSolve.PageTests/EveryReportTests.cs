using System.Text.RegularExpressions;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>What holds for the report of every command: narrow screens, keyboard, paper, and its parts.</summary>
[Collection(ReportCollection.Name)]
public class EveryReportTests(ReportFixture report)
{
    [BrowserTheory]
    [InlineData("drive", 9)]
    [InlineData("ring", 10)]
    [InlineData("axis", 10)]
    [InlineData("lockin", 10)]
    [InlineData("tolerance", 9)]
    [InlineData("fit", 7)]
    public async Task It_is_whole_narrow_by_keys_and_on_paper(string kind, int mostPages)
    {
        await using OpenReport open = await report.Open(options: new() { ViewportSize = new() { Width = 390, Height = 800 } }, path: report.PathOf(kind));
        IPage page = open.Page;
        Assert.InRange(await page.EvaluateAsync<int>("document.documentElement.scrollWidth"), 1, 390);

        // No text of a picture is cut off by the edge of its picture.
        string cut = await page.EvaluateAsync<string>("""
            () => [...document.querySelectorAll('svg.plot text, svg.legend text')].filter(t => { const a = t.getBoundingClientRect(), b = t.closest('section').getBoundingClientRect();
              return a.width > 0 && (a.left < b.left - 1 || a.right > b.right + 1); }).map(t => t.textContent).join(' | ')
            """);
        Assert.Equal("", cut);

        // Device, answer, accuracy and settings are there, the answer first.
        string[] heads = [.. await page.Locator("h2").AllInnerTextsAsync()];
        Assert.Equal("Answer", heads[0]);
        Assert.Contains("Accuracy", heads);
        Assert.Contains("Settings", heads);
        Assert.True(await page.Locator(".answer li").CountAsync() > 0);
        Assert.True(await page.Locator("figure img").CountAsync() > 0);

        // Tab alone comes to everything that can be used, and everything has a name.
        string missed = "?";
        for (int k = 0; k < 8 && missed.Length > 0; k++)
        {
            for (int n = 0; n < 40; n++)
            {
                await page.Keyboard.PressAsync("Tab");
                await page.EvaluateAsync("document.activeElement.dataset.seen = 'yes'");
            }

            missed = await page.EvaluateAsync<string>("""
                () => [...document.querySelectorAll('button, select, input, summary, [tabindex]')].filter(e => e.dataset.seen !== 'yes' && e.getClientRects().length)
                  .map(e => e.outerHTML.slice(0, 80)).join(' | ')
                """);
        }

        Assert.Equal("", missed);
        Assert.Equal("", await page.EvaluateAsync<string>("""
            () => [...document.querySelectorAll('button, select, input, [role]')].filter(e => !(e.getAttribute('aria-label') || e.textContent.trim() || e.closest('label')?.textContent.trim()))
              .map(e => e.outerHTML.slice(0, 80)).join(' | ')
            """));

        byte[] pdf = await page.PdfAsync(new() { Format = "A4" });
        Assert.InRange(Regex.Count(System.Text.Encoding.Latin1.GetString(pdf), @"/Type\s*/Page[^s]"), 2, mostPages);
        Assert.Empty(open.Complaints);
    }
}
