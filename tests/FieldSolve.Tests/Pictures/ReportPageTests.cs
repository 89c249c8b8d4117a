using System.Globalization;
using System.Text.RegularExpressions;
using FieldSolve.Pictures;
using FieldSolve.Readings;

namespace FieldSolve.Tests.PicturesTests;

public sealed class ReportPageTests : IDisposable
{
    private readonly string folder = Directory.CreateTempSubdirectory("report-").FullName;

    public void Dispose() => Directory.Delete(folder, recursive: true);

    private string Page(DriveResult result, bool pictures = false)
    {
        IReadOnlyList<PictureFile> files = pictures ? DrivePictures.Write(result, folder, CancellationToken.None) : [];
        string path = Path.Combine(folder, "report.html");
        ReportPage.Write(result, files, path);
        return File.ReadAllText(path);
    }

    [Fact]
    public void The_page_is_whole_and_refers_to_nothing_outside()
    {
        string page = Page(SyntheticDrive.Make(rings: 4, mapSteps: [10]), pictures: true);
        Match policy = Regex.Match(page, "http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; img-src data:; script-src '(sha256-[^']+)'; style-src '(sha256-[^']+)'; base-uri 'none'; form-action 'none'\"");
        Assert.True(policy.Success);
        string Hash(string text) => "sha256-" + Convert.ToBase64String(System.Security.Cryptography.SHA256.HashData(System.Text.Encoding.UTF8.GetBytes(text)));
        Assert.Equal(policy.Groups[1].Value, Hash(Assert.Single(Regex.Matches(page, "<script>(.*?)</script>", RegexOptions.Singleline)).Groups[1].Value));
        Assert.Equal(policy.Groups[2].Value, Hash(Regex.Match(page, "<style>(.*?)</style>", RegexOptions.Singleline).Groups[1].Value));

        // The name spaces of SVG are names, not addresses that anything is fetched from.
        Assert.DoesNotMatch("https?:", Regex.Replace(page, "http://www\\.w3\\.org/(2000/svg|1999/xlink)", ""));
        Assert.DoesNotContain("<link", page, StringComparison.OrdinalIgnoreCase);
        Assert.DoesNotContain("@import", page, StringComparison.Ordinal);
        Assert.DoesNotMatch(@"url\((?!#|%23)", page);
        MatchCollection sources = Regex.Matches(page, "<img[^>]* src=['\"]([^'\"]{0,30})");
        Assert.Equal(14, sources.Count);
        Assert.All(sources, m => Assert.StartsWith("data:image/svg+xml,", m.Groups[1].Value, StringComparison.Ordinal));
    }

    [Fact]
    public void Text_of_the_device_file_is_escaped()
    {
        DriveResult evil = SyntheticDrive.Make("<script>alert('x')</script> & \"more\"", rings: 2, mapSteps: []);
        evil = evil with { Warnings = ["<img src=x onerror=alert(1)>"] };
        string page = Page(evil, pictures: true);
        Assert.Equal(2, Regex.Count(page, "<script"));
        Assert.DoesNotContain("<script>alert", page, StringComparison.Ordinal);
        Assert.DoesNotContain("<img src=x", page, StringComparison.Ordinal);
        Assert.Contains("<h1>&lt;script&gt;alert(&#39;x&#39;)&lt;/script&gt; &amp; &quot;more&quot;</h1>", page, StringComparison.Ordinal);
        Assert.Contains("&lt;img src=x onerror=alert(1)&gt;", page, StringComparison.Ordinal);
    }

    [Fact]
    public void Tables_show_values_at_the_digits_of_their_errors_and_mark_doubtful_rows()
    {
        DriveResult result = SyntheticDrive.Make(rings: 2, mapSteps: []);
        string page = Page(result);

        // V_along at 500 µA: 46.05 mV + 3e-5 * 46.05 mV² with an error of 46.05 nV.
        Assert.Contains("<td>46.050064 &#177; 0.000046</td>", page, StringComparison.Ordinal);
        Assert.Contains("<tr class=\"doubt\"><td>500</td>", page, StringComparison.Ordinal);
        Assert.Contains("outside-law", page, StringComparison.Ordinal);
        Assert.Contains("4.2 MV/m", page, StringComparison.Ordinal);
        Assert.Contains(result.Cautions[0].Split(';')[0], page, StringComparison.Ordinal);
        Assert.Contains(new string('a', 64), page, StringComparison.Ordinal);
    }

    [Fact]
    public void A_linear_law_shows_no_slope_and_the_page_counts_rows_that_are_not_ok()
    {
        string bent = Page(SyntheticDrive.Make(rings: 2, mapSteps: [])), linear = Page(SyntheticDrive.Make(rings: 2, mapSteps: [], linear: true));
        Assert.Contains("<td>&#8722;0.023400 &#177; 0.000023</td>".Replace("&#8722;", "−", StringComparison.Ordinal), bent, StringComparison.Ordinal);
        Assert.DoesNotContain("0.023400", linear, StringComparison.Ordinal);
        Assert.Contains("The even across voltage is −0.023400 &#177; 0.000023 /V times", bent, StringComparison.Ordinal);
        Assert.Contains("32 of 33 rows are ok. Not ok: 1 outside-law;", bent, StringComparison.Ordinal);
        Assert.DoesNotContain("transverse", bent, StringComparison.OrdinalIgnoreCase);
    }

    [Fact]
    public void The_page_does_not_depend_on_the_culture()
    {
        DriveResult result = SyntheticDrive.Make(rings: 2, mapSteps: [10]);
        string plain = Page(result, pictures: true);
        CultureInfo before = CultureInfo.CurrentCulture;
        try
        {
            CultureInfo german = (CultureInfo)CultureInfo.InvariantCulture.Clone();
            german.NumberFormat.NumberDecimalSeparator = ",";
            german.NumberFormat.NumberGroupSeparator = ".";
            CultureInfo.CurrentCulture = german;
            Assert.Equal(plain, Page(result, pictures: true));
        }
        finally
        {
            CultureInfo.CurrentCulture = before;
        }
    }

    [Fact]
    public void An_empty_run_still_gives_a_page()
    {
        DriveResult result = SyntheticDrive.Make(rings: 2, mapSteps: []);
        string page = Page(result with { Rows = [], ReversedRows = [], Levels = [], Summaries = [], Cautions = [], Warnings = [], Cancelled = true });
        Assert.Contains("cancelled", page, StringComparison.Ordinal);
        Assert.DoesNotContain("NaN", page, StringComparison.Ordinal);
        Assert.DoesNotContain("<script", page, StringComparison.Ordinal);
    }
}
