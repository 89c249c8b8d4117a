using System.Globalization;
using System.Text.RegularExpressions;
using FieldSolve.Fields;
using FieldSolve.Laws;
using Microsoft.Playwright;

namespace FieldSolve.PageTests;

/// <summary>Reads what a page shows and holds it against the solver.</summary>
internal static class PageReader
{
    /// <summary>A script that gives some of the map's pixels.</summary>
    public const string Picture = "() => { const c = fieldsolve.map.canvas, s = document.createElement('canvas'); s.width = c.width; s.height = c.height;"
        + " const p = s.getContext('2d'); p.drawImage(c, 0, 0); return Array.from(p.getImageData(0, 0, s.width, s.height).data.filter((v, i) => i % 97 === 0)); }";

    /// <summary>Moves the pointer over the map and compares every reading with the frame's own quadratic elements.</summary>
    public static async Task AssertReadingsAsync(IPage page, PotentialFrame frame, LabLaw law)
    {
        await page.Locator(".stage").ScrollIntoViewIfNeededAsync();
        var box = (await page.Locator(".stage").BoundingBoxAsync())!;
        int read = 0;
        foreach ((double u, double v) in new[] { (0.5, 0.4), (0.3, 0.62), (0.71, 0.3), (0.55, 0.75), (0.12, 0.5), (0.6, 0.06) })
        {
            await page.Mouse.MoveAsync(box.X + (float)(u * box.Width), box.Y + (float)(v * box.Height));
            await page.WaitForTimeoutAsync(30);
            double[] place = await page.EvaluateAsync<double[]>("[fieldsolve.map.cursor.x, fieldsolve.map.cursor.y]");
            if (ElementReader.At(frame, place[0], place[1]) is not { } expected)
            {
                continue;
            }

            read++;
            Dictionary<string, string> shown = await Shown(page);
            SameDigits(expected.Phi, shown["φ"], 5);
            double[] kx = [0], ky = [0];
            law.Evaluate([expected.Ex], [expected.Ey], kx, ky);
            SameDigits(double.Hypot(expected.Ex, expected.Ey), shown["E"].Split(" at ")[0], 4);
            double[] raw = await page.EvaluateAsync<double[]>(
                "(([x, y]) => { const m = fieldsolve.map, v = m.fields.at(m.mesh.locate(x, y)); return [v.phi, v.ex, v.ey, v.kx, v.ky, m.laws[0].error]; })", place);
            string all = string.Join(", ", new[] { expected.Phi, expected.Ex, expected.Ey, kx[0], ky[0] }.Zip(raw, (p, q) => $"{p:R} {q:R}")) + $", law {raw[5]:G3}";
            Assert.True(double.Hypot(raw[1] - expected.Ex, raw[2] - expected.Ey) <= 1e-6 * double.Hypot(expected.Ex, expected.Ey), all);
            Assert.True(double.Hypot(raw[3] - kx[0], raw[4] - ky[0]) <= 2e-6 * double.Hypot(kx[0], ky[0]), all);
            SameDigits(double.Hypot(kx[0], ky[0]), shown["K"].Split(" at ")[0], 4);
            SameDigits((expected.Ex * kx[0]) + (expected.Ey * ky[0]), shown["E·K"], 4);
            double angle = double.Parse(shown["E"].Split(" at ")[1].TrimEnd('°').Replace('−', '-'), CultureInfo.InvariantCulture);
            Assert.Equal(Math.Atan2(expected.Ey, expected.Ex) * 180 / Math.PI, angle, 0.051);
        }

        Assert.True(read >= 4, "Too few points lay on the sheet.");
    }

    private static double Number(string text)
    {
        // "93.610 mV" or "1.2·10⁻⁷"; the page writes a true minus sign.
        Match m = Regex.Match(text.Replace('−', '-'), @"^\s*(-?[0-9.]+)\s+([afpnµmkMGT]?)(V|V/m|A/m|W/m²)\s*$");
        Assert.True(m.Success, $"'{text}' is no number with a unit.");
        int place = "afpnµm kMGT".IndexOf(m.Groups[2].Value.Length == 0 ? " " : m.Groups[2].Value, StringComparison.Ordinal) - 6;
        return double.Parse(m.Groups[1].Value, CultureInfo.InvariantCulture) * Math.Pow(10, 3 * place);
    }

    private static void SameDigits(double expected, string shown, int digits)
    {
        double value = Number(shown), unit = Math.Pow(10, Math.Floor(Math.Log10(Math.Abs(expected))) - digits + 1);
        Assert.True(Math.Abs(value - expected) <= 0.501 * unit, $"The page shows {shown}, the solver has {expected:G9}.");
    }

    private static async Task<Dictionary<string, string>> Shown(IPage page)
    {
        string text = await page.Locator(".readout").InnerTextAsync();
        Dictionary<string, string> found = [];
        foreach (Match m in Regex.Matches(text.ReplaceLineEndings(" "), @"(φ|E·K|E|K|anisotropy) ([^φEKa]+?(?: at −?[0-9.]+°)?)(?=\s+(?:φ|E|K|anisotropy)|$)"))
        {
            found[m.Groups[1].Value] = m.Groups[2].Value.Trim();
        }

        return found;
    }
}
