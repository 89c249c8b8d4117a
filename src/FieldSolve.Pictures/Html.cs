using System.Net;
using System.Text;

namespace FieldSolve.Pictures;

/// <summary>Builds a page; every text that comes in is escaped.</summary>
internal sealed class Html
{
    private readonly StringBuilder text = new();

    /// <summary>The page so far.</summary>
    public override string ToString() => text.ToString();

    /// <summary>Text made safe for elements and quoted attributes.</summary>
    public static string Escaped(string value) => WebUtility.HtmlEncode(value);

    /// <summary>Markup of our own, as it stands.</summary>
    public Html Raw(string markup)
    {
        text.Append(markup).Append('\n');
        return this;
    }

    /// <summary>An element with text.</summary>
    public Html Element(string name, string content) => Raw($"<{name}>{Escaped(content)}</{name}>");

    /// <summary>A box with a list; nothing when the list is empty.</summary>
    public Html Box(string title, string kind, IReadOnlyList<string> items)
    {
        if (items.Count > 0)
        {
            Raw($"<section class=\"note {kind}\">").Element("h2", title).Raw("<ul>");
            foreach (string item in items)
            {
                Element("li", item);
            }

            Raw("</ul></section>");
        }

        return this;
    }

    /// <summary>A table; nothing when it has no rows.</summary>
    /// <param name="caption">Above the table; may be empty.</param>
    /// <param name="head">One text per column.</param>
    /// <param name="rows">Cells of each row.</param>
    /// <param name="doubtful">Rows to tint; null for none.</param>
    /// <param name="textColumns">Columns that hold sentences or names and may wrap.</param>
    public Html Table(
        string caption, IReadOnlyList<string> head, IReadOnlyList<IReadOnlyList<string>> rows, Func<int, bool>? doubtful = null, params int[] textColumns)
    {
        if (rows.Count == 0)
        {
            return this;
        }

        Raw("<div class=\"wide\"><table>");
        if (caption.Length > 0)
        {
            Element("caption", caption);
        }

        text.Append("<thead><tr>");
        for (int c = 0; c < head.Count; c++)
        {
            text.Append(textColumns.Contains(c) ? "<th class=\"left\" scope=\"col\">" : "<th scope=\"col\">").Append(Escaped(head[c])).Append("</th>");
        }

        Raw("</tr></thead><tbody>");
        for (int r = 0; r < rows.Count; r++)
        {
            text.Append(doubtful?.Invoke(r) == true ? "<tr class=\"doubt\">" : "<tr>");
            for (int c = 0; c < rows[r].Count; c++)
            {
                text.Append(textColumns.Contains(c) ? "<td class=\"text\">" : "<td>").Append(Escaped(rows[r][c])).Append("</td>");
            }

            Raw("</tr>");
        }

        return Raw("</tbody></table></div>");
    }
}
