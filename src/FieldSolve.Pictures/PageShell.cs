using System.Text;
using FieldSolve.Files;

namespace FieldSolve.Pictures;

/// <summary>Head and end of a report: policy, style, title, data block and script. The parts in between are added by the page itself.</summary>
internal static class PageShell
{
    /// <summary>Everything up to the first section.</summary>
    /// <param name="page">Empty.</param>
    /// <param name="title">Title of the device.</param>
    /// <param name="kind">What was run, such as "drive".</param>
    /// <param name="line">Line below the title.</param>
    public static void Begin(Html page, string title, string kind, string line)
    {
        page.Raw("<!DOCTYPE html>").Raw("<html lang=\"en\">").Raw("<head>").Raw("<meta charset=\"utf-8\">");
        page.Raw($"<meta http-equiv=\"Content-Security-Policy\" content=\"{LiveScript.Policy}\">");
        page.Raw("<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">").Element("title", $"{title} – {kind}");
        page.Raw("<style>" + LiveScript.Style + "</style>").Raw("</head>").Raw("<body>");
        page.Raw("<header><div>").Element("h1", title).Element("p", line).Raw("</div></header>").Raw("<main>");
    }

    /// <summary>A place that the script fills with the live maps.</summary>
    public static void Maps(Html page) => page.Raw("<section class=\"live\" data-maps hidden></section>");

    /// <summary>A place that the script fills with a measured map, the computed one and their difference.</summary>
    public static void Comparison(Html page) => page.Raw("<section class=\"live\" data-comparison hidden></section>");

    /// <summary>A place that the script fills with a live chart.</summary>
    /// <param name="page">The page.</param>
    /// <param name="id">Name of the chart, of letters, digits and hyphens.</param>
    public static void Chart(Html page, string id) => page.Raw($"<section class=\"live\" data-chart=\"{id}\" hidden></section>");

    /// <summary>A place that the script fills with the device coloured by its contacts' shares.</summary>
    public static void Share(Html page) => page.Raw("<section class=\"live\" data-share hidden></section>");

    /// <summary>Answers in words: a list of sentences that begin with a capital letter.</summary>
    /// <param name="page">The page.</param>
    /// <param name="sentences">One or two sentences each.</param>
    public static void Answer(Html page, IEnumerable<string> sentences)
    {
        page.Raw("<section class=\"answer\">").Element("h2", "Answer").Raw("<ul>");
        foreach (string sentence in sentences.Where(s => s.Length > 0))
        {
            page.Element("li", char.ToUpperInvariant(sentence[0]) + sentence[1..]);
        }

        page.Raw("</ul></section>");
    }

    /// <summary>Adds the footer, the data and the script, and writes the file.</summary>
    /// <param name="page">The page with all its sections.</param>
    /// <param name="data">What the script shows; null leaves out data and script.</param>
    /// <param name="footer">Last line.</param>
    /// <param name="path">Target file.</param>
    public static void End(Html page, LiveData? data, string footer, string path)
    {
        page.Raw("</main>").Raw("<footer>").Element("p", footer).Raw("</footer>");
        WholeFile.Write(path, stream =>
        {
            void Add(string text) => stream.Write(Encoding.UTF8.GetBytes(text));
            Add(page.ToString());
            if (data is not null)
            {
                // A block of another type is data: it is neither run nor bound by the policy.
                Add("<script type=\"application/json\" id=\"data\">");
                data.Write(stream);
                Add("</script>\n<script>" + LiveScript.Script + "</script>\n");
            }

            Add("</body>\n</html>\n");
        });
    }
}
